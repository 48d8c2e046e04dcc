import type { Mu, SpatialHamiltonian } from '../../hamiltonian';
import { planeOf, type TripletOperator } from '../../hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs } from '../../integrals/integral-set';
import type { PairsKind } from './kinds';

/**
 * One array of unique coefficients of the sparse form. A coefficient stands for all equal ones that the permutation
 * symmetries make of it; its weight is their LCU one-norm, times |value|.
 */
export interface Section {
  readonly name: string;
  /** Part of λ that the weight goes to, and what fraction of it: two parts where one value serves both. */
  readonly shares: readonly (readonly [part: string, fraction: number])[];
  readonly oneBody: boolean;
  readonly spin: boolean;
  readonly values: Float64Array;
  /** Weight of coefficient i = |values[i]| · times(row, column), rows and columns as the layout has them. */
  readonly layout: Layout;
}

type Layout =
  /** Lower triangle of a matrix over `scale.length` pairs; `diagonal` and `off` multiply scale_P · scale_R. */
  | {
      readonly kind: 'triangle';
      readonly scale: Float64Array;
      readonly diagonal: number;
      readonly off: number;
    }
  /** Rows of scale.length; multiplied by scale_column. */
  | { readonly kind: 'rows'; readonly scale: Float64Array }
  /** n×n plane; only p ≥ q (or p > q) counts. */
  | { readonly kind: 'plane'; readonly n: number; readonly diagonal: number; readonly off: number };

/** Calls `visit(weight, index)` for each unique coefficient in [from, to) of the section's rows. */
export function visitRows(
  section: Section,
  from: number,
  to: number,
  visit: (weight: number, index: number) => void,
): void {
  const { values, layout } = section;
  if (layout.kind === 'rows') {
    const { scale } = layout;
    const width = scale.length;
    for (let i = from, at = from * width; i < to; i++) {
      for (let j = 0; j < width; j++, at++) visit(Math.abs(values[at]!) * scale[j]!, at);
    }
    return;
  }
  if (layout.kind === 'plane') {
    const { n, diagonal, off } = layout;
    for (let p = from; p < to; p++) {
      for (let q = 0; q < p; q++) visit(Math.abs(values[p * n + q]!) * off, p * n + q);
      if (diagonal > 0) visit(Math.abs(values[p * n + p]!) * diagonal, p * n + p);
    }
    return;
  }
  const { scale, diagonal, off } = layout;
  for (let p = from, at = (from * (from + 1)) / 2; p < to; p++) {
    const row = off * scale[p]!;
    for (let r = 0; r < p; r++, at++) visit(Math.abs(values[at]!) * row * scale[r]!, at);
    visit(Math.abs(values[at]!) * diagonal * scale[p]! * scale[p]!, at);
    at++;
  }
}

export function numRows({ values, layout }: Section): number {
  if (layout.kind === 'plane') return layout.n;
  return layout.kind === 'triangle' ? layout.scale.length : values.length / layout.scale.length;
}

/**
 * κ and ½g as sections.
 *
 * Weights: each element of g over Hermitian pairs multiplies products of row operators (T_pq + T_qp, or
 * i(T_pq − T_qp)) whose one-norm is m = 2, or m = 1 for p = q. ½ Σ over ordered pairs of elements gives ½·m² on the
 * diagonal (I, I) and m_I·m_J for I ≠ J.
 */
export function sparseSections(h: SpatialHamiltonian, kappa: TripletOperator): Section[] {
  const n = h.orbitals;
  const nanti = numAntisymmetricPairs(n);
  const npair = numSymmetricPairs(n);
  const multiplicity = new Float64Array(npair).fill(2);
  for (let p = 0, i = 0; p < n; p++, i += p + 1) multiplicity[i] = 1;
  const sections: Section[] = [
    {
      name: 'κ0',
      shares: [['one-body.charge', 1]],
      oneBody: true,
      spin: false,
      values: planeOf(kappa, 0),
      layout: { kind: 'plane', n, diagonal: 1, off: 2 },
    },
  ];
  for (const k of [1, 2, 3] as const) {
    sections.push({
      name: `κ${k}`,
      shares: [['one-body.spin', 1]],
      oneBody: true,
      spin: true,
      values: planeOf(kappa, k),
      layout: { kind: 'plane', n, diagonal: 0, off: 2 },
    });
  }
  const { charge, spinOrbit, spinSpin } = h.g;
  if (charge) {
    sections.push({
      name: 'charge',
      shares: [['coulomb', 1]],
      oneBody: false,
      spin: false,
      values: charge,
      layout: { kind: 'triangle', scale: multiplicity, diagonal: 0.5, off: 1 },
    });
  }
  if (spinOrbit) {
    const add = (name: string, values: Float64Array, same: number, other: number) => {
      const total = same + Math.abs(other);
      if (total === 0) return;
      sections.push({
        name,
        shares: (
          [
            ['same-orbit', same / total],
            ['other-orbit', Math.abs(other) / total],
          ] as const
        ).filter(([, fraction]) => fraction > 0),
        oneBody: false,
        spin: true,
        values: values.subarray(0, 3 * nanti * npair),
        // An antisymmetric pair counts 2.
        layout: { kind: 'rows', scale: multiplicity.map((m) => 2 * m * total) },
      });
    };
    // Where the other-orbit array is a multiple of the same-orbit one, one stored value serves both.
    const { same, other } = spinOrbit;
    if (other instanceof Float64Array) {
      add('same', same, 1, 0);
      add('other', other, 0, 1);
    } else {
      add('same', same, 1, other.timesSame);
    }
  }
  if (spinSpin) {
    const length = spinSpin.length / 6;
    for (let component = 0; component < 6; component++) {
      const diagonal = component === 0 || component === 3 || component === 5;
      sections.push({
        name: `spin-spin ${component}`,
        shares: [['spin-spin', 1]],
        oneBody: false,
        spin: true,
        values: spinSpin.subarray(component * length, (component + 1) * length),
        // k ≠ l: the value also stands for lk, and for P and R exchanged.
        layout: diagonal
          ? { kind: 'triangle', scale: multiplicity, diagonal: 0.5, off: 1 }
          : { kind: 'triangle', scale: multiplicity, diagonal: 1, off: 2 },
      });
    }
  }
  return sections;
}

/** x ≤ y of the components xx, xy, xz, yy, yz, zz. */
const SPIN_SPIN: readonly (readonly [Mu, Mu])[] = [
  [1, 1],
  [1, 2],
  [1, 3],
  [2, 2],
  [2, 3],
  [3, 3],
];

/** Kinds of a section's coefficients, one for each component that its rows run through. */
export function kindsOf(section: Section): PairsKind[] {
  const { name } = section;
  const kind = (antisymmetric: boolean, mu: Mu, nu: Mu | null): PairsKind => ({
    form: 'pairs',
    antisymmetric,
    mu,
    nu,
    shared: false,
    exchanged: !antisymmetric && mu !== 0 && nu !== null && nu !== 0 && mu !== nu,
  });
  const components = [1, 2, 3] as const;
  if (section.oneBody) {
    const mu = Number(name.slice(-1)) as Mu;
    return [kind(mu !== 0, mu, null)];
  }
  if (name === 'charge') return [kind(false, 0, 0)];
  if (name === 'same') {
    const shared = section.shares.length > 1;
    return components.map((k) => ({ ...kind(true, k, 0), shared }));
  }
  if (name === 'other') return components.map((k) => kind(true, 0, k));
  const [k, l] = SPIN_SPIN[Number(name.slice(-1))]!;
  return [kind(false, k, l)];
}

import type { Mu } from '../hamiltonian';
import { numRows, type Section, visitRows } from './sparse-sections';

/** Sizes of a sparse encoding. */
export interface TermSizes {
  readonly orbitals: number;
  /** Unique coefficients. */
  readonly coefficients: number;
  /** Any coefficient carries spin. */
  readonly spin: boolean;
  /** The second element of a coefficient has a component of its own, apart from the shared spin–orbit ones. */
  readonly secondComponent: boolean;
  /** One value may stand for both ways of placing two components. */
  readonly exchanged: boolean;
  /** Part of λ in coefficients that serve both spin–orbit kinds at once. */
  readonly sharedPart: number;
  /** Of these, the part that acts as spin–other-orbit. */
  readonly otherShare: number;
}

/**
 * What a group of coefficients multiplies. With the row operators of the triplet form (core/circuit/triplet/rows.ts)
 * on basis vectors, R(kind, μ; p, q) = ¼ Σ_{σ,x} (−1)^f iγ_{pσx} γ_{q,σ⊕s,x⊕r}, a coefficient stands for
 * weight · sign · ½(R_I R_J + R_J R_I), or weight · sign · R_I where it is of one body.
 */
export interface TermKind {
  /** I is of an antisymmetric plane; J never is. */
  readonly antisymmetric: boolean;
  /** Spin component of I. */
  readonly mu: Mu;
  /** Spin component of J; null: a one-body term. */
  readonly nu: Mu | null;
  /**
   * One value for both spin–orbit kinds: (A μ)(S 0) with weight 1 − `otherShare`, (A 0)(S μ) with `otherShare` and
   * `otherSign`.
   */
  readonly shared: boolean;
  /** One value for both ways of placing two components: half (S μ)(S ν), half (S ν)(S μ). */
  readonly exchanged: boolean;
}

/** All unique coefficients of a sparse encoding: H − constant = Σ of what they stand for, λ = Σ weights. */
export interface SparseProgram {
  readonly orbitals: number;
  /** Hartree. */
  readonly constant: number;
  readonly kinds: readonly TermKind[];
  /** Position in `kinds` of each coefficient. */
  readonly kindOf: Uint8Array;
  /** p, q, r, s of each coefficient, four in a row; r = s = 0 where it is of one body. */
  readonly orbitalsOf: Uint16Array;
  /** Positive, hartree. */
  readonly weights: Float64Array;
  /** 1 where the sign is −1. */
  readonly negative: Uint8Array;
  /** Part of a shared coefficient that acts as spin–other-orbit, between 0 and 1. */
  readonly otherShare: number;
  readonly otherSign: 1 | -1;
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

/** Reads the coefficients heavier than the cutoff out of the sections. */
export function sparseProgram(
  orbitals: number,
  constant: number,
  sections: readonly Section[],
  cutoff: number,
  timesSame: number,
): SparseProgram {
  const kinds: TermKind[] = [];
  const kindOf: number[] = [];
  const orbitalsOf: number[] = [];
  const weights: number[] = [];
  const negative: number[] = [];
  for (const section of sections) {
    const groups = kindsOf(section).map((kind) => {
      kinds.push(kind);
      return kinds.length - 1;
    });
    for (let row = 0; row < numRows(section); row++) {
      visitRows(section, row, row + 1, (weight, index) => {
        if (weight <= cutoff) return;
        const at = placeOf(section, orbitals, row, index);
        weights.push(weight);
        negative.push(section.values[index]! < 0 ? 1 : 0);
        kindOf.push(groups[at.component]!);
        orbitalsOf.push(at.p, at.q, at.r, at.s);
      });
    }
  }
  return {
    orbitals,
    constant,
    kinds,
    kindOf: Uint8Array.from(kindOf),
    orbitalsOf: Uint16Array.from(orbitalsOf),
    weights: Float64Array.from(weights),
    negative: Uint8Array.from(negative),
    otherShare: Math.abs(timesSame) / (1 + Math.abs(timesSame)),
    otherSign: timesSame < 0 ? -1 : 1,
  };
}

/** Kinds of a section's coefficients, one for each component that its rows run through. */
export function kindsOf(section: Section): TermKind[] {
  const { name } = section;
  const kind = (antisymmetric: boolean, mu: Mu, nu: Mu | null): TermKind => ({
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

interface Place {
  readonly component: number;
  readonly p: number;
  readonly q: number;
  readonly r: number;
  readonly s: number;
}

/** Orbitals of the value at `index`, in row `row` of the section. */
function placeOf({ layout }: Section, n: number, row: number, index: number): Place {
  if (layout.kind === 'plane') return { component: 0, p: row, q: index - row * n, r: 0, s: 0 };
  if (layout.kind === 'triangle') {
    const [p, q] = symmetricPairAt(row);
    const [r, s] = symmetricPairAt(index - (row * (row + 1)) / 2);
    return { component: 0, p, q, r, s };
  }
  const width = layout.scale.length;
  const pairs = (n * (n - 1)) / 2;
  const pair = row % pairs;
  // Antisymmetric pair p(p−1)/2 + q is symmetric pair (p−1)p/2 + q of p − 1.
  const [p, q] = symmetricPairAt(pair);
  const [r, s] = symmetricPairAt(index - row * width);
  return { component: Math.floor(row / pairs), p: p + 1, q, r, s };
}

/** p ≥ q with p(p+1)/2 + q = index. */
function symmetricPairAt(index: number): [number, number] {
  let p = Math.floor((Math.sqrt(8 * index + 1) - 1) / 2);
  if ((p * (p + 1)) / 2 > index) p--;
  else if (((p + 1) * (p + 2)) / 2 <= index) p++;
  return [p, index - (p * (p + 1)) / 2];
}

/** The sizes that a program's circuit depends on. */
export function termSizes(program: SparseProgram): TermSizes {
  const { kinds, kindOf, weights } = program;
  const used = new Set(kindOf);
  const any = (holds: (kind: TermKind) => boolean) => kinds.some((kind, i) => used.has(i) && holds(kind));
  let total = 0;
  let shared = 0;
  for (const [i, weight] of weights.entries()) {
    total += weight;
    if (kinds[kindOf[i]!]!.shared) shared += weight;
  }
  return {
    orbitals: program.orbitals,
    coefficients: weights.length,
    spin: any((kind) => kind.antisymmetric || kind.mu !== 0 || (kind.nu ?? 0) !== 0),
    secondComponent: any((kind) => (kind.nu ?? 0) !== 0),
    exchanged: any((kind) => kind.exchanged),
    sharedPart: total > 0 ? shared / total : 0,
    otherShare: program.otherShare,
  };
}

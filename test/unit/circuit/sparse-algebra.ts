import type { PairsKind, SparseProgram, StringsKind } from '../../../core/encode';
import type { Mu } from '../../../core/hamiltonian/operators';
import { addScaled, type Dense, majorana, times, triplet, zeros } from './majorana-algebra';

/**
 * The row operators straight from triplet excitations: S: ½(T_pq + T_qp) − δ_pq δ_μ0, A: (i/2)(T_pq − T_qp).
 */
function rowOperator(orbitals: number, antisymmetric: boolean, mu: Mu, p: number, q: number): Dense {
  const out = zeros(4 ** orbitals);
  const [re, im, back] = antisymmetric ? ([0, 0.5, -1] as const) : ([0.5, 0, 1] as const);
  addScaled(out, triplet(orbitals, mu, p, q), re, im);
  addScaled(out, triplet(orbitals, mu, q, p), back * re, back * im);
  if (!antisymmetric && mu === 0 && p === q) for (let i = 0; i < out.n; i++) out.re[i * out.n + i]! -= 1;
  return out;
}

type Factors = readonly [antisymmetric: boolean, mu: Mu];

/** What a coefficient of weight 1 and sign + stands for, as products of row operators with their shares. */
function products(kind: PairsKind, otherShare: number, otherSign: number): [number, Factors, Factors][] {
  const nu = kind.nu ?? 0;
  if (kind.shared) {
    return [
      [1 - otherShare, [true, kind.mu], [false, 0]],
      [otherShare * otherSign, [true, 0], [false, kind.mu]],
    ];
  }
  if (kind.exchanged) {
    return [
      [0.5, [false, kind.mu], [false, nu]],
      [0.5, [false, nu], [false, kind.mu]],
    ];
  }
  return [[1, [kind.antisymmetric, kind.mu], [false, nu]]];
}

/** The eight products that a row of strings averages over, each written down by itself. */
function addStrings(
  out: Dense,
  orbitals: number,
  { flags }: StringsKind,
  [p, q, r, s]: readonly [number, number, number, number],
  weight: number,
): void {
  const [s1, s2, t, r1, r2] = [0, 1, 2, 3, 4].map((bit) => (flags >>> bit) & 1) as [
    number,
    number,
    number,
    number,
    number,
  ];
  const gamma = (orbital: number, spin: number, kind: number) =>
    majorana(2 * orbitals, 2 * orbital + (spin & 1), (kind & 1) as 0 | 1);
  for (let i = 0; i < 8; i++) {
    const [sigma, x, y] = [i & 1, (i >> 1) & 1, (i >> 2) & 1] as [number, number, number];
    const odd = ((s1 ^ s2 ^ r1 ^ r2) & sigma) ^ (r1 & x) ^ (r2 & y);
    const first = times(gamma(p, sigma, x), gamma(q, sigma ^ s1, x ^ r1));
    const second = times(gamma(r, sigma ^ t, y), gamma(s, sigma ^ t ^ s2, y ^ r2));
    // i² = −1
    addScaled(out, times(first, second), ((odd ? 1 : -1) * weight) / 8);
  }
}

/** H − c of a program, dense on Fock space. */
export function sparseOperator(program: SparseProgram): Dense {
  const n = program.orbitals;
  const out = zeros(4 ** n);
  for (const [i, weight] of program.weights.entries()) {
    if (weight === 0) continue;
    const kind = program.kinds[program.kindOf[i]!]!;
    const [p, q, r, s] = program.orbitalsOf.subarray(4 * i, 4 * i + 4);
    const signed = program.negative[i] ? -weight : weight;
    if (kind.form === 'strings') {
      addStrings(out, n, kind, [p!, q!, r!, s!], signed);
      continue;
    }
    if (kind.nu === null) {
      addScaled(out, rowOperator(n, kind.antisymmetric, kind.mu, p!, q!), signed);
      continue;
    }
    for (const [share, first, second] of products(kind, program.otherShare, program.otherSign)) {
      const a = rowOperator(n, ...first, p!, q!);
      const b = rowOperator(n, ...second, r!, s!);
      addScaled(out, times(a, b), (share * signed) / 2);
      addScaled(out, times(b, a), (share * signed) / 2);
    }
  }
  return out;
}

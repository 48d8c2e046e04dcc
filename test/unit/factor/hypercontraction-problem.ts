import type { FitProblem } from '../../../core/factor/hypercontraction/problem';
import { fitProblem } from '../../../core/factor/hypercontraction/problem';
import { fromStoredForm, type SpatialHamiltonian, zeroOperator } from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';

/** Numbers in (−1, 1) from a seed. */
export function randomNumbers(seed: number): () => number {
  let a = seed;
  return () => {
    a = (a + 0x6d2b79f5) | 0;
    let t = Math.imul(a ^ (a >>> 15), 1 | a);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 2147483648 - 1;
  };
}

export function randomSymmetric(n: number, random: () => number): Float64Array {
  const a = new Float64Array(n * n);
  for (let p = 0; p < n; p++) for (let q = 0; q <= p; q++) a[p * n + q] = a[q * n + p] = random();
  return a;
}

/** M random unit vectors, a symmetric ζ and, if asked for, a symmetric ξ. */
export function randomPoint(n: number, count: number, shifted: boolean, random: () => number) {
  const vectors = Float64Array.from({ length: count * n }, random);
  for (let m = 0; m < count; m++) {
    const row = vectors.subarray(m * n, (m + 1) * n);
    const norm = Math.hypot(...row);
    for (let p = 0; p < n; p++) row[p]! /= norm;
  }
  const zeta = randomSymmetric(count, random);
  return { count, vectors, zeta, shift: shifted ? randomSymmetric(n, random) : null };
}

/**
 * A spin-free Hamiltonian with random h and (pq|rs) = Σ_t s_t L_pq L_rs, positive semidefinite unless `indefinite`.
 * It has no spatial symmetry.
 */
export function randomHamiltonian(
  n: number,
  electrons: number,
  random: () => number,
  indefinite = false,
): SpatialHamiltonian {
  const npair = (n * (n + 1)) / 2;
  const charge = new Float64Array((npair * (npair + 1)) / 2);
  for (let t = 0; t < npair; t++) {
    const sign = indefinite && t % 3 === 2 ? -1 : 1;
    const l = randomSymmetric(n, random);
    const pairs: number[] = [];
    for (let p = 0; p < n; p++) for (let q = 0; q <= p; q++) pairs.push((0.5 / (t + 1)) * l[p * n + q]!);
    for (let a = 0, i = 0; a < npair; a++)
      for (let b = 0; b <= a; b++, i++) charge[i]! += sign * pairs[a]! * pairs[b]!;
  }
  const h = zeroOperator('even', n);
  h.planes.set(randomSymmetric(n, random));
  return fromStoredForm({
    orbitals: n,
    electrons,
    terms: ['sf'],
    constant: 0.7,
    h,
    g: { charge, spinOrbit: null, spinSpin: null },
  });
}

/** The same as a problem with nothing left out. */
export function problemOf(
  h: SpatialHamiltonian,
  occupations: ArrayLike<number>,
  emphasis = 0,
): Promise<FitProblem> {
  return fitProblem(h, occupations, { emphasis, leftOut: 0 }, inlineContext());
}

/** (pq|rs) of a pairs triangle. */
export function integral(charge: Float64Array, p: number, q: number, r: number, s: number): number {
  const pair = (i: number, j: number) => (i >= j ? (i * (i + 1)) / 2 + j : (j * (j + 1)) / 2 + i);
  return charge[pair(pair(p, q), pair(r, s))]!;
}

/** Σ over all four indices of f². */
export function squareOverIndices(
  n: number,
  f: (p: number, q: number, r: number, s: number) => number,
): number {
  let sum = 0;
  for (let p = 0; p < n; p++)
    for (let q = 0; q < n; q++)
      for (let r = 0; r < n; r++) for (let s = 0; s < n; s++) sum += f(p, q, r, s) ** 2;
  return sum;
}

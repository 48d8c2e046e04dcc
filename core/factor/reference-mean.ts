import { planeInto, weightedTraceOfPairs } from './elements';
import type { SquareFactors } from './factors';

/**
 * ⟨(L⁰ − τ)²⟩ of the charge plane of a factor, in the state of which only the spin-averaged occupations are known
 * (generalised Wick theorem, density n_p/2 for each spin): (Σ_p n_p L_pp − τ)² + Σ_pq n_p (1 − n_q/2) L_pq². Exact for a closed shell.
 *
 * @param trace - τ
 * @param occupations - n numbers 0…2
 */
export function referenceSquare(
  block: SquareFactors,
  t: number,
  trace: number,
  occupations: ArrayLike<number>,
): number {
  const { n, dim, vectors } = block;
  const plane = new Float64Array(n * n);
  planeInto(plane, 0, vectors, t * dim, n, true);
  let spread = 0;
  for (let p = 0; p < n; p++) {
    if (occupations[p] === 0) continue;
    for (let q = 0; q < n; q++)
      spread += occupations[p]! * (1 - occupations[q]! / 2) * plane[p * n + q]! ** 2;
  }
  return (weightedTraceOfPairs(vectors, t * dim, n, occupations) - trace) ** 2 + spread;
}

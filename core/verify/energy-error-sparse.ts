import type { SparseProgram } from '../encode';

/**
 * Bounds the operator norm of encoded − given on Fock space, and so in every sector: each row stands for its weight times
 * an operator of norm ≤ 1, and a change of the share moves weight from one such operator to another.
 *
 * @param encoded - with the same rows in the same order, as `encodedSparseProgram` gives them
 * @returns hartree: the sum over rows, and the root of the sum of their squares, the size to expect of independent rows
 */
export function realisedSparseRounding(
  given: SparseProgram,
  encoded: SparseProgram,
): { readonly bound: number; readonly typical: number } {
  const share = Math.abs(encoded.otherShare - given.otherShare);
  let [bound, squares] = [0, 0];
  for (const [i, weight] of given.weights.entries()) {
    const kind = given.kinds[given.kindOf[i]!]!;
    const moved = kind.form === 'pairs' && kind.shared ? 2 * weight * share : 0;
    const change = Math.abs(encoded.weights[i]! - weight) + moved;
    bound += change;
    squares += change * change;
  }
  return { bound, typical: Math.sqrt(squares) };
}

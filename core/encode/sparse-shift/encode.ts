import {
  type SpatialHamiltonian,
  type SymmetryShift,
  shiftedHamiltonian,
  zeroOperator,
} from '../../hamiltonian';
import type { JobContext } from '../../job';
import type { Encoding } from '../encoding';
import { encodeSparse } from '../sparse/encode';
import type { VariantName } from '../variant';
import { sparseShift } from './optimise';

/**
 * Sparse encoding of H + ξ (N̂ − η) with ξ chosen for the least λ.
 *
 * Spin components of ξ end the sharing of one array between the two spin–orbit parts, which costs coefficients; they are
 * kept where λ times the number of coefficients, what all look-ups together go with, falls. An encoding that does not
 * lower λ gives way to the unshifted one, with a note.
 */
export async function encodeShiftedSparse(
  h: SpatialHamiltonian,
  variant: VariantName,
  threshold: number,
  ctx: JobContext,
): Promise<Encoding> {
  const n = h.orbitals;
  const unshifted = await encodeSparse(h, variant, threshold, ctx);
  const whole = await sparseShift(h, ctx);
  const charge = zeroOperator('even', n);
  charge.planes.set(whole.operator.planes.subarray(0, n * n));
  const encodeWith = async (shift: SymmetryShift) => ({
    ...(await encodeSparse(shiftedHamiltonian(h, shift), variant, threshold, ctx)),
    symmetryShift: () => shift,
  });
  let best = await encodeWith({ scalar: whole.scalar, operator: charge });
  if (whole.operator.planes.subarray(n * n).some((value) => value !== 0)) {
    const withSpin = await encodeWith(whole);
    if (work(withSpin) < work(best)) best = withSpin;
  }
  if (best.lambda.total < unshifted.lambda.total) return best;
  const none = { scalar: 0, operator: zeroOperator('even', n) };
  const note = 'no symmetry shift lowers λ of the sparse form here: ξ = 0';
  return { ...unshifted, symmetryShift: () => none, notes: [...(unshifted.notes ?? []), note] };
}

const work = ({ lambda, shape }: Encoding): number => lambda.total * shape.rows;

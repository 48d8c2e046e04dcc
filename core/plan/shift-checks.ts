import type { Encoding } from '../encode';
import { type SpinHamiltonian, shiftedHamiltonian, shiftedSpinorHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import { exactSpectrum } from '../verify';
import { type Check, check } from './evidence';

/**
 * What the symmetry shifts of an encoding do outside the electrons' own sector: its levels with one electron less (one
 * more where there is none) beside those of H + ξ (N̂ − η), ξ the operator that the encoding reports, and how far they lie
 * from those of H. None for an encoding without shifts.
 *
 * @param arithmetic - hartree, of two diagonalisations
 */
export async function shiftChecks(
  name: string,
  h: SpinHamiltonian,
  encoding: Encoding,
  states: number,
  arithmetic: number,
  context: JobContext,
): Promise<Check[]> {
  const shifted = writtenOut(h, encoding);
  if (encoding.variant.shift === 'none' || !shifted) return [];
  const electrons = h.electrons > 0 ? h.electrons - 1 : 1;
  const levels = async (of: SpinHamiltonian) => exactSpectrum(of, { states, electrons }, context);
  const [plain, expected, found] = [await levels(h), await levels(shifted), await levels(encoding.rebuild())];
  const tolerance =
    encoding.residual.oneNormBound + arithmetic + plain.errorBound + expected.errorBound + found.errorBound;
  const where = `with ${electrons} electron${electrons === 1 ? '' : 's'}`;
  return [
    check(
      `${name}: encoded against H + ξ (N̂ − η) ${where}, largest difference of a level`,
      apart(found.values, expected.values),
      0,
      tolerance,
      'ξ of all shifts written out as a one-body operator and put into the tensors of H',
    ),
    check(
      `${name}: how far the shift moves a level ${where}`,
      apart(found.values, plain.values),
      apart(expected.values, plain.values),
      tolerance,
      'H + ξ (N̂ − η) beside H: a shift changes nothing in its own sector alone',
    ),
  ];
}

function writtenOut(h: SpinHamiltonian, { symmetryShift, spinorShift }: Encoding): SpinHamiltonian | null {
  if (h.kind === 'spatial') return symmetryShift ? shiftedHamiltonian(h, symmetryShift()) : null;
  return spinorShift ? shiftedSpinorHamiltonian(h, spinorShift()) : null;
}

function apart(a: Float64Array, b: Float64Array): number {
  return a.reduce((most, x, i) => Math.max(most, Math.abs(x - b[i]!)), 0);
}

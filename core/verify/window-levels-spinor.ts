import type { SpinorProgram } from '../encode';
import { type OrbitalWindow, type SpinHamiltonian, spinorFromStoredForm } from '../hamiltonian';
import type { JobContext } from '../job';
import { rowsMatrix } from './spinor-rows';
import { WindowSum } from './window-levels';

/** Items between two checkpoints. */
const AT_ONCE = 4;

/**
 * The Hamiltonian that a spinor program stands for, restricted to a window of orbitals as windowOfProgram does it for
 * triplet programs; over the program's modes.
 *
 * @param window - orbitals 0-based. A window of all orbitals rebuilds the whole Hamiltonian of a small system.
 */
export async function windowOfSpinorProgram(
  program: SpinorProgram,
  window: OrbitalWindow,
  context: JobContext,
): Promise<SpinHamiltonian> {
  const target = new WindowSum(program.orbitals, window);
  target.constant += program.constant;
  for (const item of program.oneBody) target.addOneBody(rowsMatrix(program, item, 0, 0).matrix);
  for (const [t, item] of program.items.entries()) {
    if (t % AT_ONCE === 0) {
      context.report('window of the encoding', t, program.items.length);
      await context.checkpoint();
    }
    for (const [face, { sign, lambda }] of item.faces.entries()) {
      const weight = item.rows.reduce((sum, row) => sum + row.faces[face]!.weight, 0);
      if (lambda === 0 || weight === 0) continue;
      for (const square of item.paired ? [0, 1] : [0]) {
        const share = (sign * (square === 0 ? 1 : -1) * lambda) / (item.paired ? 2 : 1);
        target.addSquare(rowsMatrix(program, item, face, square).matrix, (4 * share) / weight ** 2);
        target.constant -= share;
      }
    }
  }
  const { constant, h, g } = target;
  return spinorFromStoredForm({
    spinors: 2 * window.orbitals.length,
    electrons: window.electrons,
    constant,
    h,
    g,
  });
}

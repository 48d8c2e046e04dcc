import type { SpinHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import type { Form } from './fock';
import { lowestLevels } from './levels';
import { sectorMatrix } from './sector-matrix';
import { splitSector } from './split';

export interface SpectrumOptions {
  /** @defaultValue those of the Hamiltonian */
  readonly electrons?: number;
  /** How many of the lowest levels, counted with multiplicity; fewer where the sector is smaller. @defaultValue 6 */
  readonly states?: number;
  /** Which form the matrix is built from. @defaultValue 'product' */
  readonly form?: Form;
}

export interface Spectrum {
  /** Ascending, hartree, constant included. */
  readonly values: Float64Array;
  /** Determinants in the sector. */
  readonly dim: number;
  /** Unconnected blocks that the sector falls into. */
  readonly blocks: number;
  /** What numerical zeros left out and the iteration's residuals may shift a value by, hartree. */
  readonly errorBound: number;
}

/** Lowest eigenvalues of H in the sector of fixed electron number, all spin projections. */
export async function exactSpectrum(
  hamiltonian: SpinHamiltonian,
  options: SpectrumOptions,
  context: JobContext,
): Promise<Spectrum> {
  const matrix = await sectorMatrix(
    hamiltonian,
    options.electrons ?? hamiltonian.electrons,
    options.form ?? 'product',
    context,
  );
  const { blocks, bound } = await splitSector(matrix, context);
  const levels = await lowestLevels(blocks, Math.min(options.states ?? 6, matrix.dim), context);
  return {
    values: levels.values,
    dim: matrix.dim,
    blocks: blocks.length,
    errorBound: bound + levels.residual,
  };
}

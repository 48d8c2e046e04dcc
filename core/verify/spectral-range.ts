import type { SpinHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import type { Block } from './blocks';
import { determinantEnergies, extremeDeterminant } from './determinant-energy';
import { binomial } from './determinants';
import { lowestLevels } from './levels';
import { sectorMatrix } from './sector-matrix';
import { splitSector } from './split';

/** Half the spectral range (E_max − E_min)/2, hartree: the least λ that any block encoding of H can have. */
export interface SpectralRange {
  /** The value where it is exact, else null. */
  readonly value: number | null;
  readonly kind: 'exact' | 'bracket';
  /** `eta`: states of the Hamiltonian's electron number; `all`: the whole Fock space. */
  readonly sector: 'eta' | 'all';
  /** Rigorous lower bound; the value itself where exact. */
  readonly low: number | null;
  /** Rigorous upper bound, null where none is known here (every λ of an encoding is one). */
  readonly high: number | null;
}

export interface SpectralRangeOptions {
  /** Largest number of determinants, over all sectors looked at, that is diagonalised. @defaultValue 13000 */
  readonly maxDeterminants?: number;
}

/**
 * Half the spectral range of H: exact where the sector (or all of them) fits, else bracketed from below by the
 * energies of two determinants, which the variational principle makes rigorous.
 */
export async function spectralRange(
  hamiltonian: SpinHamiltonian,
  sector: 'eta' | 'all',
  options: SpectralRangeOptions,
  context: JobContext,
): Promise<SpectralRange> {
  const modes = hamiltonian.kind === 'spatial' ? 2 * hamiltonian.orbitals : hamiltonian.spinors;
  const electrons =
    sector === 'eta' ? [hamiltonian.electrons] : Array.from({ length: modes + 1 }, (_, count) => count);
  const size =
    modes > 32 ? Number.POSITIVE_INFINITY : electrons.reduce((sum, eta) => sum + binomial(modes, eta), 0);
  if (size > (options.maxDeterminants ?? 13_000)) return bracket(hamiltonian, sector);
  let min = Number.POSITIVE_INFINITY;
  let max = Number.NEGATIVE_INFINITY;
  for (const [i, eta] of electrons.entries()) {
    context.report('spectral range', i, electrons.length);
    const matrix = await sectorMatrix(hamiltonian, eta, 'product', context);
    const { blocks } = await splitSector(matrix, context);
    const lowest = await lowestLevels(blocks, 1, context);
    const highest = await lowestLevels(blocks.map(negated), 1, context);
    min = Math.min(min, lowest.values[0]!);
    max = Math.max(max, -highest.values[0]!);
  }
  context.report('spectral range', electrons.length, electrons.length);
  const value = Math.max(0, (max - min) / 2);
  return { value, kind: 'exact', sector, low: value, high: value };
}

function bracket(hamiltonian: SpinHamiltonian, sector: 'eta' | 'all'): SpectralRange {
  const energies = determinantEnergies(hamiltonian);
  const electrons = sector === 'eta' ? hamiltonian.electrons : null;
  const lowest = extremeDeterminant(energies, electrons, 1);
  const highest = extremeDeterminant(energies, electrons, -1);
  const low = Math.max(0, (highest.energy - lowest.energy) / 2);
  return { value: null, kind: 'bracket', sector, low, high: null };
}

function negated(block: Block): Block {
  const turned = (plane: Float64Array) => plane.map((x) => -x);
  return { ...block, diagonal: turned(block.diagonal), re: turned(block.re), im: turned(block.im) };
}

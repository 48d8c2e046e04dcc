import type { SpinHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import { type SpectralRange, spectralRange } from '../verify';
import type { VariantEstimate } from './comparison';

type Sector = SpectralRange['sector'];

/** Half the spectral range of one Hamiltonian, below which no λ can lie; each sector is computed once. */
export class Floors {
  readonly #hamiltonian: SpinHamiltonian;
  readonly #maxDeterminants: number;
  readonly #known = new Map<Sector, SpectralRange>();

  /** @param maxDeterminants - how many determinants are diagonalised at most; more are bracketed */
  constructor(hamiltonian: SpinHamiltonian, maxDeterminants: number) {
    this.#hamiltonian = hamiltonian;
    this.#maxDeterminants = maxDeterminants;
  }

  /**
   * The floor of an encoding: of the electrons' own sector for shifted ones, which stand for H there only, else of
   * all Fock space.
   * @param lambda - of that encoding, hence an upper bound of the floor
   */
  async of(sector: Sector, lambda: number, context: JobContext): Promise<VariantEstimate['spectralFloor']> {
    let range = this.#known.get(sector);
    if (!range) {
      range = await spectralRange(
        this.#hamiltonian,
        sector,
        { maxDeterminants: this.#maxDeterminants },
        context,
      );
      this.#known.set(sector, range);
    }
    const { value, kind, low, high } = range;
    return { value, kind, sector, low, high: high ?? lambda };
  }
}

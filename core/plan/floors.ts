import type { SpinHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import type { VariantEstimate } from './comparison';

/** Half the spectral range of H, below which no block encoding of H can have its λ. */
export class Floors {
  readonly hamiltonian: SpinHamiltonian;

  constructor(hamiltonian: SpinHamiltonian) {
    this.hamiltonian = hamiltonian;
  }

  /** @param lambda - of an encoding of H in that sector: the floor lies below it */
  async of(
    sector: 'eta' | 'all',
    lambda: number,
    _context: JobContext,
  ): Promise<VariantEstimate['spectralFloor']> {
    return { value: null, kind: 'bracket', sector, low: null, high: lambda };
  }
}

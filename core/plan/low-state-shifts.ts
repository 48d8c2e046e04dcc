import type { SpinHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import type { TruncationEnergy } from './energy-estimate';
import type { LowStatesFinder } from './low-states';

/** Above this, windows of the whole tensor take seconds a variant. */
const MOST_ORBITALS = 32;

/**
 * What truncation does to low levels near the Fermi level, beside a shift that all share, and to the couplings between
 * them, to first order (low-states.ts). The energy of a closed shell hardly knows spin–orbit coupling: its estimate says nothing of that.
 */
export class LowStateShifts {
  readonly #finder: LowStatesFinder | null;
  readonly #known = new Map<SpinHamiltonian, number>();

  /** @param finder - of the reference, or null: there are no estimates */
  constructor(finder: LowStatesFinder | null) {
    this.#finder = finder;
  }

  /**
   * Hartree; null where there is no estimate: complex spinors, factors without a packed form, more than 32 orbitals.
   */
  async of({ whole, kept }: TruncationEnergy, context: JobContext): Promise<number | null> {
    if (whole.kind !== 'spatial' || kept.kind !== 'spatial' || !this.#finder) return null;
    if (whole.orbitals > MOST_ORBITALS) return null;
    let found = this.#known.get(kept);
    if (found === undefined) {
      const states = await this.#finder.of(whole, context);
      ({ centred: found } = await states.change(whole, kept, context));
      this.#known.set(kept, found);
    }
    return found;
  }
}

import type { SpinHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import type { TruncationEnergy } from './energy-estimate';
import { type LowStates, lowStates } from './low-states';

/** Above this, windows of the whole tensor take seconds a variant. */
const MOST_ORBITALS = 32;

/**
 * What truncation does to low levels near the Fermi level, beside a shift that all share, and to the couplings between
 * them, to first order (low-states.ts). The energy of a closed shell hardly knows spin–orbit coupling: its estimate says nothing of that.
 */
export class LowStateShifts {
  readonly #occupations: readonly number[] | null;
  readonly #states = new Map<SpinHamiltonian, Promise<LowStates>>();
  readonly #known = new Map<SpinHamiltonian, Promise<number>>();

  /** @param occupations - reference of the states, or null: there are no estimates */
  constructor(occupations: readonly number[] | null) {
    this.#occupations = occupations;
  }

  /**
   * Hartree; null where there is no estimate: complex spinors, factors without a packed form, more than 32 orbitals.
   */
  async of({ whole, kept }: TruncationEnergy, context: JobContext): Promise<number | null> {
    if (whole.kind !== 'spatial' || kept.kind !== 'spatial' || !this.#occupations) return null;
    if (whole.orbitals > MOST_ORBITALS) return null;
    let states = this.#states.get(whole);
    if (!states) {
      states = lowStates(whole, this.#occupations, context);
      this.#states.set(whole, states);
    }
    let found = this.#known.get(kept);
    if (!found) {
      found = (await states).change(whole, kept).then(({ centred }) => centred);
      this.#known.set(kept, found);
    }
    return found;
  }
}

import { buildEncoding, type Encoding, type VariantName } from '../encode';
import type { Factorisation } from '../factor';
import {
  oppositeShift,
  type SpinHamiltonian,
  shiftedHamiltonian,
  shiftedSpinorHamiltonian,
  toSpinOrbitals,
} from '../hamiltonian';
import { InputError, type JobContext } from '../job';
import {
  type DeterminantStatistics,
  determinantEnergies,
  determinantStatistics,
  extremeDeterminant,
  referenceDeterminant,
  type SecondOrder,
  secondOrder,
} from '../verify';
import { hamiltonianOfFactors } from './energy-estimate-hamiltonian';
import { type Frame, turnedBack } from './frame';

/** What an encoding's truncation means for the energy, hartree. */
export interface TruncationEnergy {
  /**
   * Change of the reference's energy (one determinant, or the lowest level among those degenerate with it), and of its
   * second-order energy.
   */
  readonly firstOrder: number;
  readonly secondOrder: number;
  /** Excitations left out as too close to the determinant. */
  readonly omitted: number;
  /** The whole Hamiltonian, and what is left of it, without symmetry shifts, over one basis. */
  readonly whole: SpinHamiltonian;
  readonly kept: SpinHamiltonian;
}

/** Double excitations that are summed over in about a second. */
const MOST_DOUBLES = 3e6;
/** Largest number of orbitals whose factors over several spin components are written out densely. */
const MOST_DENSE = 8;

/** Estimates of the energy error of truncation for the encodings of one Hamiltonian; what they share is computed once. */
export class EnergyEstimates {
  readonly #hamiltonian: SpinHamiltonian;
  readonly #occupations: readonly number[] | null;
  /** By what was dropped: variants of one factorisation share it whatever their shift. */
  readonly #known = new Map<Encoding['residual'], TruncationEnergy | string>();
  readonly #framed = new Map<SpinHamiltonian, EnergyEstimates>();
  #given: { readonly occupied: Uint8Array; readonly energy: SecondOrder } | null = null;

  /** @param occupations - of the reference determinant, or null: the lowest one that a search finds */
  constructor(hamiltonian: SpinHamiltonian, occupations: readonly number[] | null) {
    this.#hamiltonian = hamiltonian;
    this.#occupations = occupations;
  }

  /**
   * First and second order of the reference determinant, truncated against full.
   *
   * @param factorisation - that the encoding was made from; null for the sparse form
   * @param frame - basis of both, null for the given one
   * @returns null where nothing was dropped, or a reason why there is no estimate
   */
  async of(
    encoding: Encoding,
    factorisation: Factorisation | null,
    context: JobContext,
    frame: Frame | null = null,
  ): Promise<TruncationEnergy | string | null> {
    const { residual } = encoding;
    if (residual.oneNormBound === 0 && residual.frobenius === 0) return null;
    // Occupations are those of the given orbitals, so turned ones are turned back; spin axes need not be.
    const turned = frame?.record.turned ? frame : null;
    if (turned?.record.kind === 'spin') {
      return this.#estimatesOf(turned.hamiltonian).of(encoding, factorisation, context);
    }
    let found = this.#known.get(residual);
    if (found === undefined) {
      found = await this.#estimate(encoding, factorisation, turned, context);
      this.#known.set(residual, found);
    }
    return found;
  }

  #estimatesOf(hamiltonian: SpinHamiltonian): EnergyEstimates {
    let found = this.#framed.get(hamiltonian);
    if (!found) {
      found = new EnergyEstimates(hamiltonian, this.#occupations);
      this.#framed.set(hamiltonian, found);
    }
    return found;
  }

  async #estimate(
    encoding: Encoding,
    factorisation: Factorisation | null,
    frame: Frame | null,
    context: JobContext,
  ): Promise<TruncationEnergy | string> {
    const h = this.#hamiltonian;
    const modes = h.kind === 'spatial' ? 2 * h.orbitals : h.spinors;
    const [filled, empty] = [h.electrons, modes - h.electrons];
    if ((filled * (filled - 1) * empty * (empty - 1)) / 4 > MOST_DOUBLES) {
      return 'the second-order sum runs over too many excitations';
    }
    const kept = await this.#kept(encoding, factorisation, frame, context);
    if (typeof kept === 'string') return kept;
    this.#given ??= await this.#reference(context);
    const { occupied, energy } = this.#given;
    const truncated = await secondOrder(kept, occupied, energy, context);
    return {
      firstOrder: truncated.reference - energy.reference,
      secondOrder: truncated.correlation - energy.correlation,
      omitted: energy.omitted,
      whole: h,
      kept,
    };
  }

  async #reference(context: JobContext) {
    const h = this.#hamiltonian;
    const occupied = this.#occupations
      ? referenceDeterminant(this.#occupations, h.electrons)
      : extremeDeterminant(determinantEnergies(h), h.electrons, 1).occupied;
    return { occupied, energy: await secondOrder(h, occupied, null, context) };
  }

  /** The Hamiltonian that is left; a shift would change it outside its sector, and with it the orbital energies. */
  async #kept(
    encoding: Encoding,
    factorisation: Factorisation | null,
    frame: Frame | null,
    context: JobContext,
  ): Promise<SpinHamiltonian | string> {
    const h = this.#hamiltonian;
    try {
      if (!factorisation) {
        const rebuilt = encoding.rebuild();
        const shift = encoding.symmetryShift?.();
        if (rebuilt.kind !== 'spatial') {
          if (frame?.record.turned)
            return 'joined products over spin orbitals are not turned back from a frame';
          if (!shift) return rebuilt;
          const { scalar, operator } = oppositeShift(shift);
          return shiftedSpinorHamiltonian(rebuilt, { scalar, operator: toSpinOrbitals(operator) });
        }
        const plain = shift ? shiftedHamiltonian(rebuilt, oppositeShift(shift)) : rebuilt;
        return frame ? await turnedBack(plain, frame, context) : plain;
      }
      const packed = h.kind === 'spatial' ? await hamiltonianOfFactors(h, factorisation, context) : null;
      if (packed) return packed;
      if (h.kind === 'spatial' && h.orbitals > MOST_DENSE) {
        return 'what is left of factors over several spin components is too large to be written out';
      }
      const plain: VariantName = {
        factorisation: h.kind === 'spatial' ? 'triplet' : 'spinor',
        grouping: factorisation.grouping,
        spin: 'index',
        shift: 'none',
        lookup: 'clean',
      };
      return (await buildEncoding(h, factorisation, plain, {}, context)).rebuild();
    } catch (error) {
      if (error instanceof InputError && error.toProblem().code === 'too-large-to-rebuild') {
        return 'what is left of the factors is too large to be written out';
      }
      throw error;
    }
  }
}

/** Determinants drawn for {@link randomDeterminants}. */
const SAMPLES = 400;

/** What truncation does to determinants drawn at random, with the job's seed. */
export function randomDeterminants(
  { whole, kept }: TruncationEnergy,
  context: JobContext,
): Promise<DeterminantStatistics> {
  return determinantStatistics(whole, kept, whole.electrons, { samples: SAMPLES }, context);
}

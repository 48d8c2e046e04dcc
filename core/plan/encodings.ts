import {
  buildEncoding,
  type Encoding,
  type FactorisationAxis,
  formatVariant,
  type VariantName,
} from '../encode';
import {
  compressFactors,
  type Factorisation,
  factorise,
  type Grouping,
  jointRefusal,
  optimiseShifts,
} from '../factor';
import type { SpatialHamiltonian, SpinHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import { fittedCharge } from './fitted-charge';
import { thinLightParts } from './light-parts';
import { LowStatesFinder } from './low-states';
import { type MixingStates, mixingOwner } from './mixing-states';
import type { FactorCount } from './request';
import { measuredRounding } from './rounding-scale';

/** What a request says about the mixing of factors. */
export interface MixingChoices {
  /** @defaultValue `auto` */
  readonly factors?: FactorCount;
  /** Where runs are kept that may be stopped and taken up again; null: nowhere. @defaultValue null */
  readonly states?: MixingStates | null;
}

/** Forms that take long to make, so that measuring their rounding is worth the time. */
const MEASURED: readonly FactorisationAxis[] = ['compressed', 'hypercontracted', 'mixed'];

/** λ that differ by less than this part count as equal. */
const EQUAL = 1e-6;

/**
 * Encodings of one Hamiltonian at one threshold. What variants have in common is computed once: a factorisation
 * serves every variant of its grouping, an encoding every way of treating spin in SELECT and every look-up.
 */
export class Encodings {
  readonly #hamiltonian: SpinHamiltonian;
  readonly #threshold: number;
  readonly #occupations: readonly number[] | null;
  readonly #tolerance: number;
  readonly #mixing: MixingChoices;
  readonly #finder: LowStatesFinder;
  readonly #factorisations = new Map<string, Factorisation>();
  readonly #encodings = new Map<string, Encoding>();

  /**
   * @param threshold - sum of LCU norms that truncation may drop, hartree
   * @param occupations - reference of the mean field that stands for dropped factors; null: none
   * @param tolerance - of mixed and hypercontracted encodings: what thinning of the spin-dependent parts may change,
   *   hartree
   * @param mixing - of compressed and mixed encodings
   * @param finder - of the low states that judge thinning, where others need them too; null: one of its own
   */
  constructor(
    hamiltonian: SpinHamiltonian,
    threshold: number,
    occupations: readonly number[] | null,
    tolerance: number,
    mixing: MixingChoices = {},
    finder: LowStatesFinder | null = null,
  ) {
    this.#hamiltonian = hamiltonian;
    this.#threshold = threshold;
    this.#occupations = occupations;
    this.#tolerance = tolerance;
    this.#mixing = mixing;
    this.#finder = finder ?? new LowStatesFinder(this.#filling());
  }

  /** Why the variant is left out though its name is sound, or null. */
  refusal(variant: VariantName): string | null {
    const { factorisation, grouping } = variant;
    return grouping === 'joint' && factorisation !== 'sparse' && this.#hamiltonian.kind === 'spatial'
      ? jointRefusal(this.#hamiltonian)
      : null;
  }

  async of(variant: VariantName, context: JobContext): Promise<Encoding> {
    const key = formatVariant({ ...variant, spin: 'index', lookup: 'clean' });
    let encoding = this.#encodings.get(key);
    if (!encoding) {
      const factorisation = await this.factorisationOf(variant, context);
      const options = { threshold: this.#threshold };
      encoding = await buildEncoding(this.#hamiltonian, factorisation, variant, options, context);
      if (variant.factorisation === 'spinor' && variant.shift === 'optimised') {
        encoding = await this.#bestOfSpinor(encoding, variant, context);
      }
      if (MEASURED.includes(variant.factorisation)) encoding = await this.#measured(encoding, context);
      this.#encodings.set(key, encoding);
    }
    return encoding;
  }

  /** With what rounding does to it, so that bits follow from that. */
  async #measured(encoding: Encoding, context: JobContext): Promise<Encoding> {
    // Without any weight there are no tables to round.
    if (this.#hamiltonian.kind !== 'spatial' || !encoding.program || encoding.lambda.total === 0)
      return encoding;
    const rounding = await measuredRounding(this.#hamiltonian, encoding, this.#filling(), context);
    return { ...encoding, shape: { ...encoding.shape, measuredRounding: rounding } };
  }

  #filling(): readonly number[] {
    const h = this.#hamiltonian;
    return this.#occupations ?? new Array<number>(h.kind === 'spatial' ? h.orbitals : h.spinors / 2).fill(1);
  }

  /**
   * The spinor form lists κ and balances triples after its shifts are chosen: of shifts made for it, shifts made for the
   * triplet form and medians those stay that have the least λ in the end, of equal ones those with the fewest rows.
   */
  async #bestOfSpinor(own: Encoding, variant: VariantName, context: JobContext): Promise<Encoding> {
    const h = this.#hamiltonian;
    const median = await this.of({ ...variant, shift: 'median' }, context);
    const candidates = [own];
    if (h.kind === 'spatial' && variant.grouping !== '-') {
      const triplet = await this.#optimised(
        { ...variant, factorisation: 'triplet' },
        variant.grouping,
        context,
      );
      candidates.push(await buildEncoding(h, triplet, variant, {}, context));
    }
    const note = 'median shifts: the optimised ones have a larger λ here';
    candidates.push({ ...median, variant, notes: [...(median.notes ?? []), note] });
    const least = Math.min(...candidates.map(({ lambda }) => lambda.total));
    return candidates
      .filter(({ lambda }) => lambda.total <= least * (1 + EQUAL))
      .reduce((best, next) => (next.shape.rows < best.shape.rows ? next : best));
  }

  /** What the variant's encoding is made from; null for the sparse form. */
  async factorisationOf(variant: VariantName, context: JobContext): Promise<Factorisation | null> {
    const { factorisation, grouping } = variant;
    return factorisation === 'sparse' || grouping === '-'
      ? null
      : this.#optimised(variant, grouping, context);
  }

  /** The factorisation of the grouping, its factors mixed and their shifts optimised where the variant says so. */
  async #optimised(variant: VariantName, grouping: Grouping, context: JobContext): Promise<Factorisation> {
    if (variant.factorisation === 'hypercontracted' && this.#hamiltonian.kind === 'spatial') {
      return this.#hypercontracted(this.#hamiltonian, variant.shift === 'optimised', context);
    }
    const mixed = variant.factorisation === 'mixed';
    const changed = variant.factorisation === 'compressed' || mixed ? variant.factorisation : 'as they are';
    const given = await this.#factorised(grouping, mixed, changed !== 'as they are', context);
    if (variant.shift !== 'optimised') return given;
    const key = `${grouping}, ${changed}, optimised`;
    let found = this.#factorisations.get(key);
    if (!found) {
      found = given;
      const h = this.#hamiltonian;
      if (changed !== 'as they are' && h.kind === 'spatial') {
        // Thinning needs the spin-dependent factors as their decomposition orders them.
        found = await compressFactors(
          h,
          found,
          { chargeOnly: mixed, factors: this.#most(), store: this.#store(h, `${changed}/${grouping}`) },
          context,
        );
        if (mixed) found = await this.#thinned(h, found, context);
      }
      ({ factorisation: found } = await optimiseShifts(h, found, {}, context));
      this.#factorisations.set(key, found);
    }
    return variant.factorisation === 'spinor' ? this.#spinorShifts(found, key, context) : found;
  }

  /** Shifts made better for λ of the spinor form, from those that are best for the triplet form. */
  async #spinorShifts(triplet: Factorisation, from: string, context: JobContext): Promise<Factorisation> {
    if (this.#hamiltonian.kind === 'spinor') return triplet;
    const key = `${from}, spinor`;
    let found = this.#factorisations.get(key);
    if (!found) {
      const options = { form: 'spinor' } as const;
      ({ factorisation: found } = await optimiseShifts(this.#hamiltonian, triplet, options, context));
      this.#factorisations.set(key, found);
    }
    return found;
  }

  async #hypercontracted(h: SpatialHamiltonian, shift: boolean, context: JobContext): Promise<Factorisation> {
    const key = `hypercontracted, ${shift ? 'shifted' : 'as it is'}`;
    let found = this.#factorisations.get(key);
    if (!found) {
      const options = {
        threshold: this.#threshold,
        shift,
        keepSpinParts: true,
        ...(this.#occupations ? { occupations: this.#occupations } : {}),
      };
      const allowed = Math.max(this.#threshold, this.#tolerance);
      const statesOf = () => this.#finder.of(h, context);
      const fitted = await fittedCharge(h, options, { statesOf, allowed }, context);
      found = await this.#thinned(h, fitted, context);
      // Of the spin-orbit triples, which the fit leaves alone.
      if (shift) ({ factorisation: found } = await optimiseShifts(h, found, {}, context));
      this.#factorisations.set(key, found);
    }
    return found;
  }

  /** Spin-dependent parts thinned by what they mean for low states. */
  async #thinned(h: SpatialHamiltonian, whole: Factorisation, context: JobContext): Promise<Factorisation> {
    const watched = { statesOf: () => this.#finder.of(h, context), tolerance: this.#tolerance };
    const { factorisation, note } = await thinLightParts(h, whole, this.#filling(), watched, context);
    return { ...factorisation, notes: [...factorisation.notes, note] };
  }

  /** The number of factors that was asked for, or null. */
  #most(): number | null {
    const { factors = 'auto' } = this.#mixing;
    if (factors === 'auto') return null;
    const h = this.#hamiltonian;
    return factors.perOrbital && h.kind === 'spatial' ? factors.count * h.orbitals : factors.count;
  }

  #store(h: SpatialHamiltonian, variant: string) {
    const choices = { variant, threshold: this.#threshold, factors: this.#most() ?? 'auto' } as const;
    return this.#mixing.states?.of(mixingOwner(h, choices, this.#occupations)) ?? null;
  }

  /**
   * @param keepSpinParts - every factor of the spin-dependent parts, whatever the threshold
   * @param toMix - factors that mixing starts from, as many as were asked for
   */
  async #factorised(
    grouping: Grouping,
    keepSpinParts: boolean,
    toMix: boolean,
    context: JobContext,
  ): Promise<Factorisation> {
    const key = `${grouping}${keepSpinParts ? ', whole' : ''}${toMix ? ', to mix' : ''}`;
    let found = this.#factorisations.get(key);
    if (!found) {
      const options = {
        grouping,
        threshold: this.#threshold,
        keepSpinParts,
        principal: toMix,
        most: toMix ? this.#most() : null,
        ...(this.#occupations ? { occupations: this.#occupations } : {}),
      };
      found = await factorise(this.#hamiltonian, options, context);
      this.#factorisations.set(key, found);
    }
    return found;
  }
}

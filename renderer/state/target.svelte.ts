import type { Meaning } from '../../core/plan/request';
import { type EnergyUnit, fromHartree, parseEnergy, toHartree } from '../../core/units';
import { formatSignificant, targetWords, UNIT_WORDS } from '../figures/figures';
import { input, type Reckoning, source, strong, words } from '../figures/reckoning';
import { Field, numberIn, parseNumber } from './field.svelte';
import type { StopLine } from './stops';

export interface TargetValue {
  readonly value: number;
  readonly unit: EnergyUnit;
}

/** Units in which the target is restated beside the field. */
const RESTATED: readonly EnergyUnit[] = ['cm-1', 'meV', 'mEh', 'kJ/mol'];

/** What is asked of phase estimation, and of which machine. */
export class TargetState {
  readonly resolution = new Field<TargetValue>('5 cm-1', (text) => {
    const energy = parseEnergy(text);
    if (!energy) return { problem: 'expected a number and a unit, such as 5 cm-1, 1 mEh or 0.6 meV' };
    if (energy.value <= 0) return { problem: 'expected more than 0' };
    return { value: energy };
  });
  meaning = $state<Meaning>('level');
  readonly overlap = new Field<number>('1', numberIn(1e-6, 1, 'a number above 0 and at most 1'));
  readonly secondOverlap = new Field<number>('1', numberIn(1e-6, 1, 'a number above 0 and at most 1'));
  readonly cap = new Field<number | null>('', (text) => {
    if (text.trim() === '') return { value: null };
    const value = parseNumber(text);
    return Number.isInteger(value) && value >= 1
      ? { value }
      : { problem: 'expected a whole number of qubits, or nothing for no cap' };
  });
  readonly physicalError = new Field<number>(
    '1e-3',
    numberIn(1e-9, 9e-3, 'an error below the threshold, such as 1e-3'),
  );
  readonly cycle = new Field<number>('1', numberIn(1e-3, 1e6, 'microseconds above 0'));
  readonly reaction = new Field<number>('10', numberIn(1e-3, 1e6, 'microseconds above 0'));
  readonly factories = new Field<number>('4', numberIn(1, 1e6, 'at least one factory'));
  readonly failure = new Field<number>('0.01', numberIn(1e-9, 0.5, 'a probability up to 0.5'));

  focus = $state<'resolution' | 'overlap' | 'cap' | 'machine'>('resolution');

  readonly target = $derived(this.resolution.value);
  readonly overlaps = $derived(
    this.meaning === 'splitting' ? [this.overlap.value, this.secondOverlap.value] : [this.overlap.value],
  );
  readonly surface = $derived({
    physicalError: this.physicalError.value,
    cycleMicroseconds: this.cycle.value,
    reactionMicroseconds: this.reaction.value,
    factories: this.factories.value,
    failure: this.failure.value,
  });

  /** `one level to 5 cm⁻¹ rms`. */
  readonly asked = $derived(
    `${this.meaning === 'level' ? 'one level' : 'a splitting'} to ${targetWords(this.target)} rms`,
  );

  /** The target in the other units. */
  readonly restated = $derived(
    RESTATED.filter((unit) => unit !== this.target.unit).map(
      (unit) =>
        `${formatSignificant(fromHartree(toHartree(this.target.value, this.target.unit), unit), 3)} ${UNIT_WORDS[unit]}`,
    ),
  );

  /** Expected runs and those that give 99 % confidence of at least one success, for the poorer level. */
  readonly repeats = $derived.by(() => {
    const average = this.overlaps.reduce((sum, p) => sum + 1 / p, 0);
    const least = Math.min(...this.overlaps);
    const sure = least === 1 ? 1 : Math.ceil(Math.log(0.01) / Math.log(1 - least));
    return { average, sure };
  });

  get #fields(): readonly Field<unknown>[] {
    return [
      this.resolution,
      this.overlap,
      this.secondOverlap,
      this.cap,
      this.physicalError,
      this.cycle,
      this.reaction,
      this.factories,
      this.failure,
    ] as readonly Field<unknown>[];
  }

  readonly line = $derived.by((): StopLine => {
    const wrong = this.#fields.some((f) => f.problem !== null);
    const cap = this.cap.value;
    const fact = `${targetWords(this.target)}${cap === null ? '' : `, ${cap} qubits`}`;
    return {
      mark: wrong ? 'error' : 'full',
      fact: wrong ? 'a field is not understood' : fact,
      knows: !wrong,
    };
  });

  readonly reckoning = $derived.by((): Reckoning => {
    if (this.focus === 'overlap') {
      const { average, sure } = this.repeats;
      return [
        [
          strong(`${formatSignificant(average, 3)} runs on average`),
          words(' = sum of 1 / overlap over the levels asked for. '),
        ],
        [words(`${sure} runs find the poorer level at least once with 99 % confidence.`)],
      ];
    }
    if (this.focus === 'cap') {
      return [
        [
          strong(this.cap.value === null ? 'No cap' : `At most ${this.cap.value} logical qubits`),
          words('. '),
        ],
        [words('Variants over the cap stay in the ledger, marked ▲, and cannot lead.')],
      ];
    }
    if (this.focus === 'machine') {
      return [
        [
          strong('Assumed machine'),
          words(': surface code at error '),
          input(String(this.physicalError.value)),
          words(', cycle '),
          input(`${this.cycle.value} µs`),
          words(', reaction '),
          input(`${this.reaction.value} µs`),
          words(
            `, ${this.factories.value} factories; the whole run may fail with probability ${this.failure.value}. `,
          ),
        ],
        [
          words('It sets time and physical qubits only. '),
          source('Fowler & Gidney, arXiv:1808.06709; Gidney & Fowler, Quantum 3, 135 (2019).'),
        ],
      ];
    }
    return [
      [
        strong(targetWords(this.target)),
        words(` = ${this.restated.join(' = ')}; the standard deviation of the estimate. `),
      ],
      [
        words(
          this.meaning === 'splitting'
            ? 'A splitting is the difference of two levels run independently: each is resolved to the target divided by √2.'
            : 'One level. Halving the target doubles the walk steps.',
        ),
      ],
    ];
  });
}

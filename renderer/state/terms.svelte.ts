import { type SelectableTerm, TERMS, type Term } from '../../core/integrals/terms';
import { formatOneNorm } from '../figures/figures';
import { type Reckoning, source, strong, words } from '../figures/reckoning';
import type { LoadState } from './load.svelte';
import type { StopLine } from './stops';

export const TERM_WORDS: Readonly<Record<SelectableTerm, string>> = {
  sf: 'Coulomb and one-electron',
  so1: 'nuclear spin–orbit',
  somf: 'mean-field spin–orbit',
  so2: 'same-orbit and other-orbit',
  so2mf: 'mean field of so2, computed',
  ss: 'spin–spin',
  scalar: 'mass–velocity and Darwin',
  ssc: 'spin–spin contact',
};

/** Which parts of the Hamiltonian are kept. */
export class TermsState {
  /** Terms switched off by the user; everything the files hold is on at first. */
  off = $state.raw<readonly SelectableTerm[]>([]);
  /** The computed mean field stands in for so2. */
  meanField = $state(false);
  focus = $state<SelectableTerm | null>(null);
  readonly #load: LoadState;

  constructor(load: LoadState) {
    this.#load = load;
  }

  /** Terms the files hold, in canonical order. */
  readonly held = $derived.by((): readonly Term[] => {
    const names = this.#load.reading?.terms.map((t) => t.name) ?? [];
    return TERMS.filter((t) => names.includes(t));
  });

  readonly kept = $derived.by((): readonly SelectableTerm[] =>
    this.held.flatMap((t): SelectableTerm[] => {
      if (this.off.includes(t)) return [];
      return t === 'so2' && this.meanField ? ['so2mf'] : [t];
    }),
  );

  normOf(term: Term): number {
    return this.#load.reading?.terms.find((t) => t.name === term)?.oneNorm ?? 0;
  }

  largestOf(term: Term): number {
    return this.#load.reading?.terms.find((t) => t.name === term)?.maxAbs ?? 0;
  }

  toggle(term: Term): void {
    // The Coulomb part is what all others correct: without it there is nothing to plan.
    if (term === 'sf') return;
    this.off = this.off.includes(term) ? this.off.filter((t) => t !== term) : [...this.off, term];
  }

  /** True where a mean-field part already contains the active electrons, so that so2 would count them twice. */
  readonly doubleCounts = $derived.by(
    () =>
      (this.#load.reading?.meanFieldCoversActive ?? false) &&
      this.kept.includes('somf') &&
      (this.kept.includes('so2') || this.kept.includes('so2mf')),
  );

  readonly line = $derived.by((): StopLine => {
    if (this.held.length === 0) return { mark: 'empty', fact: 'nothing to choose yet', knows: false };
    if (this.doubleCounts) return { mark: 'error', fact: 'so2 counted twice', knows: false };
    return { mark: 'full', fact: this.kept.join(' '), knows: true };
  });

  readonly reckoning = $derived.by((): Reckoning => {
    const { focus } = this;
    if (this.held.length === 0) return [[words('The terms come from the files.')], []];
    if (focus !== null && focus !== 'so2mf' && this.held.includes(focus)) {
      return [
        [
          strong(`${focus}, ${TERM_WORDS[focus]}`),
          words(
            `: one-norm ${formatOneNorm(this.normOf(focus))}, largest element ${formatOneNorm(this.largestOf(focus))}. `,
          ),
        ],
        [
          source(
            'The one-norm bounds what the term can add to λ; what it does to the levels is a different figure.',
          ),
        ],
      ];
    }
    return [
      [
        strong(`${this.kept.length} of ${this.held.length} terms kept`),
        words(`: ${this.kept.map((t) => TERM_WORDS[t]).join(', ')}. `),
      ],
      [
        words(
          this.doubleCounts
            ? 'The mean-field array already contains the active electrons: drop it or so2.'
            : 'Leaving a term out changes the question; truncation inside a term is set by the error budget.',
        ),
      ],
    ];
  });
}

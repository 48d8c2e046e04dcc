import { Cancelled, type Problem } from '../../core/job';
import type { Engine } from '../engine/engine';
import type { Ask, Proof } from '../engine/protocol';
import { problemOf } from '../engine/serve';
import { type Reckoning, source, strong, words } from '../figures/reckoning';
import type { LoadState } from './load.svelte';
import type { StopLine } from './stops';
import type { VariantsState } from './variants.svelte';

/** What was checked against exact results, and what was not. */
export class ProofState {
  proof = $state.raw<Proof | null>(null);
  busy = $state(false);
  stage = $state('');
  fraction = $state<number | null>(null);
  problem = $state.raw<Problem | null>(null);
  focus = $state<string | null>(null);
  #key = $state('');
  #stop: AbortController | null = null;
  readonly #engine: Engine;
  readonly #load: LoadState;
  readonly #variants: VariantsState;
  readonly #ask: () => Ask;

  constructor(engine: Engine, load: LoadState, variants: VariantsState, ask: () => Ask) {
    this.#engine = engine;
    this.#load = load;
    this.#variants = variants;
    this.#ask = ask;
  }

  readonly #now = $derived.by(() =>
    JSON.stringify([this.#load.source?.id, this.#ask().terms, this.#ask().threshold, this.#variants.names]),
  );
  readonly stale = $derived.by(() => this.proof !== null && this.#key !== this.#now);
  readonly can = $derived.by(
    () => !this.busy && this.#load.ready !== null && this.#variants.names.length > 0,
  );

  async run(): Promise<void> {
    const ready = this.#load.ready;
    if (!ready || this.busy) return;
    const stop = new AbortController();
    this.#stop = stop;
    const key = this.#now;
    this.busy = true;
    this.problem = null;
    this.stage = 'starting';
    this.fraction = null;
    try {
      this.proof = await this.#engine.run(
        'prove',
        { source: ready.source, ask: this.#ask(), variants: this.#variants.names },
        {
          signal: stop.signal,
          onProgress: (stage, done, total) => {
            this.stage = stage;
            this.fraction = total ? Math.min(1, done / total) : null;
          },
        },
      );
      this.#key = key;
    } catch (error) {
      if (!(error instanceof Cancelled)) this.problem = problemOf(error, ready.source.name);
    } finally {
      this.busy = false;
      this.#stop = null;
    }
  }

  stop(): void {
    this.#stop?.abort();
  }

  readonly counts = $derived.by(() => {
    const checks = this.proof?.checks ?? [];
    const hold = checks.filter((c) => c.ok).length;
    return { hold, fail: checks.length - hold, notRun: this.proof?.notRun.length ?? 0 };
  });

  readonly line = $derived.by((): StopLine => {
    const { hold, fail, notRun } = this.counts;
    if (this.busy) return { mark: 'half', fact: 'checking', knows: false };
    if (this.problem) return { mark: 'error', fact: 'could not be run', knows: false };
    if (!this.proof) return { mark: 'empty', fact: 'nothing checked yet', knows: false };
    if (this.stale) return { mark: 'stale', fact: 'from an older choice', knows: false };
    const fact = `${hold} hold${fail ? `, ${fail} fail` : ''}${notRun ? `, ${notRun} not run` : ''}`;
    if (fail > 0) return { mark: 'error', fact, knows: true };
    return { mark: notRun > 0 ? 'half' : 'full', fact, knows: true };
  });

  readonly reckoning = $derived.by((): Reckoning => {
    const check = this.proof?.checks.find((c) => c.name === this.focus);
    if (check) {
      return [
        [
          strong(check.name),
          words(
            `: found ${check.value.toPrecision(6)}, expected ${check.expected.toPrecision(6)}, allowed ${check.tolerance.toPrecision(2)}. `,
          ),
        ],
        [source(check.source)],
      ];
    }
    return [
      [
        words(
          'Exact levels come from diagonalising the Hamiltonian of the files at its electron number; encoded ones from the Hamiltonian',
        ),
      ],
      [
        words(
          'rebuilt from the tables of each variant alone. They must agree within what truncation may have left out.',
        ),
      ],
    ];
  });
}

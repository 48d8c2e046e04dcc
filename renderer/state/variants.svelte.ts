import { parseVariant } from '../../core/encode';
import { Cancelled, type Problem } from '../../core/job';
import type { Comparison } from '../../core/plan/comparison';
import type { Engine } from '../engine/engine';
import type { Ask, VariantNews } from '../engine/protocol';
import { problemOf } from '../engine/serve';
import { type Reckoning, strong, words } from '../figures/reckoning';
import type { Entry } from '../ledger/columns';
import { type Axis, toggled, USUAL } from './axes';
import type { LoadState } from './load.svelte';
import { Remaining } from './remaining';
import type { StopLine } from './stops';

/** What a reckoned variant was reckoned for. */
interface Answered {
  readonly entry: Omit<Entry, 'stale'>;
  readonly source: number;
  readonly ask: Ask | null;
}

const fresh = (name: string): Omit<Entry, 'stale'> => ({
  name,
  status: 'waiting',
  stage: '',
  fraction: null,
  estimate: null,
  problem: null,
  reason: '',
});

/** The chosen variants and what became of each. */
export class VariantsState {
  names = $state.raw<readonly string[]>(USUAL);
  #answers = $state.raw<ReadonlyMap<string, Answered>>(new Map());
  /** Name of the variant at work, or null. */
  running = $state<string | null>(null);
  busy = $state(false);
  problem = $state.raw<Problem | null>(null);
  recommendation = $state.raw<Comparison['recommendation'] | null>(null);
  remaining = $state('');
  focus = $state<string | null>(null);
  readonly #engine: Engine;
  readonly #load: LoadState;
  readonly #ask: () => Ask;
  #stop: AbortController | null = null;

  constructor(engine: Engine, load: LoadState, ask: () => Ask) {
    this.#engine = engine;
    this.#load = load;
    this.#ask = ask;
  }

  toggle(axis: Axis, value: string): void {
    this.names = toggled(this.names, axis, value);
  }

  drop(name: string): void {
    this.names = this.names.filter((n) => n !== name);
  }

  usual(): void {
    this.names = USUAL;
  }

  /** The chosen variants in order, each with what is known and whether it still answers the question. */
  readonly entries = $derived.by((): readonly Entry[] => {
    const source = this.#load.source?.id ?? 0;
    const ask = this.#ask();
    return this.names.map((name) => {
      const answer = this.#answers.get(name);
      if (!answer || answer.source !== source) return { ...fresh(name), stale: null };
      return { ...answer.entry, stale: answer.entry.estimate ? staleWords(answer.ask, ask) : null };
    });
  });

  readonly done = $derived.by(
    () => this.entries.filter((e) => e.status === 'done' && e.stale === null).length,
  );
  /** Variants that a press of Reckon would work on. */
  readonly open = $derived.by(() =>
    this.entries
      .filter((e) => e.status !== 'left-out' && !(e.status === 'done' && e.stale === null))
      .map((e) => e.name),
  );
  readonly canReckon = $derived.by(() => !this.busy && this.open.length > 0 && this.#load.ready !== null);

  async reckon(): Promise<void> {
    const ready = this.#load.ready;
    if (!ready || this.busy) return;
    const todo = this.open;
    if (todo.length === 0) return;
    const ask = this.#ask();
    const source = ready.source.id;
    const stop = new AbortController();
    this.#stop = stop;
    this.busy = true;
    this.problem = null;
    for (const name of todo) this.#put(name, source, null, fresh(name));
    const remaining = new Remaining(todo.length);
    try {
      const { recommendation } = await this.#engine.run(
        'reckon',
        { source: ready.source, ask, variants: todo },
        {
          signal: stop.signal,
          onNews: (news) => {
            this.#hear(news, source, ask);
            if (news.status !== 'started') remaining.finished();
          },
          onProgress: (stage, done, total) => {
            const fraction = total ? Math.min(1, done / total) : null;
            // The job names its place in the list and the variant first; the row says both already.
            this.#progress(source, stage.replace(/^\d+ of \d+, [^:]*: /, ''), fraction);
            this.remaining = remaining.words();
          },
        },
      );
      this.recommendation = recommendation;
    } catch (error) {
      const cancelled = error instanceof Cancelled;
      if (!cancelled) this.problem = problemOf(error, ready.source.name);
      for (const name of todo) {
        const entry = this.#answers.get(name)?.entry;
        if (entry?.status === 'running' || (cancelled && entry?.status === 'waiting'))
          this.#put(name, source, null, {
            ...entry,
            status: cancelled ? 'stopped' : 'failed',
            problem: cancelled ? null : this.problem,
          });
      }
    } finally {
      this.busy = false;
      this.running = null;
      this.remaining = '';
      this.#stop = null;
    }
  }

  stop(): void {
    this.#stop?.abort();
  }

  #hear(news: VariantNews, source: number, ask: Ask): void {
    const before = this.#answers.get(news.name)?.entry ?? fresh(news.name);
    if (news.status === 'started') {
      this.running = news.name;
      this.#put(news.name, source, null, { ...before, status: 'running', fraction: null, stage: 'starting' });
    } else if (news.status === 'done') {
      this.#put(news.name, source, ask, {
        ...fresh(news.name),
        status: 'done',
        fraction: 1,
        estimate: news.estimate,
      });
    } else if (news.status === 'left-out') {
      this.#put(news.name, source, ask, { ...fresh(news.name), status: 'left-out', reason: news.reason });
    } else {
      this.#put(news.name, source, ask, { ...before, status: 'failed', problem: news.problem });
    }
  }

  #progress(source: number, stage: string, fraction: number | null): void {
    const name = this.running;
    const entry = name === null ? undefined : this.#answers.get(name)?.entry;
    if (name === null || entry?.status !== 'running') return;
    this.#put(name, source, null, { ...entry, stage, fraction });
  }

  #put(name: string, source: number, ask: Ask | null, entry: Omit<Entry, 'stale'>): void {
    this.#answers = new Map(this.#answers).set(name, { entry, source, ask });
  }

  readonly line = $derived.by((): StopLine => {
    const total = this.names.length;
    if (total === 0) return { mark: 'empty', fact: 'none chosen', knows: false };
    if (this.busy) return { mark: 'half', fact: `${this.done} of ${total} done`, knows: false };
    const failed = this.entries.some((e) => e.status === 'failed');
    if (this.problem || failed) return { mark: 'error', fact: 'one could not be reckoned', knows: true };
    if (this.entries.some((e) => e.stale !== null))
      return { mark: 'stale', fact: 'reckon again', knows: false };
    const settled = this.entries.filter((e) => e.status === 'left-out').length + this.done;
    if (settled === total) return { mark: 'full', fact: `${this.done} of ${total} done`, knows: true };
    return {
      mark: this.done > 0 ? 'half' : 'empty',
      fact: `${total} chosen, ${this.done} done`,
      knows: false,
    };
  });

  readonly reckoning = $derived.by((): Reckoning => {
    const entry = this.entries.find((e) => e.name === this.focus);
    if (entry?.problem) {
      const { where, found, expected, mend } = entry.problem;
      return [[strong(where), words(`: ${found}; expected ${expected}. `)], [words(mend)]];
    }
    if (entry?.reason) return [[strong(entry.name), words(' is left out. ')], [words(entry.reason)]];
    return [
      [
        strong(`${this.names.length} variants`),
        words(' = factorisation × grouping × treatment of spin × shift × look-up, sound combinations only. '),
      ],
      [
        words(
          entry
            ? `${entry.name}: ${describe(entry.name)}.`
            : 'A word switched on adds its combinations with the words in use; switched off it removes them.',
        ),
      ],
    ];
  });
}

/** A variant in words. */
export function describe(name: string): string {
  const { factorisation, grouping, spin, shift, lookup } = parseVariant(name);
  const how = grouping === '-' ? '' : `, ${grouping} blocks`;
  const where =
    spin === 'swap-layers' ? 'spin taken out of the index by swap layers' : 'spin in the select index';
  const moved = shift === 'none' ? 'no shift' : `${shift} symmetry shift`;
  return `${factorisation} form${how}; ${where}; ${moved}; look-up with ${lookup === 'plain' ? 'no' : lookup} work qubits`;
}

/** Why figures reckoned for `then` do not answer `now`, or null where they do. */
export function staleWords(then: Ask | null, now: Ask): string | null {
  if (then === null) return 'not reckoned';
  const same = (a: unknown, b: unknown) => JSON.stringify(a) === JSON.stringify(b);
  if (same(then, now)) return null;
  if (!same(then.target, now.target))
    return `from target ${then.target.value} ${then.target.unit}${then.target.meaning === now.target.meaning ? '' : `, ${then.target.meaning}`}, reckon again`;
  if (!same(then.terms, now.terms)) return 'from other terms, reckon again';
  return 'from other settings, reckon again';
}

import { type EncodingShape, parseVariant } from '../../core/encode';
import type { SurfaceCodeAssumptions } from '../../core/estimate';
import { Cancelled, type Problem } from '../../core/job';
import type { Comparison, VariantEstimate } from '../../core/plan/comparison';
import { type FrameChoice, type FrameRequest, GIVEN_FRAMES } from '../../core/plan/frame';
import { parseEnergy, toHartree } from '../../core/units';
import type { Engine } from '../engine/engine';
import type { Ask, VariantNews } from '../engine/protocol';
import { problemOf } from '../engine/serve';
import { type Reckoning, strong, words } from '../figures/reckoning';
import type { Entry } from '../ledger/columns';
import { canRecount, onMachine, recount } from '../ledger/reprice';
import { type Axis, toggled, USUAL } from './axes';
import { Field, type Parsed, parseNumber } from './field.svelte';
import type { LoadState } from './load.svelte';
import { Remaining } from './remaining';
import type { StopLine } from './stops';

/** What a reckoned variant was reckoned for. */
interface Answered {
  readonly entry: Omit<Entry, 'stale'>;
  readonly source: number;
  readonly ask: Ask | null;
  /** Sizes of the encoding, from which costs can be counted anew. */
  readonly shape: EncodingShape | null;
}

const fresh = (name: string): Omit<Entry, 'stale'> => ({
  name,
  status: 'waiting',
  stage: '',
  fraction: null,
  estimate: null,
  problem: null,
  reason: '',
  notes: [],
});

/** The chosen variants and what became of each. */
export class VariantsState {
  names = $state.raw<readonly string[]>(USUAL);
  /** Sum of LCU norms that truncation may leave out, hartree; `auto`: the error budget's share. */
  readonly threshold = new Field<number | 'auto'>('0', parseThreshold);
  /** Bases that are turned for a smaller λ where a form's λ depends on them. */
  frames = $state.raw<FrameRequest>(GIVEN_FRAMES);
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
  readonly #machine: () => SurfaceCodeAssumptions;
  readonly #kept = new WeakMap<
    Answered,
    { ask: Ask; machine: SurfaceCodeAssumptions; estimate: VariantEstimate }
  >();
  #stop: AbortController | null = null;

  constructor(engine: Engine, load: LoadState, ask: () => Ask, machine: () => SurfaceCodeAssumptions) {
    this.#engine = engine;
    this.#load = load;
    this.#ask = ask;
    this.#machine = machine;
  }

  toggle(axis: Axis, value: string): void {
    this.names = toggled(this.names, axis, value);
  }

  turn(basis: keyof FrameRequest, choice: FrameChoice): void {
    this.frames = { ...this.frames, [basis]: choice };
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
      const { entry, shape } = answer;
      if (!entry.estimate || !answer.ask) return { ...entry, stale: null };
      if (shape && canRecount(name, answer.ask, ask)) {
        return { ...entry, estimate: this.#recounted(answer, entry.estimate, shape, ask), stale: null };
      }
      return { ...entry, stale: staleWords(answer.ask, ask) };
    });
  });

  /**
   * The estimate for the present question and machine. Kept until one of them changes: progress of other variants
   * asks for it twenty times a second, and charts compare estimates by identity.
   */
  #recounted(answer: Answered, estimate: VariantEstimate, shape: EncodingShape, ask: Ask): VariantEstimate {
    const machine = this.#machine();
    const kept = this.#kept.get(answer);
    if (kept?.ask === ask && kept.machine === machine) return kept.estimate;
    const same = answer.ask === ask ? estimate : recount(estimate, shape, ask);
    const result = onMachine(same, machine);
    this.#kept.set(answer, { ask, machine, estimate: result });
    return result;
  }

  shapeOf(name: string): EncodingShape | null {
    return this.#answers.get(name)?.shape ?? null;
  }

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
    for (const name of todo) this.#put(name, fresh(name), { source });
    const remaining = new Remaining(todo.length);
    try {
      const { recommendation } = await this.#engine.run(
        'reckon',
        { source: ready.source, ask, variants: todo },
        {
          signal: stop.signal,
          onNews: (news) => {
            this.#hear(news, source, ask);
            if (news.status === 'left-out') remaining.dropped();
            else if (news.status === 'done' || news.status === 'failed') remaining.finished();
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
          this.#put(
            name,
            {
              ...entry,
              status: cancelled ? 'stopped' : 'failed',
              problem: cancelled ? null : this.problem,
            },
            { source },
          );
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
    const { name } = news;
    const before = this.#answers.get(name);
    const entry = before?.entry ?? fresh(name);
    if (news.status === 'started') {
      this.running = name;
      this.#put(name, { ...entry, status: 'running', fraction: null, stage: 'starting' }, { source });
    } else if (news.status === 'sized') {
      this.#put(name, entry, { source, shape: news.shape });
    } else if (news.status === 'done') {
      const done = { ...fresh(name), status: 'done' as const, fraction: 1 };
      const { estimate, notes = [] } = news;
      this.#put(name, { ...done, estimate, notes }, { source, ask, shape: before?.shape ?? null });
    } else if (news.status === 'left-out') {
      this.#put(name, { ...fresh(name), status: 'left-out', reason: news.reason }, { source, ask });
    } else {
      this.#put(name, { ...entry, status: 'failed', problem: news.problem }, { source, ask });
    }
  }

  #progress(source: number, stage: string, fraction: number | null): void {
    const answer = this.running === null ? undefined : this.#answers.get(this.running);
    if (answer?.entry.status !== 'running') return;
    this.#put(answer.entry.name, { ...answer.entry, stage, fraction }, { source, shape: answer.shape });
  }

  #put(
    name: string,
    entry: Omit<Entry, 'stale'>,
    { source, ask = null, shape = null }: { source: number; ask?: Ask | null; shape?: EncodingShape | null },
  ): void {
    this.#answers = new Map(this.#answers).set(name, { entry, source, ask, shape });
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
    if (entry && entry.notes.length > 0) {
      return [
        [strong(entry.name), words(`: ${describe(entry.name)}. `)],
        [words(`${entry.notes.join('; ')}.`)],
      ];
    }
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

function parseThreshold(text: string): Parsed<number | 'auto'> {
  if (text.trim().toLowerCase() === 'auto') return { value: 'auto' };
  const energy = parseEnergy(text);
  const hartree = energy ? toHartree(energy.value, energy.unit) : parseNumber(text);
  return hartree >= 0 ? { value: hartree } : { problem: 'expected 0, auto, or an energy such as 1e-4 Eh' };
}

const SPARSE_WORDS: Readonly<Record<string, string>> = {
  joint: ', equal Majorana products joined in all parts',
  '-': ', equal Majorana products of the charge part joined where that pays',
};

/** A variant in words. */
export function describe(name: string): string {
  const { factorisation, grouping, spin, shift, lookup } = parseVariant(name);
  const how = factorisation === 'sparse' ? SPARSE_WORDS[grouping]! : `, ${grouping} blocks`;
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

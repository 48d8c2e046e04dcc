import { accessSync, constants, existsSync, readFileSync } from 'node:fs';
import { dirname } from 'node:path';
import { InputError } from '../../core/job';
import { type MixingOwner, type MixingRun, MixingStates } from '../../core/plan';
import { writeWhole } from './output';

const SCHEMA = 'spinwright-mixing/1';
/** Between two writes while a run goes on. */
const WRITE_MS = 10_000;

/**
 * A file of mixing runs: read where it exists, written now and then while they go on and once more by `flush`. Whole or
 * not at all: a new file takes the name of the old one when it is complete.
 *
 * Arrays are little-endian 64-bit floats in base64.
 */
export class MixingFile {
  readonly states: MixingStates;
  readonly #path: string;
  #changed = false;
  #written = performance.now();

  /** @throws InputError `bad-mixing-state` where the file is none of these, `cannot-read`, `cannot-write` */
  constructor(path: string) {
    this.#path = path;
    refuseNoFolder(path);
    this.states = new MixingStates(readRuns(path), path, () => {
      this.#changed = true;
      if (performance.now() - this.#written > WRITE_MS) this.flush();
    });
  }

  /** Writes what is not yet in the file. @throws InputError `cannot-write` */
  flush(): void {
    if (!this.#changed) return;
    writeWhole(this.#path, textOf(this.states.runs()));
    this.#changed = false;
    this.#written = performance.now();
  }
}

/** Not only when there is something to lose. */
function refuseNoFolder(path: string): void {
  try {
    accessSync(dirname(path), constants.W_OK);
  } catch (error) {
    throw new InputError({
      code: 'cannot-write',
      where: path,
      found: `its folder cannot be written to (${(error as NodeJS.ErrnoException).code ?? 'unknown reason'})`,
      expected: 'an existing folder with permission to write',
      mend: 'Make the folder, or name another file.',
    });
  }
}

function textOf(runs: readonly MixingRun[]): string {
  const packed = runs.map(({ owner, parts }) => ({
    owner,
    parts: mapValues(parts, ({ arrays, ...state }) => ({
      ...state,
      arrays: mapValues(arrays, (numbers) =>
        Buffer.from(numbers.buffer, numbers.byteOffset, numbers.byteLength).toString('base64'),
      ),
    })),
  }));
  return `${JSON.stringify({ schema: SCHEMA, runs: packed })}\n`;
}

function mapValues<A, B>(of: Readonly<Record<string, A>>, change: (value: A) => B): Record<string, B> {
  return Object.fromEntries(Object.entries(of).map(([key, value]) => [key, change(value)]));
}

function readRuns(path: string): MixingRun[] {
  if (!existsSync(path)) return [];
  let text: string;
  try {
    text = readFileSync(path, 'utf8');
  } catch (error) {
    throw new InputError({
      code: 'cannot-read',
      where: path,
      found: `the file cannot be read (${(error as NodeJS.ErrnoException).code ?? 'unknown reason'})`,
      expected: 'a readable file',
      mend: 'Check its permissions.',
    });
  }
  try {
    return runsOf(JSON.parse(text));
  } catch {
    throw new InputError({
      code: 'bad-mixing-state',
      where: path,
      found: 'no state of mixing, or a damaged one',
      expected: `a file written by --mixing-state (${SCHEMA})`,
      mend: 'Name another file, or remove this one to start anew.',
    });
  }
}

/** Throws where anything is not as {@link textOf} writes it. */
function runsOf(document: unknown): MixingRun[] {
  const { schema, runs } = record(document);
  if (schema !== SCHEMA || !Array.isArray(runs)) throw new TypeError('schema');
  return runs.map((run): MixingRun => {
    const { owner, parts } = record(run);
    const own = record(owner);
    return {
      owner: {
        variant: word(own.variant),
        orbitals: number(own.orbitals),
        electrons: number(own.electrons),
        terms: word(own.terms),
        threshold: number(own.threshold),
        factors: own.factors === 'auto' ? 'auto' : number(own.factors),
        integrals: word(own.integrals),
      } satisfies MixingOwner,
      parts: mapValues(record(parts), (part) => {
        const { stage, done, lambda, count, arrays } = record(part);
        if (typeof done !== 'boolean') throw new TypeError('done');
        return {
          stage: number(stage),
          done,
          lambda: number(lambda),
          count: number(count),
          arrays: mapValues(record(arrays), floats),
        };
      }),
    };
  });
}

function record(value: unknown): Record<string, unknown> {
  if (typeof value !== 'object' || value === null || Array.isArray(value)) throw new TypeError('object');
  return value as Record<string, unknown>;
}

function number(value: unknown): number {
  if (typeof value !== 'number' || !Number.isFinite(value)) throw new TypeError('number');
  return value;
}

function word(value: unknown): string {
  if (typeof value !== 'string') throw new TypeError('string');
  return value;
}

function floats(value: unknown): Float64Array {
  const bytes = Buffer.from(word(value), 'base64');
  if (bytes.byteLength % 8 !== 0) throw new TypeError('length');
  const out = new Float64Array(bytes.byteLength / 8);
  new Uint8Array(out.buffer).set(bytes);
  if (!out.every(Number.isFinite)) throw new TypeError('numbers');
  return out;
}

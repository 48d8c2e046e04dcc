import type { Kernels } from './kernels';
import { plainKernels } from './plain';
import wasmBytes from './wasm-bytes';

/**
 * Working memory with the kernels that act on it. Room is handed out upwards and given back in the opposite order by
 * {@link Arena.release}; growing replaces {@link Arena.f64}, so read that property anew after every `take`.
 */
export interface Arena {
  readonly kernels: Kernels;
  /** All memory as numbers; a position of `take` is an index into it. */
  readonly f64: Float64Array;
  /** Room for `count` numbers (not cleared) on a 16-byte border. */
  take(count: number): number;
  /** Where the next `take` will start. */
  mark(): number;
  /** Gives back everything taken since `mark` returned this. */
  release(mark: number): void;
}

const PAGE = 8192; // numbers in a 64 kB page of WebAssembly memory
/** An idle memory that has grown beyond this many numbers (64 MB) is dropped. */
const KEEP = 8 * 1024 * 1024;
const MAX_IDLE = 4;

let compiled: WebAssembly.Module | null | undefined;
/** Memories between two uses. An engine reserves gigabytes of addresses for each, so they are not made lavishly. */
const idle: Arena[] = [];

/** A fresh memory; falls back to plain TypeScript. Most callers want {@link withArena}. */
export function createArena(): Arena {
  if (compiled === undefined) compiled = compile();
  return compiled ? wasmArena(compiled) : plainArena();
}

/** Lends a memory to `work`, which has it for itself also while it waits for something, if it is asynchronous. */
export function withArena<T>(work: (arena: Arena) => T): T {
  const arena = idle.pop() ?? createArena();
  const mark = arena.mark();
  const giveBack = () => {
    arena.release(mark);
    if (arena.f64.length <= KEEP && idle.length < MAX_IDLE) idle.push(arena);
  };
  let result: T;
  try {
    result = work(arena);
  } catch (error) {
    giveBack();
    throw error;
  }
  if (result instanceof Promise) return result.finally(giveBack) as T;
  giveBack();
  return result;
}

/** Copies `data` into fresh room. */
export function put(arena: Arena, data: Float64Array): number {
  const at = arena.take(data.length);
  arena.f64.set(data, at);
  return at;
}

/** Fresh room filled with zeros. */
export function takeZeros(arena: Arena, count: number): number {
  const at = arena.take(count);
  arena.f64.fill(0, at, at + count);
  return at;
}

/** The arena without WebAssembly: the fallback, and the oracle of the tests. */
export function plainArena(): Arena {
  let f64 = new Float64Array(PAGE);
  return stack(
    plainKernels(() => f64),
    0,
    () => f64,
    (count) => {
      const grown = new Float64Array(count);
      grown.set(f64);
      f64 = grown;
    },
  );
}

function compile(): WebAssembly.Module | null {
  try {
    const text = atob(wasmBytes);
    return new WebAssembly.Module(Uint8Array.from(text, (c) => c.charCodeAt(0)));
  } catch {
    // A page may forbid WebAssembly, an engine may lack SIMD: slower then, with the same results.
    return null;
  }
}

function wasmArena(module: WebAssembly.Module): Arena {
  const { exports } = new WebAssembly.Instance(module, {});
  const memory = exports.memory as WebAssembly.Memory;
  const heapBase = exports.heapBase as () => number;
  let f64 = new Float64Array(memory.buffer);
  return stack(
    exports as unknown as Kernels,
    heapBase(),
    () => f64,
    (count) => {
      memory.grow(Math.ceil((count - f64.length) / PAGE));
      f64 = new Float64Array(memory.buffer);
    },
  );
}

function stack(
  kernels: Kernels,
  base: number,
  view: () => Float64Array,
  grow: (count: number) => void,
): Arena {
  let top = base;
  return {
    kernels,
    get f64() {
      return view();
    },
    take(count) {
      const at = top;
      top += count + (count & 1);
      if (top > view().length) grow(Math.max(top, Math.min(2 * view().length, view().length + KEEP)));
      return at;
    },
    mark: () => top,
    release(mark) {
      top = mark;
    },
  };
}

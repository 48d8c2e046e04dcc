import type { JobContext } from '../job';
import { type Arena, put, takeZeros } from './kernels/arena';
import { productSteps, rowMajor, transposed } from './products';
import { runAsJob, runNow, type Steps } from './steps';

export interface MultiplyOptions {
  /** `a` is stored k×m and used transposed. @defaultValue false */
  readonly transposeA?: boolean;
  /** `b` is stored n×k and used transposed. @defaultValue false */
  readonly transposeB?: boolean;
}

/**
 * C = op(A) op(B), op(A) of m×k, op(B) of k×n, all row-major; the result is m×n. Runs to the end without a break, a second for
 * some 15 Gflop: {@link multiplyAsync} is for products that large.
 */
export function multiply(
  a: Float64Array,
  b: Float64Array,
  m: number,
  k: number,
  n: number,
  options: MultiplyOptions = {},
): Float64Array {
  checkLengths(a, b, m, k, n);
  return runNow((arena) => multiplySteps(arena, a, b, m, k, n, options));
}

/** {@link multiply} with progress in stage `product`; can be stopped. */
export async function multiplyAsync(
  a: Float64Array,
  b: Float64Array,
  m: number,
  k: number,
  n: number,
  options: MultiplyOptions,
  context: JobContext,
): Promise<Float64Array> {
  checkLengths(a, b, m, k, n);
  return runAsJob((arena) => multiplySteps(arena, a, b, m, k, n, options), 'product', 2 * m * k * n, context);
}

function* multiplySteps(
  arena: Arena,
  a: Float64Array,
  b: Float64Array,
  m: number,
  k: number,
  n: number,
  { transposeA = false, transposeB = false }: MultiplyOptions,
): Steps<Float64Array> {
  const pa = put(arena, a.subarray(0, m * k));
  const pb = put(arena, b.subarray(0, k * n));
  const pc = takeZeros(arena, m * n);
  const left = transposeA ? transposed(rowMajor(pa, m)) : rowMajor(pa, k);
  const right = transposeB ? transposed(rowMajor(pb, k)) : rowMajor(pb, n);
  yield* productSteps(arena, m, n, k, 1, left, right, pc, n);
  return arena.f64.slice(pc, pc + m * n);
}

function checkLengths(a: Float64Array, b: Float64Array, m: number, k: number, n: number): void {
  if (a.length < m * k) throw new RangeError(`left factor needs ${m}×${k} numbers, got ${a.length}`);
  if (b.length < k * n) throw new RangeError(`right factor needs ${k}×${n} numbers, got ${b.length}`);
}

/** The cols×rows transpose of a rows×cols matrix. */
export function transpose(a: Float64Array, rows: number, cols: number): Float64Array {
  const t = new Float64Array(rows * cols);
  for (let i = 0; i < rows; i++) for (let j = 0; j < cols; j++) t[j * rows + i] = a[i * cols + j];
  return t;
}

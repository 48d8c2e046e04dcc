import { put, takeZeros, withArena } from './kernels/arena';

export interface MultiplyOptions {
  /** `a` is stored k×m and used transposed. @defaultValue false */
  readonly transposeA?: boolean;
  /** `b` is stored n×k and used transposed. @defaultValue false */
  readonly transposeB?: boolean;
}

/**
 * C = op(A) op(B), op(A) of m×k, op(B) of k×n, all row-major; the result is m×n. Runs to the end without a break (30 Gflop
 * take about two seconds): split large products by rows where a stop must be heard.
 */
export function multiply(
  a: Float64Array,
  b: Float64Array,
  m: number,
  k: number,
  n: number,
  options: MultiplyOptions = {},
): Float64Array {
  if (a.length < m * k) throw new RangeError(`left factor needs ${m}×${k} numbers, got ${a.length}`);
  if (b.length < k * n) throw new RangeError(`right factor needs ${k}×${n} numbers, got ${b.length}`);
  return withArena((arena) => {
    const pa = put(arena, a.subarray(0, m * k));
    const pb = put(arena, b.subarray(0, k * n));
    const pc = takeZeros(arena, m * n);
    const [ars, acs] = options.transposeA ? [1, m] : [k, 1];
    const [brs, bcs] = options.transposeB ? [1, k] : [n, 1];
    arena.kernels.gemm(m, n, k, 1, pa, ars, acs, pb, brs, bcs, pc, n);
    return arena.f64.slice(pc, pc + m * n);
  });
}

/** The cols×rows transpose of a rows×cols matrix. */
export function transpose(a: Float64Array, rows: number, cols: number): Float64Array {
  const t = new Float64Array(rows * cols);
  for (let i = 0; i < rows; i++) for (let j = 0; j < cols; j++) t[j * rows + i] = a[i * cols + j];
  return t;
}

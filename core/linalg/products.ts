import type { Arena } from './kernels/arena';
import type { Steps } from './steps';

/** A matrix in an arena: element (i, j) at `at` + i·rows + j·cols. */
export interface Strided {
  readonly at: number;
  readonly rows: number;
  readonly cols: number;
}

/** Row-major matrix with rows of `ld` numbers. */
export const rowMajor = (at: number, ld: number): Strided => ({ at, rows: ld, cols: 1 });

export const transposed = ({ at, rows, cols }: Strided): Strided => ({ at, rows: cols, cols: rows });

/** Floating-point operations between two yields: 10 to 20 ms. */
const PER_STEP = 3e8;

/** C(m×n, rows of ldc) += alpha·A·B by bands of rows; yields operations done. */
export function* productSteps(
  arena: Arena,
  m: number,
  n: number,
  k: number,
  alpha: number,
  a: Strided,
  b: Strided,
  c: number,
  ldc: number,
): Steps<void> {
  const band = Math.max(96, Math.floor(PER_STEP / (2 * n * k + 1)));
  for (let from = 0; from < m; from += band) {
    const rows = Math.min(band, m - from);
    const left = a.at + from * a.rows;
    arena.kernels.gemm(rows, n, k, alpha, left, a.rows, a.cols, b.at, b.rows, b.cols, c + from * ldc, ldc);
    yield 2 * rows * n * k;
  }
}

/** Lower triangle of G = W Wᵀ for `count` rows of `length` numbers, G with rows of `count`; yields operations done. */
export function* gramSteps(arena: Arena, w: number, count: number, length: number, g: number): Steps<void> {
  const band = Math.max(96, Math.floor(PER_STEP / (2 * count * length + 1)));
  for (let from = 0; from < count; from += band) {
    const rows = Math.min(band, count - from);
    const to = g + from * count;
    for (let i = 0; i < rows; i++) arena.f64.fill(0, to + i * count, to + i * count + from + rows);
    arena.kernels.gemm(rows, from + rows, length, 1, w + from * length, length, 1, w, 1, length, to, count);
    yield 2 * rows * (from + rows) * length;
  }
}

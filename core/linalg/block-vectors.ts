import type { Arena } from './kernels/arena';
import { transpose } from './multiply';
import type { Planes } from './planes';

/**
 * Rows of complex (or real) vectors of length n in an arena. A row is [Re | Im], 2n numbers, or n when real. The memory is
 * taken once, so views into it stay valid as long as nothing else grows the arena.
 */
export interface BlockVectors {
  readonly arena: Arena;
  readonly n: number;
  readonly complex: boolean;
  /** Numbers in a row. */
  readonly width: number;
  readonly at: number;
}

export function takeBlock(arena: Arena, rows: number, n: number, complex: boolean): BlockVectors {
  const width = complex ? 2 * n : n;
  return { arena, n, complex, width, at: arena.take(rows * width) };
}

/** The block that starts at row `from` of `x`. */
export const rowsFrom = (x: BlockVectors, from: number): BlockVectors => ({
  ...x,
  at: x.at + from * x.width,
});

/** Row i as two planes that share the arena's memory. */
export function rowPlanes({ arena, n, complex, width, at }: BlockVectors, i: number): Planes {
  const start = at + i * width;
  const re = arena.f64.subarray(start, start + n);
  return { re, im: arena.f64.subarray(start + n, complex ? start + 2 * n : start + n) };
}

/** Row i as one array of `width` numbers that shares the arena's memory. */
export function rowNumbers({ arena, width, at }: BlockVectors, i: number): Float64Array {
  return arena.f64.subarray(at + i * width, at + (i + 1) * width);
}

/** S_ij = ⟨x_i|y_j⟩, xs×ys row-major planes. */
export function overlaps(x: BlockVectors, xs: number, y: BlockVectors, ys: number): Planes {
  const { arena, n, width, complex } = x;
  const mark = arena.mark();
  const re = arena.take(xs * ys);
  const im = arena.take(xs * ys);
  arena.f64.fill(0, re, re + xs * ys);
  arena.f64.fill(0, im, im + xs * ys);
  const { gemm } = arena.kernels;
  gemm(xs, ys, width, 1, x.at, width, 1, y.at, 1, width, re, ys);
  if (complex) {
    gemm(xs, ys, n, 1, x.at, width, 1, y.at + n, 1, width, im, ys);
    gemm(xs, ys, n, -1, x.at + n, width, 1, y.at, 1, width, im, ys);
  }
  const result = {
    re: arena.f64.slice(re, re + xs * ys),
    im: complex ? arena.f64.slice(im, im + xs * ys) : new Float64Array(0),
  };
  arena.release(mark);
  return result;
}

/** y_i += alpha Σ_j c_ij x_j for ys rows, with c of ys×xs. */
export function addCombination(
  y: BlockVectors,
  ys: number,
  alpha: number,
  c: Planes,
  x: BlockVectors,
  xs: number,
) {
  const { arena, n, width, complex } = x;
  const mark = arena.mark();
  const re = arena.take(ys * xs);
  arena.f64.set(c.re.subarray(0, ys * xs), re);
  const { gemm } = arena.kernels;
  gemm(ys, width, xs, alpha, re, xs, 1, x.at, width, 1, y.at, width);
  if (complex) {
    arena.f64.set(c.im.subarray(0, ys * xs), re);
    gemm(ys, n, xs, -alpha, re, xs, 1, x.at + n, width, 1, y.at, width);
    gemm(ys, n, xs, alpha, re, xs, 1, x.at, width, 1, y.at + n, width);
  }
  arena.release(mark);
}

/**
 * Makes the `count` rows of x from row `from` on orthonormal among themselves and to the `from` rows before (orthonormal
 * already), dropping what depends on the others; returns how many are left, moved together.
 */
export function orthonormaliseRows(x: BlockVectors, from: number, count: number): number {
  const { width } = x;
  const block = rowsFrom(x, from);
  for (let i = 0; i < count; i++) scaleRow(rowNumbers(block, i));
  // Twice is enough; the second time repairs what cancelled in the first.
  for (let pass = 0; pass < 2; pass++) removePart(block, count, x, from);
  let kept = 0;
  for (let i = 0; i < count; i++) {
    const row = rowsFrom(block, i);
    let left = scaleRow(rowNumbers(row, 0));
    for (let pass = 0; pass < 3 && left >= DEPENDENT; pass++) {
      removePart(row, 1, block, kept);
      const now = scaleRow(rowNumbers(row, 0));
      left *= now;
      if (now > 0.7) break;
      // Much of it was in this block: what is left may lean on the old rows again.
      removePart(row, 1, x, from);
    }
    if (left < DEPENDENT) continue;
    if (kept < i) x.arena.f64.copyWithin(block.at + kept * width, row.at, row.at + width);
    kept++;
  }
  return kept;
}

/** A unit vector with less than this outside the others depends on them. */
const DEPENDENT = 1e-8;

/** Takes the part along the (orthonormal) rows of x out of the rows of y. */
function removePart(y: BlockVectors, ys: number, x: BlockVectors, xs: number): void {
  if (xs === 0) return;
  const s = overlaps(x, xs, y, ys);
  const im = x.complex ? transpose(s.im, xs, ys) : s.im;
  addCombination(y, ys, -1, { re: transpose(s.re, xs, ys), im }, x, xs);
}

/** Divides by the norm, which is returned; a row of zeros stays. */
function scaleRow(x: Float64Array): number {
  let sum = 0;
  for (let k = 0; k < x.length; k++) sum += x[k] * x[k];
  const size = Math.sqrt(sum);
  if (size > 0) for (let k = 0; k < x.length; k++) x[k] /= size;
  return size;
}

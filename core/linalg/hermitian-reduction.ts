import type { Arena } from './kernels/arena';
import { complexReflectorInPlace } from './kernels/plain-hermitian';
import type { Steps } from './steps';

/** As in the real reduction: reflectors of one panel, leading part without panels, rows of one update, group size. */
const PANEL = 24;
const SMALL = 120;
const BAND = 192;
const GROUP = 48;

/** Work units of {@link reduceHermitianSteps} and {@link applyComplexReflectorSteps}. */
export const hermitianReductionWork = (n: number) => (16 / 3) * n ** 3;
export const complexReflectorWork = (rows: number, n: number) => 8 * rows * n ** 2;

/** Where the planes of the matrix and what the reduction leaves are. */
export interface HermitianPlaces {
  readonly n: number;
  /** Planes of A, row stride n, lower triangle; row i keeps u_i (columns < i) afterwards. */
  readonly ar: number;
  readonly ai: number;
  /** Diagonal of T; T_{i,i−1} = tr[i] + i·ti[i]; h[i] = ‖u_i‖²/2 or 0. */
  readonly d: number;
  readonly tr: number;
  readonly ti: number;
  readonly h: number;
}

/**
 * Householder reduction of a Hermitian matrix to tridiagonal T, A = Q T Q†, Q = H_{n−1} ⋯ H_1, by panels like the
 * real one. A complex vector x of the panel is kept as two rows of 2n real numbers, [Re x | Im x] and i·x = [−Im x | Re x],
 * so that complex sums and overlaps are real kernels of twice the length.
 */
export function* reduceHermitianSteps(arena: Arena, places: HermitianPlaces): Steps<void> {
  const { kernels } = arena;
  const { n, ar, ai, d, tr, ti, h } = places;
  const wide = 2 * n;
  const mark = arena.mark();
  const scratch = arena.take(wide);
  const factors = arena.take(PANEL);
  const size = PANEL * wide;
  const us = arena.take(4 * size);
  const ius = us + size;
  const ws = ius + size;
  const iws = ws + size;
  let top = n;
  while (top > SMALL) {
    const bottom = top - PANEL;
    arena.f64.fill(0, us, us + 4 * size);
    for (let i = top - 1, count = 0; i >= bottom; i--, count++) {
      reducePanelRow(i, count);
      yield 8 * i * i;
    }
    for (let from = 0; from < bottom; from += BAND) {
      const rows = Math.min(BAND, bottom - from);
      const re = ar + from * n;
      const im = ai + from * n;
      const product = (alpha: number, left: number, right: number, to: number) =>
        kernels.gemm(rows, from + rows, 2 * PANEL, alpha, left + from, 1, n, right, n, 1, to, n);
      // A −= u w† + w u†, with [Re | Im] read as two rows of n.
      product(-1, us, ws, re);
      product(-1, ws, us, re);
      product(1, ius, ws, im);
      product(1, iws, us, im);
      yield 16 * PANEL * rows * (from + rows / 2);
    }
    top = bottom;
  }
  kernels.reduceHermitian(ar, ai, n, top, d, tr, ti, h, scratch);
  arena.release(mark);
  yield (16 / 3) * top ** 3;

  function reducePanelRow(i: number, count: number): void {
    const m = arena.f64;
    const rowRe = ar + i * n;
    const rowIm = ai + i * n;
    const u = us + count * wide;
    const w = ws + count * wide;
    // x = the column above the diagonal = conjugate of row i, brought up to date with this panel's reflectors.
    m.copyWithin(u, rowRe, rowRe + i + 1);
    for (let k = 0; k <= i; k++) m[u + n + k] = -m[rowIm + k];
    for (const [left, right, iRight] of [
      [us, ws, iws],
      [ws, us, ius],
    ]) {
      for (let p = 0; p < count; p++) m[factors + p] = -m[left + p * wide + i];
      kernels.addRows(right, wide, count, factors, 1, u, wide);
      for (let p = 0; p < count; p++) m[factors + p] = m[left + p * wide + n + i];
      kernels.addRows(iRight, wide, count, factors, 1, u, wide);
    }
    m[d + i] = m[u + i];
    m.fill(0, u + i, u + n);
    m.fill(0, u + n + i, u + wide);
    const { re, im, norm } = complexReflectorInPlace(m, u, u + n, i);
    m[tr + i] = re;
    m[ti + i] = -im;
    m[h + i] = norm;
    if (norm === 0) {
      m.fill(0, u, u + wide);
      return;
    }
    m.copyWithin(rowRe, u, u + i);
    m.copyWithin(rowIm, u + n, u + n + i);
    timesI(ius + count * wide, u);
    kernels.hermitianTimes(ar, ai, n, i, u, u + n, w, w + n);
    for (const [left, iLeft, right, iRight] of [
      [ws, iws, us, ius],
      [us, ius, ws, iws],
    ]) {
      kernels.rowDots(left, wide, count, u, wide, factors);
      subtractRows(right, w, count);
      kernels.rowDots(iLeft, wide, count, u, wide, factors);
      subtractRows(iRight, w, count);
    }
    let overlap = 0;
    for (let k = 0; k < wide; k++) overlap += m[u + k] * m[w + k];
    const shift = overlap / (norm + norm);
    for (let k = 0; k < wide; k++) m[w + k] = (m[w + k] - shift * m[u + k]) / norm;
    timesI(iws + count * wide, w);
  }

  function subtractRows(rows: number, y: number, count: number): void {
    const m = arena.f64;
    for (let p = 0; p < count; p++) m[factors + p] = -m[factors + p];
    kernels.addRows(rows, wide, count, factors, 1, y, wide);
  }

  function timesI(to: number, x: number): void {
    const m = arena.f64;
    for (let k = 0; k < n; k++) m[to + k] = -m[x + n + k];
    m.copyWithin(to + n, x, x + n);
  }
}

/** Rows x of the planes at `xr`, `xi` (`count` rows, stride n) become Q x. */
export function* applyComplexReflectorSteps(
  arena: Arena,
  places: HermitianPlaces,
  xr: number,
  xi: number,
  count: number,
): Steps<void> {
  const { kernels } = arena;
  const { n, ar, ai, h } = places;
  const mark = arena.mark();
  const ur = arena.take(GROUP * n);
  const ui = arena.take(GROUP * n);
  const tRe = arena.take(GROUP * GROUP);
  const tIm = arena.take(GROUP * GROUP);
  const dots = arena.take(4 * GROUP);
  const work = arena.take(4 * BAND * GROUP);
  for (let from = 1; from < n; from += GROUP) {
    const size = Math.min(GROUP, n - from);
    const length = from + size - 1;
    gather(from, size, length);
    for (let first = 0; first < count; first += BAND) {
      const rows = Math.min(BAND, count - first);
      const [sr, si, fr, fi] = [0, 1, 2, 3].map((i) => work + i * rows * size);
      const re = xr + first * n;
      const im = xi + first * n;
      arena.f64.fill(0, work, work + 4 * rows * size);
      // S = X Ūᵀ
      const overlap = (sign: number, x: number, u: number, to: number) =>
        kernels.gemm(rows, size, length, sign, x, n, 1, u, 1, n, to, size);
      overlap(1, re, ur, sr);
      overlap(1, im, ui, sr);
      overlap(1, im, ur, si);
      overlap(-1, re, ui, si);
      // F = S T
      const weigh = (sign: number, s: number, t: number, to: number) =>
        kernels.gemm(rows, size, size, sign, s, size, 1, t, size, 1, to, size);
      weigh(1, sr, tRe, fr);
      weigh(-1, si, tIm, fr);
      weigh(1, sr, tIm, fi);
      weigh(1, si, tRe, fi);
      // X −= F U
      const subtract = (sign: number, f: number, u: number, to: number) =>
        kernels.gemm(rows, length, size, sign, f, size, 1, u, n, 1, to, n);
      subtract(-1, fr, ur, re);
      subtract(1, fi, ui, re);
      subtract(-1, fr, ui, im);
      subtract(-1, fi, ur, im);
      yield 16 * rows * size * (from + size / 2);
    }
  }
  arena.release(mark);

  /** Copies the group's reflectors, padded, and builds T with H_from ⋯ = 1 − Ūᵀ T U on rows. */
  function gather(from: number, size: number, length: number): void {
    const m = arena.f64;
    m.fill(0, tRe, tRe + size * size);
    m.fill(0, tIm, tIm + size * size);
    for (let j = 0; j < size; j++) {
      const i = from + j;
      const norm = m[h + i];
      m.fill(0, ur + j * n, ur + j * n + length);
      m.fill(0, ui + j * n, ui + j * n + length);
      if (norm === 0) continue;
      m.copyWithin(ur + j * n, ar + i * n, ar + i * n + i);
      m.copyWithin(ui + j * n, ai + i * n, ai + i * n + i);
      const [rr, ii, ir, ri] = [0, 1, 2, 3].map((part) => dots + part * GROUP);
      kernels.rowDots(ur, n, j, ur + j * n, length, rr);
      kernels.rowDots(ui, n, j, ui + j * n, length, ii);
      kernels.rowDots(ui, n, j, ur + j * n, length, ir);
      kernels.rowDots(ur, n, j, ui + j * n, length, ri);
      for (let r = 0; r < j; r++) {
        let sr = 0;
        let si = 0;
        for (let c = r; c < j; c++) {
          const re = m[rr + c] + m[ii + c];
          const im = m[ir + c] - m[ri + c];
          sr += m[tRe + r * size + c] * re - m[tIm + r * size + c] * im;
          si += m[tRe + r * size + c] * im + m[tIm + r * size + c] * re;
        }
        m[tRe + r * size + j] = -sr / norm;
        m[tIm + r * size + j] = -si / norm;
      }
      m[tRe + j * size + j] = 1 / norm;
    }
  }
}

import type { Arena } from './kernels/arena';
import { reflectorInPlace } from './kernels/plain-triangle';
import { applyGroup, BAND, buildTriangle, GROUP, groupRoom } from './reflector-group';
import type { Steps } from './steps';

/** Reflectors collected before the rest of the matrix is updated by one matrix product. Measured best: 16 to 48. */
const PANEL = 32;
/** Leading square that is reduced without panels: it fits the cache. */
const SMALL = 160;

/** Work units of {@link reduceSteps}. */
export const reductionWork = (n: number) => (4 / 3) * n ** 3;
/** Work units of {@link applyReflectorSteps} on `rows` rows. */
export const reflectorWork = (rows: number, n: number) => 2 * rows * n ** 2;

/**
 * Householder reduction of the symmetric matrix at `a` (lower triangle, row stride n) to tridiagonal form T with A = Q T Qᵀ,
 * Q = H_{n−1} ⋯ H_1, H_i = 1 − u_i u_iᵀ/h_i with u_i in row i (columns < i) and h at `h` (0 for none). Diagonal at `d`, off-diagonal
 * T_{i+1,i} at e[i].
 *
 * Half the work, A u for each step, reads the triangle from memory. The other half, the rank-two updates, is put off
 * for a panel of rows and done by matrix products (Dongarra, Sorensen & Hammarling 1989, quoted from memory).
 */
export function* reduceSteps(
  arena: Arena,
  a: number,
  n: number,
  d: number,
  e: number,
  h: number,
): Steps<void> {
  const { kernels } = arena;
  const mark = arena.mark();
  const scratch = arena.take(n);
  const factors = arena.take(PANEL);
  // Rows U, W, U again: (U;W) and (W;U) are then both one block of 2·PANEL rows.
  const panel = arena.take(3 * PANEL * n);
  const us = panel;
  const ws = panel + PANEL * n;
  const usAgain = ws + PANEL * n;
  let top = n;
  while (top > SMALL) {
    const bottom = top - PANEL;
    for (let i = top - 1, count = 0; i >= bottom; i--, count++) {
      reducePanelRow(i, count);
      yield 2 * i * i;
    }
    for (let from = 0; from < bottom; from += BAND) {
      const rows = Math.min(BAND, bottom - from);
      const row = a + from * n;
      kernels.gemm(rows, from + rows, 2 * PANEL, -1, us + from, 1, n, ws, n, 1, row, n);
      yield 4 * PANEL * rows * (from + rows / 2);
    }
    top = bottom;
  }
  kernels.reduceTriangle(a, n, top, 1, d, e, h, scratch);
  arena.release(mark);
  yield (4 / 3) * top ** 3;

  function reducePanelRow(i: number, count: number): void {
    const m = arena.f64;
    const row = a + i * n;
    // Bring row i up to date with the reflectors of this panel.
    addPanel(us, ws, i, row, i + 1, count);
    addPanel(ws, us, i, row, i + 1, count);
    m[d + i] = m[row + i];
    const { beta, norm } = reflectorInPlace(m, row, i);
    m[e + i - 1] = beta;
    m[h + i] = norm;
    const u = us + count * n;
    const w = ws + count * n;
    if (norm === 0) {
      for (const line of [u, w, usAgain + count * n]) m.fill(0, line, line + i);
      return;
    }
    m.copyWithin(u, row, row + i);
    m.copyWithin(usAgain + count * n, row, row + i);
    kernels.triangleTimes(a, n, i, 1, row, w);
    kernels.rowDots(ws, n, count, row, i, factors);
    subtractRows(us, w, i, count);
    kernels.rowDots(us, n, count, row, i, factors);
    subtractRows(ws, w, i, count);
    let overlap = 0;
    for (let k = 0; k < i; k++) overlap += m[w + k] * m[row + k];
    const shift = overlap / (norm + norm);
    for (let k = 0; k < i; k++) m[w + k] = (m[w + k] - shift * m[row + k]) / norm;
  }

  /** y −= Σ_p left_p[i]·right_p */
  function addPanel(left: number, right: number, i: number, y: number, length: number, count: number) {
    const m = arena.f64;
    for (let p = 0; p < count; p++) m[factors + p] = m[left + p * n + i];
    subtractRows(right, y, length, count);
  }

  function subtractRows(rows: number, y: number, length: number, count: number) {
    const m = arena.f64;
    for (let p = 0; p < count; p++) m[factors + p] = -m[factors + p];
    kernels.addRows(rows, n, count, factors, 1, y, length);
  }
}

/**
 * Rows x of `vectors` (`count` rows, stride n) become Q x, Q = H_{n−1} ⋯ H_1 as left at `a` and `h` by {@link reduceSteps}.
 */
export function* applyReflectorSteps(
  arena: Arena,
  a: number,
  h: number,
  n: number,
  vectors: number,
  count: number,
): Steps<void> {
  const mark = arena.mark();
  const us = arena.take(GROUP * n);
  const t = groupRoom(arena);
  for (let from = 1; from < n; from += GROUP) {
    const size = Math.min(GROUP, n - from);
    const length = from + size - 1; // the longest u of the group
    const m = arena.f64;
    for (let j = 0; j < size; j++) {
      const i = from + j;
      m.fill(0, us + j * n, us + j * n + length);
      if (m[h + i] !== 0) m.copyWithin(us + j * n, a + i * n, a + i * n + i);
    }
    const group = { us, ld: n, size, length, t };
    buildTriangle(arena, group, (j) => m[h + from + j]);
    for (let first = 0; first < count; first += BAND) {
      const rows = Math.min(BAND, count - first);
      applyGroup(arena, group, vectors + first * n, n, rows);
      yield 4 * rows * size * (from + size / 2);
    }
  }
  arena.release(mark);
}

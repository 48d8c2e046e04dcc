import type { JobContext } from '../job';
import { type Arena, takeZeros } from './kernels/arena';
import { TINY } from './kernels/plain-triangle';
import { applyGroup, BAND, buildTriangle, groupRoom } from './reflector-group';
import { runAsJob, type Steps } from './steps';

/** A = QR: Q rows×cols with orthonormal columns, R cols×cols upper triangular, both row-major. */
export interface ThinQr {
  readonly rows: number;
  readonly cols: number;
  readonly q: Float64Array;
  readonly r: Float64Array;
}

/** Columns factored before the rest is updated by matrix products. */
const PANEL = 32;

/**
 * Thin Householder QR of a rows×cols matrix, rows ≥ cols. R may have a diagonal of either sign. Rank deficiency is fine:
 * Q stays orthonormal and R gets small rows. Progress in stage `qr`.
 */
export async function householderQr(
  a: Float64Array,
  rows: number,
  cols: number,
  context: JobContext,
): Promise<ThinQr> {
  if (rows < cols) throw new RangeError(`householderQr: ${rows}×${cols}; expected rows ≥ cols`);
  if (a.length < rows * cols) throw new RangeError(`householderQr: ${a.length} numbers for ${rows}×${cols}`);
  const total = 4 * cols * cols * rows;
  return runAsJob((arena) => qrSteps(arena, a, rows, cols), 'qr', total, context);
}

function* qrSteps(arena: Arena, a: Float64Array, rows: number, cols: number): Steps<ThinQr> {
  // Columns of A are rows here, so that reflectors and what they act on run along memory.
  const t = arena.take(cols * rows);
  const qt = takeZeros(arena, cols * rows);
  const h = takeZeros(arena, cols);
  const dots = arena.take(PANEL);
  const us = arena.take(PANEL * rows);
  const room = groupRoom(arena);
  const m = arena.f64;
  for (let i = 0; i < rows; i++) for (let j = 0; j < cols; j++) m[t + j * rows + i] = a[i * cols + j];
  const r = new Float64Array(cols * cols);

  for (let from = 0; from < cols; from += PANEL) {
    const size = Math.min(PANEL, cols - from);
    for (let j = from; j < from + size; j++) factorColumn(j, from + size);
    yield 4 * size * size * (rows - from);
    const group = gather(from, size);
    for (let first = from + size; first < cols; first += BAND) {
      const some = Math.min(BAND, cols - first);
      applyGroup(arena, group, t + first * rows + from, rows, some);
      yield 4 * size * some * (rows - from);
    }
  }

  for (let j = 0; j < cols; j++) m[qt + j * rows + j] = 1;
  const lastPanel = Math.floor((cols - 1) / PANEL) * PANEL;
  for (let from = lastPanel; from >= 0; from -= PANEL) {
    const size = Math.min(PANEL, cols - from);
    const group = gather(from, size);
    // Q e_j = e_j for the columns before `from`, still untouched.
    for (let first = from; first < cols; first += BAND) {
      const some = Math.min(BAND, cols - first);
      applyGroup(arena, group, qt + first * rows + from, rows, some, true);
      yield 4 * size * some * (rows - from);
    }
  }
  const q = new Float64Array(rows * cols);
  for (let i = 0; i < rows; i++) for (let j = 0; j < cols; j++) q[i * cols + j] = m[qt + j * rows + i];
  return { rows, cols, q, r };

  /** Makes column j's reflector from its numbers j… and applies it to the other columns of the panel. */
  function factorColumn(j: number, end: number): void {
    const x = t + j * rows;
    for (let k = 0; k <= j; k++) r[k * cols + j] = m[x + k];
    let scale = 0;
    for (let k = j; k < rows; k++) scale = Math.max(scale, Math.abs(m[x + k]));
    if (scale < TINY) {
      r[j * cols + j] = m[x + j];
      return;
    }
    let sum = 0;
    for (let k = j; k < rows; k++) {
      m[x + k] /= scale;
      sum += m[x + k] * m[x + k];
    }
    const pivot = m[x + j];
    const beta = pivot >= 0 ? -Math.sqrt(sum) : Math.sqrt(sum);
    r[j * cols + j] = scale * beta;
    m[x + j] = pivot - beta;
    const norm = sum - pivot * beta;
    m[h + j] = norm;
    const others = end - j - 1;
    const next = x + rows + j;
    arena.kernels.rowDots(next, rows, others, x + j, rows - j, dots);
    arena.kernels.gemm(others, rows - j, 1, -1 / norm, dots, 1, 1, x + j, 1, 1, next, rows);
  }

  /** Reflectors from…from+size without the numbers of R beside them, counted from column position `from`. */
  function gather(from: number, size: number) {
    const length = rows - from;
    for (let i = 0; i < size; i++) {
      const row = us + i * rows;
      m.fill(0, row, row + i);
      const u = t + (from + i) * rows + from;
      if (m[h + from + i] === 0) m.fill(0, row, row + length);
      else m.copyWithin(row + i, u + i, u + length);
    }
    const group = { us, ld: rows, size, length, t: room };
    buildTriangle(arena, group, (i) => m[h + from + i]);
    return group;
  }
}

import type { JobContext } from '../job';

/** A = QR: Q rows×cols with orthonormal columns, R cols×cols upper triangular, both row-major. */
export interface ThinQr {
  readonly rows: number;
  readonly cols: number;
  readonly q: Float64Array;
  readonly r: Float64Array;
}

/** Thin Householder QR of a rows×cols matrix, rows ≥ cols. Rank deficiency is fine: Q stays orthonormal. */
export async function householderQr(
  a: Float64Array,
  rows: number,
  cols: number,
  context: JobContext,
): Promise<ThinQr> {
  if (rows < cols) throw new RangeError(`householderQr: ${rows}×${cols}; expected rows ≥ cols`);
  // Columns as contiguous rows.
  const t = new Float64Array(cols * rows);
  for (let i = 0; i < rows; i++) for (let j = 0; j < cols; j++) t[j * rows + i] = a[i * cols + j];
  const h = new Float64Array(cols);
  const r = new Float64Array(cols * cols);
  for (let j = 0; j < cols; j++) {
    const rj = j * rows;
    let norm = 0;
    for (let k = j; k < rows; k++) norm = Math.max(norm, Math.abs(t[rj + k]));
    let sum = 0;
    if (norm > 0) for (let k = j; k < rows; k++) sum += (t[rj + k] / norm) ** 2;
    const size = norm * Math.sqrt(sum);
    for (let k = 0; k < j; k++) r[k * cols + j] = t[rj + k];
    if (size === 0) continue;
    const sign = t[rj + j] >= 0 ? 1 : -1;
    r[j * cols + j] = -sign * size;
    // u = x/size + sign·e_j, h = ‖u‖²/2 = 1 + |x_j|/size
    for (let k = j; k < rows; k++) t[rj + k] /= size;
    h[j] = 1 + Math.abs(t[rj + j]);
    t[rj + j] += sign;
    for (let i = j + 1; i < cols; i++) reflect(t, i * rows, rj, j, rows, h[j]);
    if (j % 8 === 0) {
      context.report('qr', j, 2 * cols);
      await context.checkpoint();
    }
  }
  const qt = new Float64Array(cols * rows);
  for (let j = 0; j < cols; j++) qt[j * rows + j] = 1;
  for (let j = cols - 1; j >= 0; j--) {
    if (h[j] !== 0) for (let i = j; i < cols; i++) reflectInto(qt, i * rows, t, j * rows, j, rows, h[j]);
    if (j % 8 === 0) {
      context.report('qr', 2 * cols - j, 2 * cols);
      await context.checkpoint();
    }
  }
  const q = new Float64Array(rows * cols);
  for (let j = 0; j < cols; j++) for (let i = 0; i < rows; i++) q[i * cols + j] = qt[j * rows + i];
  return { rows, cols, q, r };
}

function reflect(t: Float64Array, row: number, u: number, from: number, to: number, h: number): void {
  reflectInto(t, row, t, u, from, to, h);
}

function reflectInto(
  x: Float64Array,
  row: number,
  t: Float64Array,
  u: number,
  from: number,
  to: number,
  h: number,
): void {
  let s = 0;
  for (let k = from; k < to; k++) s += x[row + k] * t[u + k];
  s /= h;
  for (let k = from; k < to; k++) x[row + k] -= s * t[u + k];
}

import type { JobContext } from '../job';
import { type Arena, withArena } from './kernels/arena';
import { runNow, type Steps } from './steps';

/** A positive semidefinite matrix that is asked for one row at a time. */
export interface RowSource {
  readonly n: number;
  /** The diagonal, length n. Not modified. */
  readonly diagonal: Float64Array;
  /** Writes row i (n numbers) into `out`. */
  rowInto(out: Float64Array, i: number): void;
}

export interface CholeskyOptions {
  /** Stop once the trace of the remainder is at most this (units of the matrix). @defaultValue 0 */
  readonly threshold?: number;
  /** Largest number of columns. @defaultValue n */
  readonly maxRank?: number;
}

/** A ≈ Σ_j c_j c_jᵀ; row j of `vectors` (length n) is c_j. */
export interface PivotedCholesky {
  readonly n: number;
  readonly rank: number;
  readonly vectors: Float64Array;
  /** The row chosen in each step. */
  readonly pivots: Int32Array;
  /** Trace of A − Σ c cᵀ, an upper bound of its norm as long as A is positive semidefinite. */
  readonly residualTrace: number;
}

/** Two candidates for the pivot closer than this, relative, count as equal and the lowest index wins. */
const PIVOT_TIE = 1e-6;
/** A remainder below this part of the largest diagonal element is rounding noise. */
const NOISE = 1e-15;

/**
 * Pivoted Cholesky decomposition of a positive semidefinite matrix: A = Σ_j c_j c_jᵀ + remainder. Pivot: largest
 * remaining diagonal element; among those within 1e-6 relative the lowest index.
 *
 * @remarks Stops at the threshold, at `maxRank`, or once the remaining diagonal is below 1e-15 of the largest element (what is
 * then left is rounding, and is in `residualTrace`). A negative direction of A is not found: it stays in the
 * remainder, which is then no longer bounded by its trace.
 */
export function pivotedCholesky(source: RowSource, options: CholeskyOptions = {}): PivotedCholesky {
  return runNow((arena) => choleskySteps(arena, source, options));
}

/** {@link pivotedCholesky} with progress in stage `cholesky` (columns found, of unknown number). */
export function pivotedCholeskyAsync(
  source: RowSource,
  options: CholeskyOptions,
  context: JobContext,
): Promise<PivotedCholesky> {
  return withArena(async (arena) => {
    const steps = choleskySteps(arena, source, options);
    for (let columns = 1; ; columns++) {
      const step = steps.next();
      if (step.done) return step.value;
      context.report('cholesky', columns, null);
      await context.checkpoint();
    }
  });
}

/** Row source of a dense row-major matrix. */
export function denseRows(a: Float64Array, n: number): RowSource {
  const diagonal = new Float64Array(n);
  for (let i = 0; i < n; i++) diagonal[i] = a[i * n + i];
  return { n, diagonal, rowInto: (out, i) => out.set(a.subarray(i * n, i * n + n)) };
}

function* choleskySteps(arena: Arena, source: RowSource, options: CholeskyOptions): Steps<PivotedCholesky> {
  const { n } = source;
  const threshold = options.threshold ?? 0;
  const maxRank = Math.min(n, options.maxRank ?? n);
  const d = Float64Array.from(source.diagonal);
  const floor = NOISE * d.reduce((max, x) => Math.max(max, x), 0);
  const fresh = new Float64Array(n);
  const ld = n + (n & 1); // rows taken one after another then lie without gaps
  const start = arena.mark();
  const pivots: number[] = [];
  let trace = positiveTrace(d);
  while (pivots.length < maxRank && trace > threshold) {
    const p = choosePivot(d);
    if (p < 0 || d[p] <= floor) break;
    source.rowInto(fresh, p);
    const row = arena.take(n);
    const m = arena.f64;
    // −(A_p − Σ_j c_j[p] c_j), then divided by −√d.
    for (let k = 0; k < n; k++) m[row + k] = -fresh[k];
    arena.kernels.addRows(start, ld, pivots.length, start + p, ld, row, n);
    const root = Math.sqrt(d[p]);
    const c = m.subarray(row, row + n);
    for (let k = 0; k < n; k++) c[k] /= -root;
    for (const q of pivots) c[q] = 0;
    c[p] = root;
    for (let k = 0; k < n; k++) d[k] -= c[k] * c[k];
    d[p] = 0;
    pivots.push(p);
    trace = positiveTrace(d);
    yield 1;
  }
  const rank = pivots.length;
  const vectors = new Float64Array(rank * n);
  for (let j = 0; j < rank; j++) {
    const row = start + j * ld;
    vectors.set(arena.f64.subarray(row, row + n), j * n);
  }
  return { n, rank, vectors, pivots: Int32Array.from(pivots), residualTrace: trace };
}

function choosePivot(d: Float64Array): number {
  let max = 0;
  for (let k = 0; k < d.length; k++) if (d[k] > max) max = d[k];
  return max > 0 ? d.findIndex((x) => x >= max * (1 - PIVOT_TIE)) : -1;
}

function positiveTrace(d: Float64Array): number {
  let trace = 0;
  for (let k = 0; k < d.length; k++) if (d[k] > 0) trace += d[k];
  return trace;
}

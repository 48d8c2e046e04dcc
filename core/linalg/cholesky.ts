import type { JobContext } from '../job';

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
 * Pivoted Cholesky decomposition. Pivot: largest remaining diagonal element; among those within 1e-6 relative
 * the lowest index.
 */
export function pivotedCholesky(source: RowSource, options: CholeskyOptions = {}): PivotedCholesky {
  const steps = choleskySteps(source, options);
  for (;;) {
    const step = steps.next();
    if (step.done) return step.value;
  }
}

/** {@link pivotedCholesky} that reports the falling remainder and can be stopped. */
export async function pivotedCholeskyAsync(
  source: RowSource,
  options: CholeskyOptions,
  context: JobContext,
): Promise<PivotedCholesky> {
  const steps = choleskySteps(source, options);
  for (;;) {
    const step = steps.next();
    if (step.done) return step.value;
    context.report('cholesky', step.value, null);
    await context.checkpoint();
  }
}

/** Row source of a dense row-major matrix. */
export function denseRows(a: Float64Array, n: number): RowSource {
  const diagonal = new Float64Array(n);
  for (let i = 0; i < n; i++) diagonal[i] = a[i * n + i];
  return { n, diagonal, rowInto: (out, i) => out.set(a.subarray(i * n, i * n + n)) };
}

function* choleskySteps(source: RowSource, options: CholeskyOptions): Generator<number, PivotedCholesky> {
  const { n } = source;
  const threshold = options.threshold ?? 0;
  const maxRank = Math.min(n, options.maxRank ?? n);
  const d = Float64Array.from(source.diagonal);
  const floor = NOISE * Math.max(0, ...d);
  let vectors = new Float64Array(Math.min(maxRank, 64) * n);
  const pivots: number[] = [];
  let rank = 0;
  let trace = positiveTrace(d);
  while (rank < maxRank && trace > threshold) {
    const p = choosePivot(d);
    if (p < 0 || d[p] <= floor) break;
    if ((rank + 1) * n > vectors.length) {
      const grown = new Float64Array(Math.min(maxRank, 2 * rank) * n);
      grown.set(vectors);
      vectors = grown;
    }
    const c = vectors.subarray(rank * n, rank * n + n);
    source.rowInto(c, p);
    for (let j = 0; j < rank; j++) {
      const rj = j * n;
      const f = vectors[rj + p];
      for (let k = 0; k < n; k++) c[k] -= f * vectors[rj + k];
    }
    const root = Math.sqrt(d[p]);
    for (let k = 0; k < n; k++) c[k] /= root;
    for (const q of pivots) c[q] = 0;
    c[p] = root;
    for (let k = 0; k < n; k++) d[k] -= c[k] * c[k];
    d[p] = 0;
    pivots.push(p);
    rank++;
    trace = positiveTrace(d);
    yield rank;
  }
  return {
    n,
    rank,
    vectors: vectors.slice(0, rank * n),
    pivots: Int32Array.from(pivots),
    residualTrace: trace,
  };
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

import { coulombBlock, type TwoElectronTensor } from '../hamiltonian';
import { numSymmetricPairs } from '../integrals/integral-set';
import type { JobContext } from '../job';
import { denseRows, pivotedCholeskyAsync } from '../linalg';
import { eigenvectors, type WeightedVectors } from './eigenvectors';
import { normalised } from './squares';
import type { Remainder } from './truncate';

/** A remainder that Cholesky leaves above this part of the trace means that the matrix is not positive semidefinite. */
const INDEFINITE = 1e-10;

export interface ChargeFactors extends WeightedVectors {
  /** True where raw Cholesky columns exist; false where the charge part is indefinite. */
  readonly semidefinite: boolean;
  /** What Cholesky left out, or null where it went to the end. */
  readonly remainder: Remainder | null;
}

/**
 * Factors of the charge part: raw pivoted-Cholesky columns scaled to unit norm, or eigenvectors where it is
 * indefinite (the two-electron Darwin term subtracts a contact interaction).
 *
 * @param threshold - trace of the remainder at which Cholesky may stop, hartree; 0 = rounding.
 */
export async function chargeFactors(
  n: number,
  g: TwoElectronTensor,
  threshold: number,
  ctx: JobContext,
): Promise<ChargeFactors> {
  const matrix = coulombBlock(n, g);
  const npair = numSymmetricPairs(n);
  const columns = await choleskyFactors(matrix, npair, threshold, INDEFINITE, ctx);
  if (!columns) return { ...(await eigenvectors(matrix, npair, ctx)), semidefinite: false, remainder: null };
  const { weights, vectors, raw, residualTrace } = columns;
  const remainder = threshold > 0 ? remainderOf(matrix, raw, weights.length, n, residualTrace) : null;
  return { weights, vectors, semidefinite: true, remainder };
}

/**
 * Raw pivoted-Cholesky columns of a symmetric matrix, scaled to unit norm, or null where it is not positive
 * semidefinite to within `tolerance` · trace.
 */
export async function choleskyFactors(
  matrix: Float64Array,
  dim: number,
  threshold: number,
  tolerance: number,
  ctx: JobContext,
): Promise<(WeightedVectors & { readonly raw: Float64Array; readonly residualTrace: number }) | null> {
  const rows = denseRows(matrix, dim);
  const trace = rows.diagonal.reduce((sum, x) => sum + x, 0);
  if (rows.diagonal.some((x) => x < -tolerance * Math.abs(trace))) return null;
  const { rank, vectors, residualTrace } = await pivotedCholeskyAsync(rows, { threshold }, ctx);
  if (remainderSize(matrix, vectors, rank, dim) > threshold + tolerance * trace) return null;
  return { ...normalised(vectors, rank, dim), raw: vectors, residualTrace };
}

/** (A − Σ c cᵀ) x, length n. */
function applyRemainder(a: Float64Array, columns: Float64Array, rank: number, x: Float64Array): Float64Array {
  const n = x.length;
  const y = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    let sum = 0;
    for (let j = 0, at = i * n; j < n; j++) sum += a[at + j]! * x[j]!;
    y[i] = sum;
  }
  for (let t = 0; t < rank; t++) {
    const at = t * n;
    let overlap = 0;
    for (let i = 0; i < n; i++) overlap += columns[at + i]! * x[i]!;
    for (let i = 0; i < n; i++) y[i]! -= overlap * columns[at + i]!;
  }
  return y;
}

/**
 * ‖(A − Σ c cᵀ) x‖/√n for a fixed ±1 vector x. Cholesky stops at the first pivot that is not positive, so a
 * negative or off-diagonal remainder shows only here; of a semidefinite one this is at most its trace.
 */
function remainderSize(a: Float64Array, columns: Float64Array, rank: number, n: number): number {
  let state = 1;
  const x = Float64Array.from({ length: n }, () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return state & 0x80000000 ? 1 : -1;
  });
  const y = applyRemainder(a, columns, rank, x);
  return Math.sqrt(y.reduce((sum, v) => sum + v * v, 0) / n);
}

/** With R = Σ w v vᵀ and d the identity in pair coordinates (d·v = τ): Σ w τ v = R d and Σ w τ² = dᵀR d. */
function remainderOf(
  a: Float64Array,
  columns: Float64Array,
  rank: number,
  n: number,
  trace: number,
): Remainder {
  const d = new Float64Array(numSymmetricPairs(n));
  for (let p = 0, i = 0; p < n; p++, i += p + 1) d[i] = 1;
  const oneBody = applyRemainder(a, columns, rank, d);
  return { trace, oneBody, traceSquare: oneBody.reduce((sum, x, i) => sum + x * d[i]!, 0) };
}

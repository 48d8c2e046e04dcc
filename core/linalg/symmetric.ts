import type { JobContext } from '../job';
import { divideSteps, divideWork } from './divide';
import { type Arena, put, withArena } from './kernels/arena';
import { ascending } from './order';
import { applyReflectorSteps, reduceSteps, reductionWork, reflectorWork } from './reduction';
import { runAsJob, runNow, type Steps } from './steps';
import type { SymmetricEigen } from './types';

/**
 * Eigenvalues (ascending) and eigenvectors (rows) of a real symmetric n×n matrix, of which only the lower triangle is
 * read: A = Σ_i λ_i x_i x_iᵀ. `a` is not modified.
 *
 * @remarks Blocked Householder reduction, divide and conquer, blocked back-transformation. Residual and
 * orthonormality are a small multiple of n·2⁻⁵²·‖A‖, also for degenerate spectra. Working memory: three n×n matrices.
 */
export function symmetricEigen(a: Float64Array, n: number): SymmetricEigen {
  checkLength(a, n);
  return runNow((arena) => eigenSteps(arena, a, n));
}

/** {@link symmetricEigen} for large n (3000 and more): reports progress in stage `eigen` and can be stopped. */
export async function symmetricEigenAsync(
  a: Float64Array,
  n: number,
  context: JobContext,
): Promise<SymmetricEigen> {
  checkLength(a, n);
  return runAsJob((arena) => eigenSteps(arena, a, n), 'eigen', eigenWork(n), context);
}

/** Eigenvalues only, ascending. */
export function symmetricEigenvalues(a: Float64Array, n: number): Float64Array {
  checkLength(a, n);
  return runNow((arena) => valueSteps(arena, a, n));
}

/** {@link symmetricEigenvalues} with progress in stage `eigenvalues`, for large n. */
export async function symmetricEigenvaluesAsync(
  a: Float64Array,
  n: number,
  context: JobContext,
): Promise<Float64Array> {
  checkLength(a, n);
  return runAsJob((arena) => valueSteps(arena, a, n), 'eigenvalues', reductionWork(n), context);
}

/**
 * Eigenvalues (ascending, n per matrix) of `count` symmetric n×n matrices stored one after another. Made for many
 * small matrices: about 0.07 ms each for n = 50.
 */
export function symmetricEigenvaluesBatch(matrices: Float64Array, count: number, n: number): Float64Array {
  return batchValues(matrices, count, n, 1);
}

/** Ascending eigenvalues of symmetric A (sign 1) or of iA for antisymmetric A (sign −1), matrix by matrix. */
export function batchValues(matrices: Float64Array, count: number, n: number, sign: 1 | -1): Float64Array {
  if (matrices.length < count * n * n)
    throw new RangeError(`${count} matrices of order ${n} do not fit the data`);
  const values = new Float64Array(count * n);
  const atOnce = batchSize(n, 1);
  withArena((arena) => {
    const a = arena.take(Math.min(count, atOnce) * n * n);
    const d = arena.take(Math.min(count, atOnce) * n);
    const room = arena.take(3 * n);
    for (let from = 0; from < count; from += atOnce) {
      const some = Math.min(atOnce, count - from);
      arena.f64.set(matrices.subarray(from * n * n, (from + some) * n * n), a);
      if (arena.kernels.eigenvaluesOfMany(a, n, n, some, sign, d, room) > 0) throw notConverged(n);
      values.set(arena.f64.subarray(d, d + some * n), from * n);
    }
  });
  for (let i = 0; i < count; i++) values.subarray(i * n, (i + 1) * n).sort();
  return values;
}

/** Matrices to copy at once: about 4 MB, so that they stay in the cache. */
export function batchSize(n: number, planes: number): number {
  return Math.max(1, Math.floor(500_000 / Math.max(1, n * n * planes)));
}

export const notConverged = (n: number) =>
  new Error(`the eigenvalues of a matrix of order ${n} did not converge; are all its elements finite?`);

function* eigenSteps(arena: Arena, input: Float64Array, n: number): Steps<SymmetricEigen> {
  const { values: d, vectors: v } = yield* eigenInArena(arena, put(arena, input.subarray(0, n * n)), n);
  const m = arena.f64;
  const values = new Float64Array(n);
  const vectors = new Float64Array(n * n);
  for (const [to, from] of ascending(m.subarray(d, d + n)).entries()) {
    values[to] = m[d + from];
    vectors.set(m.subarray(v + from * n, v + from * n + n), to * n);
    if (to % 512 === 511) yield 0; // fresh pages of memory take their time
  }
  return { n, values, vectors };
}

/**
 * Eigenpairs of the matrix at `a` (lower triangle, rows of n; overwritten), in no order: values at `values`, their vectors in
 * the rows at `vectors`. Both stay taken in the arena.
 */
export function* eigenInArena(
  arena: Arena,
  a: number,
  n: number,
): Steps<{ readonly values: number; readonly vectors: number }> {
  const vectors = arena.take(n * n);
  const d = arena.take(n);
  const e = arena.take(n);
  const h = arena.take(n);
  yield* reduceSteps(arena, a, n, d, e, h);
  yield* divideSteps(arena, d, e, n, vectors);
  yield* applyReflectorSteps(arena, a, h, n, vectors, n);
  return { values: d, vectors };
}

/** Work units of {@link eigenInArena}. */
export const eigenWork = (n: number) => reductionWork(n) + divideWork(n) + reflectorWork(n, n);

function* valueSteps(arena: Arena, input: Float64Array, n: number): Steps<Float64Array> {
  const a = put(arena, input.subarray(0, n * n));
  const d = arena.take(n);
  const e = arena.take(n);
  yield* reduceSteps(arena, a, n, d, e, arena.take(n));
  if (arena.kernels.qlValues(d, e, n) !== 0) throw notConverged(n);
  return arena.f64.slice(d, d + n).sort();
}

function checkLength(a: Float64Array, n: number): void {
  if (a.length < n * n) throw new RangeError(`matrix of order ${n} needs ${n * n} numbers, got ${a.length}`);
}

import type { JobContext } from '../job';
import { divideSteps, divideWork } from './divide';
import {
  applyComplexReflectorSteps,
  complexReflectorWork,
  type HermitianPlaces,
  hermitianReductionWork,
  reduceHermitianSteps,
} from './hermitian-reduction';
import { type Arena, put, withArena } from './kernels/arena';
import { TINY } from './kernels/plain-triangle';
import { ascending } from './order';
import { runAsJob, runNow, type Steps } from './steps';
import { batchSize, notConverged } from './symmetric';
import type { ComplexMatrix, HermitianEigen } from './types';

/**
 * Eigenvalues (ascending) and eigenvectors (rows) of a complex Hermitian matrix: A = Σ_i λ_i x_i x_i†. Only the lower
 * triangle is read, and the imaginary part of the diagonal is taken as zero.
 *
 * @remarks Reduction to a real tridiagonal matrix, divide and conquer, back-transformation: degenerate (Kramers)
 * levels get orthonormal vectors like any other. Which basis of a degenerate level comes out is arbitrary.
 */
export function hermitianEigen(matrix: ComplexMatrix): HermitianEigen {
  checkPlanes(matrix.re, matrix.im, matrix.n * matrix.n);
  return runNow((arena) => eigenSteps(arena, matrix));
}

/** {@link hermitianEigen} for large n: reports progress in stage `eigen` and can be stopped. */
export async function hermitianEigenAsync(
  matrix: ComplexMatrix,
  context: JobContext,
): Promise<HermitianEigen> {
  const { n } = matrix;
  checkPlanes(matrix.re, matrix.im, n * n);
  const total = hermitianReductionWork(n) + divideWork(n) + complexReflectorWork(n, n);
  return runAsJob((arena) => eigenSteps(arena, matrix), 'eigen', total, context);
}

/** Eigenvalues only, ascending. */
export function hermitianEigenvalues(matrix: ComplexMatrix): Float64Array {
  checkPlanes(matrix.re, matrix.im, matrix.n * matrix.n);
  return runNow((arena) => valueSteps(arena, matrix));
}

/** {@link hermitianEigenvalues} with progress in stage `eigenvalues`, for large n. */
export async function hermitianEigenvaluesAsync(
  matrix: ComplexMatrix,
  context: JobContext,
): Promise<Float64Array> {
  checkPlanes(matrix.re, matrix.im, matrix.n * matrix.n);
  const total = hermitianReductionWork(matrix.n);
  return runAsJob((arena) => valueSteps(arena, matrix), 'eigenvalues', total, context);
}

/**
 * Eigenvalues (ascending, n per matrix) of `count` Hermitian n×n matrices stored one after another; about 0.1 ms each
 * for n = 50.
 */
export function hermitianEigenvaluesBatch(
  re: Float64Array,
  im: Float64Array,
  count: number,
  n: number,
): Float64Array {
  checkPlanes(re, im, count * n * n);
  const values = new Float64Array(count * n);
  const atOnce = Math.min(count, batchSize(n, 2));
  withArena((arena) => {
    const ar = arena.take(atOnce * n * n);
    const ai = arena.take(atOnce * n * n);
    const d = arena.take(atOnce * n);
    const room = arena.take(5 * n);
    for (let from = 0; from < count; from += atOnce) {
      const some = Math.min(atOnce, count - from);
      arena.f64.set(re.subarray(from * n * n, (from + some) * n * n), ar);
      arena.f64.set(im.subarray(from * n * n, (from + some) * n * n), ai);
      if (arena.kernels.hermitianValuesOfMany(ar, ai, n, n, some, d, room) > 0) throw notConverged(n);
      values.set(arena.f64.subarray(d, d + some * n), from * n);
    }
  });
  for (let i = 0; i < count; i++) values.subarray(i * n, (i + 1) * n).sort();
  return values;
}

function* eigenSteps(arena: Arena, matrix: ComplexMatrix): Steps<HermitianEigen> {
  const { n } = matrix;
  const places = place(arena, matrix);
  yield* reduceHermitianSteps(arena, places);
  const { d, tr: e } = places;
  const phases = removePhases(arena.f64, places);
  const v = arena.take(n * n);
  yield* divideSteps(arena, d, e, n, v);
  const w = arena.take(n * n);
  const m = arena.f64;
  for (let r = 0, x = v, y = w; r < n; r++) {
    for (let k = 0; k < n; k++, x++, y++) {
      m[y] = m[x] * phases.im[k];
      m[x] *= phases.re[k];
    }
  }
  yield* applyComplexReflectorSteps(arena, places, v, w, n);
  const values = new Float64Array(n);
  const re = new Float64Array(n * n);
  const im = new Float64Array(n * n);
  const f = arena.f64;
  for (const [to, from] of ascending(f.subarray(d, d + n)).entries()) {
    values[to] = f[d + from];
    re.set(f.subarray(v + from * n, v + from * n + n), to * n);
    im.set(f.subarray(w + from * n, w + from * n + n), to * n);
    if (to % 256 === 255) yield 0; // fresh pages of memory take their time
  }
  return { n, values, re, im };
}

function* valueSteps(arena: Arena, matrix: ComplexMatrix): Steps<Float64Array> {
  const { n } = matrix;
  const places = place(arena, matrix);
  yield* reduceHermitianSteps(arena, places);
  removePhases(arena.f64, places);
  if (arena.kernels.qlValues(places.d, places.tr, n) !== 0) throw notConverged(n);
  return arena.f64.slice(places.d, places.d + n).sort();
}

function place(arena: Arena, { n, re, im }: ComplexMatrix): HermitianPlaces {
  const ar = put(arena, re.subarray(0, n * n));
  const ai = put(arena, im.subarray(0, n * n));
  return { n, ar, ai, d: arena.take(n), tr: arena.take(n), ti: arena.take(n), h: arena.take(n) };
}

/**
 * T = D |T| D† with unit phases D. Leaves |T_{i+1,i}| at tr[i] and returns the diagonal of D.
 */
function removePhases(m: Float64Array, { n, tr, ti }: HermitianPlaces) {
  const re = new Float64Array(n).fill(1);
  const im = new Float64Array(n);
  for (let i = 1; i < n; i++) {
    const size = Math.hypot(m[tr + i], m[ti + i]);
    const none = size < TINY;
    const pr = none ? 1 : m[tr + i] / size;
    const pi = none ? 0 : m[ti + i] / size;
    re[i] = re[i - 1] * pr - im[i - 1] * pi;
    im[i] = re[i - 1] * pi + im[i - 1] * pr;
    m[tr + i - 1] = size;
  }
  return { re, im };
}

function checkPlanes(re: Float64Array, im: Float64Array, count: number): void {
  if (re.length < count || im.length < count) {
    throw new RangeError(`planes need ${count} numbers, got ${re.length} and ${im.length}`);
  }
}

import type { JobContext } from '../job';
import { hermitianEigen } from './hermitian';
import {
  combine,
  norm,
  overlaps,
  type Planes,
  planes,
  rowsOf,
  scaleInPlace,
  subtractInPlace,
} from './planes';
import { randomSource } from './random';
import { symmetricEigen } from './symmetric';
import type { HermitianEigen } from './types';

export type { Planes } from './planes';

/** Writes H x into `y` (which holds rubbish on entry) for one vector x of length n. May be asynchronous. */
export type Operator = (x: Planes, y: Planes) => void | Promise<void>;

export interface LowestOptions {
  /** Whether H has imaginary elements. With `false` all `im` planes have length 0. @defaultValue true */
  readonly complex?: boolean;
  /** Largest residual ‖Hx − θx‖ of a result, units of H. @defaultValue 1e-9 */
  readonly tolerance?: number;
  /** Diagonal of H; turns the residuals into Davidson corrections, which saves most steps for CI matrices. */
  readonly diagonal?: Float64Array;
  /** Rows of length n to start from; random vectors are added, so that no symmetry is locked in. */
  readonly start?: Planes;
  /** Seed of the random vectors. @defaultValue the context's seed */
  readonly seed?: number;
  /** Applications of H before giving up. @defaultValue 200·k + 2000 */
  readonly maxApplications?: number;
}

/** The lowest pairs with what they cost and how well they converged. */
export interface LowestEigenpairs extends HermitianEigen {
  readonly residuals: Float64Array;
  readonly applications: number;
}

/**
 * The k lowest eigenvalues and vectors of a Hermitian operator of dimension n given by its action: block
 * Davidson with thick restart. Multiplets come with their full multiplicity, because the block holds more
 * random vectors than k and a few guard levels above the k-th must converge roughly as well.
 *
 * @returns row i of `re`/`im` (length n) belongs to `values[i]`, ascending; `im` is all zero for a real operator.
 */
export async function lowestEigenpairs(
  apply: Operator,
  n: number,
  k: number,
  options: LowestOptions,
  context: JobContext,
): Promise<LowestEigenpairs> {
  const complex = options.complex ?? true;
  const tolerance = options.tolerance ?? 1e-9;
  const limit = options.maxApplications ?? 200 * k + 2000;
  const wanted = Math.min(k, n);
  const guards = Math.min(n - wanted, Math.max(2, Math.ceil(wanted / 4)));
  const block = wanted + guards;
  const capacity = Math.min(n, Math.max(6 * block, 60));
  const random = randomSource(options.seed ?? context.seed);
  const basis = planes(capacity * n, complex);
  const images = planes(capacity * n, complex);
  let size = 0;
  let applications = 0;

  const append = async (vector: Planes): Promise<boolean> => {
    const slot = rowsOf(basis, size, size + 1, n);
    slot.re.set(vector.re);
    slot.im.set(vector.im);
    if (!orthonormaliseLast(basis, size, n)) return false;
    await apply(slot, rowsOf(images, size, size + 1, n));
    size++;
    applications++;
    await context.checkpoint();
    return true;
  };
  const appendRandom = async () => {
    const vector = planes(n, complex);
    for (let i = 0; i < n; i++) vector.re[i] = random();
    if (complex) for (let i = 0; i < n; i++) vector.im[i] = random();
    await append(vector);
  };

  const started = options.start ? Math.min(options.start.re.length / n, block) : 0;
  for (let i = 0; i < started; i++) await append(rowsOf(options.start!, i, i + 1, n));
  const first = Math.min(n, block + started);
  for (let tries = 0; size < first && tries < 4 * first; tries++) await appendRandom();

  for (;;) {
    const small = projected(basis, images, size, n);
    const levels = Math.min(block, size);
    const coefficients: Planes = {
      re: small.re.subarray(0, levels * size),
      im: complex ? small.im.subarray(0, levels * size) : new Float64Array(0),
    };
    const ritz = combine(coefficients, basis, levels, size, n);
    const residual = combine(coefficients, images, levels, size, n);
    const residuals = new Float64Array(levels);
    for (let i = 0; i < levels; i++) {
      const r = rowsOf(residual, i, i + 1, n);
      const x = rowsOf(ritz, i, i + 1, n);
      const theta = small.values[i];
      for (let j = 0; j < r.re.length; j++) r.re[j] -= theta * x.re[j];
      for (let j = 0; j < r.im.length; j++) r.im[j] -= theta * x.im[j];
      residuals[i] = norm(r);
    }
    const spread = Math.max(Math.abs(small.values[0]), Math.abs(small.values[size - 1]));
    const guardTolerance = Math.max(tolerance, 1e-4 * spread);
    const open: number[] = [];
    for (let i = 0; i < levels; i++)
      if (residuals[i] > (i < wanted ? tolerance : guardTolerance)) open.push(i);
    context.report('eigenpairs', applications, null);
    await context.checkpoint();
    if (open.length === 0 || size === n) {
      return {
        n,
        values: small.values.slice(0, wanted),
        re: ritz.re.slice(0, wanted * n),
        im: complex ? ritz.im.slice(0, wanted * n) : new Float64Array(wanted * n),
        residuals: residuals.slice(0, wanted),
        applications,
      };
    }
    if (applications > limit) {
      throw new Error(
        `lowestEigenpairs: ${open.length} of ${levels} levels above the tolerance ${tolerance} after ${applications} applications`,
      );
    }
    if (size + open.length > capacity) {
      const keep = Math.min(size, 2 * block, capacity - open.length);
      const c: Planes = {
        re: small.re.subarray(0, keep * size),
        im: complex ? small.im.subarray(0, keep * size) : new Float64Array(0),
      };
      const kept = combine(c, basis, keep, size, n);
      const keptImages = combine(c, images, keep, size, n);
      basis.re.set(kept.re);
      basis.im.set(kept.im);
      images.re.set(keptImages.re);
      images.im.set(keptImages.im);
      size = keep;
    }
    const before = size;
    for (const i of open) {
      const r = rowsOf(residual, i, i + 1, n);
      if (options.diagonal) precondition(r, options.diagonal, small.values[i]);
      if (size < capacity) await append(r);
    }
    if (size === before) await appendRandom();
  }
}

/** Smallest and largest eigenvalue, each to `tolerance` in the residual. */
export async function extremalEigenvalues(
  apply: Operator,
  n: number,
  options: LowestOptions,
  context: JobContext,
): Promise<{ readonly min: number; readonly max: number }> {
  const negated: Operator = async (x, y) => {
    await apply(x, y);
    scaleInPlace(y, -1);
  };
  const { diagonal, start: _, ...rest } = options;
  const low = await lowestEigenpairs(apply, n, 1, options, context);
  const upper = diagonal ? { ...rest, diagonal: diagonal.map((x) => -x) } : rest;
  const high = await lowestEigenpairs(negated, n, 1, upper, context);
  return { min: low.values[0], max: -high.values[0] };
}

function projected(basis: Planes, images: Planes, size: number, n: number): HermitianEigen {
  const s = overlaps(rowsOf(basis, 0, size, n), rowsOf(images, 0, size, n), size, size, n);
  if (s.im.length === 0) {
    const { values, vectors } = symmetricEigen(s.re, size);
    return { n: size, values, re: vectors, im: new Float64Array(0) };
  }
  return hermitianEigen({ n: size, re: s.re, im: s.im });
}

/** Orthogonalises row `last` against the rows before it, twice; false if nothing is left of it. */
function orthonormaliseLast(basis: Planes, last: number, n: number): boolean {
  const x = rowsOf(basis, last, last + 1, n);
  const before = norm(x);
  if (!(before > 0)) return false;
  scaleInPlace(x, 1 / before);
  const others = rowsOf(basis, 0, last, n);
  for (let pass = 0; pass < 3; pass++) {
    if (last > 0) {
      const c = overlaps(others, x, last, 1, n);
      subtractInPlace(x, combine(c, others, 1, last, n));
    }
    const left = norm(x);
    if (left < 1e-10) return false;
    scaleInPlace(x, 1 / left);
    if (left > 0.5) return true;
  }
  return true;
}

function precondition(r: Planes, diagonal: Float64Array, theta: number): void {
  for (let j = 0; j < diagonal.length; j++) {
    const gap = diagonal[j] - theta;
    const f = 1 / (Math.abs(gap) < 1e-3 ? (gap < 0 ? -1e-3 : 1e-3) : gap);
    r.re[j] *= f;
    if (r.im.length > 0) r.im[j] *= f;
  }
}

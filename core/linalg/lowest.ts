import type { JobContext } from '../job';
import {
  addCombination,
  type BlockVectors,
  orthonormaliseRows,
  overlaps,
  rowNumbers,
  rowPlanes,
  rowsFrom,
  takeBlock,
} from './block-vectors';
import { type Arena, withArena } from './kernels/arena';
import type { Planes } from './planes';
import { ProjectedMatrix } from './projected-matrix';
import { randomSource } from './random';
import type { HermitianEigen } from './types';

export type { Planes } from './planes';

/** Writes H x into `y` (which holds rubbish on entry) for one vector x of length n. May be asynchronous. */
export type Operator = (x: Planes, y: Planes) => void | Promise<void>;

export interface LowestOptions {
  /** Whether H has imaginary elements. With `false` all `im` planes have length 0. @defaultValue true */
  readonly complex?: boolean;
  /** Largest residual ‖Hx − θx‖ of a result, units of H. @defaultValue 1e-9 */
  readonly tolerance?: number;
  /** Diagonal of H; turns residuals into Davidson corrections, which saves most steps for CI matrices. */
  readonly diagonal?: Float64Array;
  /** Rows of length n to start from. Random vectors are added, so that no symmetry is locked in. */
  readonly start?: Planes;
  /** Seed of the random vectors. @defaultValue the context's seed */
  readonly seed?: number;
  /** Applications of H before giving up with an error. @defaultValue 400·(k + 20) */
  readonly maxApplications?: number;
}

/** The lowest pairs, how well they converged, and what they cost. */
export interface LowestEigenpairs extends HermitianEigen {
  /** ‖Hx − θx‖ of each pair. */
  readonly residuals: Float64Array;
  readonly applications: number;
}

/** Corrections added between two Rayleigh–Ritz steps. */
const WIDTH = 12;

/**
 * The k lowest eigenvalues and vectors of a Hermitian operator of dimension n given by its action: block Davidson
 * with thick restart. Multiplets come with their full multiplicity: the start holds more random vectors than k, and some
 * guard levels above the k-th must settle (to 10⁻⁴ of the spread) before the answer counts.
 *
 * @returns row i of `re`/`im` (length n) belongs to `values[i]`, ascending; `im` is all zero for a real operator.
 * @remarks Without `diagonal` this is a block Krylov method: the number of applications grows with the root of
 * spread/gap. Memory: about 12·k + 120 vectors. Progress in stage `eigenpairs` counts applications.
 */
export function lowestEigenpairs(
  apply: Operator,
  n: number,
  k: number,
  options: LowestOptions,
  context: JobContext,
): Promise<LowestEigenpairs> {
  return withArena((arena) => davidson(arena, apply, n, k, options, context));
}

async function davidson(
  arena: Arena,
  apply: Operator,
  n: number,
  k: number,
  options: LowestOptions,
  context: JobContext,
): Promise<LowestEigenpairs> {
  const complex = options.complex ?? true;
  const tolerance = options.tolerance ?? 1e-9;
  const limit = options.maxApplications ?? 400 * (k + 20);
  const wanted = Math.min(k, n);
  const block = Math.min(n, wanted + Math.max(4, Math.ceil(wanted / 4)));
  const capacity = Math.min(n, Math.max(5 * block, block + 8 * WIDTH));
  const basis = takeBlock(arena, capacity, n, complex);
  const images = takeBlock(arena, capacity, n, complex);
  const ritz = takeBlock(arena, 2 * block, n, complex);
  const residual = takeBlock(arena, block, n, complex);
  const random = randomSource(options.seed ?? context.seed);
  const corrections = takeBlock(arena, WIDTH, n, complex);
  const t = new ProjectedMatrix(capacity, complex);
  let size = 0;
  let applications = 0;

  /** Takes in the rows already written behind the basis. */
  const extend = async (count: number): Promise<void> => {
    const fresh = orthonormaliseRows(basis, size, count);
    for (let i = 0; i < fresh; i++) {
      await apply(rowPlanes(basis, size + i), rowPlanes(images, size + i));
      applications++;
      context.report('eigenpairs', applications, null);
      await context.checkpoint();
    }
    t.append(size, fresh, overlaps(basis, size + fresh, rowsFrom(images, size), fresh));
    size += fresh;
  };
  const extendRandomly = async (count: number): Promise<void> => {
    for (let i = 0; i < count; i++) {
      const row = rowNumbers(basis, size + i);
      for (let j = 0; j < row.length; j++) row[j] = random();
    }
    await extend(count);
  };

  const given = options.start ? Math.min(block, Math.floor(options.start.re.length / n)) : 0;
  for (let i = 0; i < given; i++) {
    const row = rowPlanes(basis, i);
    row.re.set(options.start!.re.subarray(i * n, (i + 1) * n));
    if (complex) row.im.set(options.start!.im.subarray(i * n, (i + 1) * n));
  }
  if (given > 0) await extend(given);
  while (size < block) await extendRandomly(Math.min(block, capacity - size));

  for (;;) {
    const small = t.eigen(size);
    const levels = Math.min(block, size);
    combineInto(ritz, levels, small, basis, size);
    combineInto(residual, levels, small, images, size);
    const residuals = subtractShifted(residual, ritz, small.values, levels);
    const spread = Math.max(Math.abs(small.values[0]), Math.abs(small.values[size - 1]));
    const guardTolerance = Math.max(tolerance, 1e-4 * spread);
    const open: number[] = [];
    for (let i = 0; i < levels; i++) {
      if (residuals[i] > (i < wanted ? tolerance : guardTolerance)) open.push(i);
    }
    await context.checkpoint();
    if (open.length === 0 || size === n) {
      const result = planesOf(ritz, wanted);
      const residualsOfWanted = residuals.slice(0, wanted);
      return {
        n,
        values: small.values.slice(0, wanted),
        ...result,
        residuals: residualsOfWanted,
        applications,
      };
    }
    if (applications > limit) {
      throw new Error(
        `lowestEigenpairs: ${open.length} of ${levels} levels are above the tolerance ${tolerance} after ${applications} applications`,
      );
    }
    const targets = open.slice(0, Math.min(WIDTH, n - size));
    targets.forEach((level, i) => {
      rowNumbers(corrections, i).set(rowNumbers(residual, level));
      if (options.diagonal) precondition(rowPlanes(corrections, i), options.diagonal, small.values[level]);
    });
    if (size + targets.length > capacity) {
      // Thick restart: the lowest Ritz vectors and their images become the basis.
      const keep = Math.min(2 * block, capacity - WIDTH);
      for (const block of [basis, images]) {
        combineInto(ritz, keep, small, block, size);
        copyRows(block, 0, ritz, keep);
      }
      size = keep;
      t.restart(small.values, keep);
    }
    copyRows(basis, size, corrections, targets.length);
    const before = size;
    await extend(targets.length);
    // Residuals inside the basis: it is invariant. Leave it with something new.
    if (size === before) await extendRandomly(1);
  }
}

/** Smallest and largest eigenvalue, each with a residual of at most `tolerance`. */
export async function extremalEigenvalues(
  apply: Operator,
  n: number,
  options: LowestOptions,
  context: JobContext,
): Promise<{ readonly min: number; readonly max: number }> {
  const negated: Operator = async (x, y) => {
    await apply(x, y);
    for (let i = 0; i < y.re.length; i++) y.re[i] = -y.re[i];
    for (let i = 0; i < y.im.length; i++) y.im[i] = -y.im[i];
  };
  const { diagonal, start: _forTheLowest, ...others } = options;
  const upper = diagonal ? { ...others, diagonal: diagonal.map((x) => -x) } : others;
  const low = await lowestEigenpairs(apply, n, 1, options, context);
  const high = await lowestEigenpairs(negated, n, 1, upper, context);
  return { min: low.values[0], max: -high.values[0] };
}

/** Rows of y become the first `count` Ritz combinations of x. */
function combineInto(
  y: BlockVectors,
  count: number,
  small: HermitianEigen,
  x: BlockVectors,
  size: number,
): void {
  y.arena.f64.fill(0, y.at, y.at + count * y.width);
  addCombination(y, count, 1, small, x, size);
}

function copyRows(to: BlockVectors, row: number, from: BlockVectors, count: number): void {
  to.arena.f64.copyWithin(to.at + row * to.width, from.at, from.at + count * from.width);
}

/** Rows of y −= value·x; returns the norms of what is left. */
function subtractShifted(
  y: BlockVectors,
  x: BlockVectors,
  values: Float64Array,
  count: number,
): Float64Array {
  const norms = new Float64Array(count);
  for (let i = 0; i < count; i++) {
    const row = rowNumbers(y, i);
    const source = rowNumbers(x, i);
    let sum = 0;
    for (let j = 0; j < row.length; j++) {
      row[j] -= values[i] * source[j];
      sum += row[j] * row[j];
    }
    norms[i] = Math.sqrt(sum);
  }
  return norms;
}

function planesOf(x: BlockVectors, count: number): Planes {
  const { n } = x;
  const out = { re: new Float64Array(count * n), im: new Float64Array(count * n) };
  for (let i = 0; i < count; i++) {
    const { re, im } = rowPlanes(x, i);
    out.re.set(re, i * n);
    out.im.set(im, i * n);
  }
  return out;
}

/** r ← (diagonal − θ)⁻¹ r, kept finite where a diagonal element meets the level. */
function precondition(r: Planes, diagonal: Float64Array, theta: number): void {
  const least = 1e-5 * Math.max(1, Math.abs(theta));
  for (let j = 0; j < diagonal.length; j++) {
    const gap = diagonal[j] - theta;
    const f = 1 / (Math.abs(gap) < least ? (gap < 0 ? -least : least) : gap);
    r.re[j] *= f;
    if (r.im.length > 0) r.im[j] *= f;
  }
}

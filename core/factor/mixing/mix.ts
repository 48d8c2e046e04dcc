import { numSymmetricPairs } from '../../integrals/integral-set';
import type { JobContext } from '../../job';
import { multiply } from '../../linalg';
import {
  type MixingPoint,
  type MixingProblem,
  type MixingValue,
  mixingValue,
  withMedianShifts,
} from './objective';

export interface MixingOptions {
  /**
   * Number of factors, at least the rank: further ones start near zero and give the mixing more freedom, at the price
   * of more rows. @defaultValue the rank
   */
  readonly factors?: number;
  /** Leaves the factors as they are and optimises the shifts alone: a convex problem. @defaultValue false */
  readonly keepFactors?: boolean;
  /** Steps at each smoothing width. @defaultValue 60 */
  readonly steps?: number;
  /** Continues from here instead of from the columns. */
  readonly start?: MixingPoint;
  /** Told of every better point, so that a stopped run leaves its best. */
  readonly onBest?: (point: MixingPoint, lambda: number) => void;
}

export interface MixingResult extends MixingPoint {
  /** λ of the charge part and κ⁰ with these factors and shifts, hartree. */
  readonly lambda: number;
  readonly steps: number;
}

/** Smoothing widths, relative to the largest column: each is a start for the next, and the last is next to nothing. */
const WIDTHS = [0.05, 0.02, 0.007, 0.002, 0.0007];
/** A step that lowers λ by less than this part ends a width. */
const SETTLED = 2e-6;
const MAX_BACKTRACKS = 12;

/**
 * Mixes factors among themselves so that λ becomes least: G = Σ v vᵀ is unchanged when the columns are multiplied by
 * an orthogonal matrix, but the nuclear norms, and with them λ, are not. Shifts are optimised together with the
 * mixing. The residual of G stays what it was, to rounding.
 *
 * Conjugate gradients on the orthogonal group (steps exp(−sA), A antisymmetric; Polak–Ribière with restarts),
 * nuclear norms smoothed by √(x² + δ²) with δ going down. The idea of choosing factors by their one-norm under a
 * fixed tensor is that of compressed double factorisation (e.g. O. Oumarou et al., Quantum 8, 1371 (2024), quoted from
 * memory); mixing exact factors instead of fitting new ones is our own.
 *
 * @param columns - count × n(n+1)/2 pair coordinates of the factors, weights inside; not modified
 * @throws Cancelled when stopped; `onBest` has then seen the best so far.
 */
export async function mixFactors(
  problem: MixingProblem,
  columns: Float64Array,
  count: number,
  options: MixingOptions,
  ctx: JobContext,
): Promise<MixingResult> {
  const npair = numSymmetricPairs(problem.n);
  const maxSteps = options.steps ?? 60;
  const scale = largestNorm(columns, count, npair);
  let point = options.start ?? spread(columns, count, npair, options.factors ?? count, ctx.seed);
  let best: MixingPoint = point;
  let bestLambda = (await mixingValue(problem, point, 0, ctx)).lambda;
  let taken = 0;
  for (const [stage, width] of WIDTHS.entries()) {
    const delta = width * scale;
    let value = await mixingValue(problem, point, delta, ctx);
    let direction: Direction | null = null;
    let length = 1;
    for (let step = 0; step < maxSteps; step++) {
      ctx.report('mixing factors', stage * maxSteps + step, WIDTHS.length * maxSteps);
      await ctx.checkpoint();
      direction = nextDirection(point, value, direction, npair, options.keepFactors ?? false);
      const moved = await search(problem, point, value, direction, length, delta, ctx);
      if (!moved) break;
      const gain = value.lambda - moved.value.lambda;
      point = moved.point;
      value = moved.value;
      length = moved.length * 1.6;
      taken++;
      if (gain < SETTLED * value.lambda) break;
    }
    // Smoothing rounds off the kink at the median, which is where a shift without effect on κ belongs.
    for (const candidate of [point, withMedianShifts(problem.n, point)]) {
      const { lambda } = await mixingValue(problem, candidate, 0, ctx);
      if (lambda >= bestLambda) continue;
      best = candidate;
      bestLambda = lambda;
      options.onBest?.(best, bestLambda);
    }
  }
  ctx.report('mixing factors', WIDTHS.length * maxSteps, WIDTHS.length * maxSteps);
  return { ...best, lambda: bestLambda, steps: taken };
}

function largestNorm(columns: Float64Array, count: number, npair: number): number {
  let largest = 0;
  for (let t = 0; t < count; t++) {
    let sum = 0;
    for (let i = t * npair; i < (t + 1) * npair; i++) sum += columns[i]! * columns[i]!;
    largest = Math.max(largest, sum);
  }
  return Math.sqrt(largest);
}

/** Starting point: the columns, followed by empty ones into which a small seeded rotation lets some of them leak. */
function spread(
  columns: Float64Array,
  count: number,
  npair: number,
  factors: number,
  seed: number,
): MixingPoint {
  const total = Math.max(count, factors);
  const padded = new Float64Array(total * npair);
  padded.set(columns.subarray(0, count * npair));
  const start = { count: total, columns: padded, shifts: new Float64Array(total) };
  if (total === count) return start;
  let state = seed | 0;
  const random = () => {
    state = (state + 0x6d2b79f5) | 0;
    let x = Math.imul(state ^ (state >>> 15), 1 | state);
    x = (x + Math.imul(x ^ (x >>> 7), 61 | x)) ^ x;
    return ((x ^ (x >>> 14)) >>> 0) / 4294967296 - 0.5;
  };
  const mixing = new Float64Array(total * total);
  for (let s = 0; s < total; s++) {
    for (let t = 0; t < s; t++) {
      const x = (0.4 / Math.sqrt(total)) * random();
      mixing[s * total + t] = x;
      mixing[t * total + s] = -x;
    }
  }
  return { ...start, columns: rotated(padded, mixing, total, npair, 1) };
}

/** Descent direction: an antisymmetric matrix for the mixing, a vector for the shifts. */
interface Direction {
  readonly mixing: Float64Array;
  readonly shifts: Float64Array;
  /** The gradient it was made from, and that gradient's squared length. */
  readonly gradient: { readonly mixing: Float64Array; readonly shifts: Float64Array };
  readonly square: number;
  /** Rate at which λ falls along it. */
  readonly slope: number;
}

function nextDirection(
  { count, columns }: MixingPoint,
  value: MixingValue,
  previous: Direction | null,
  npair: number,
  keepFactors: boolean,
): Direction {
  // d λ/dε along W → exp(−εA)W is −⟨A, (∂λ/∂W) Wᵀ⟩: the antisymmetric part is the gradient.
  const mixing = new Float64Array(count * count);
  const product = keepFactors
    ? mixing
    : multiply(value.columns, columns, count, npair, count, { transposeB: true });
  for (let s = 0; s < count && !keepFactors; s++) {
    for (let t = 0; t < count; t++) {
      mixing[s * count + t] = 0.5 * (product[s * count + t]! - product[t * count + s]!);
    }
  }
  const gradient = { mixing, shifts: value.shifts };
  const inner = (a: Direction['gradient'], b: Direction['gradient']) =>
    dot(a.mixing, b.mixing) + dot(a.shifts, b.shifts);
  const square = inner(gradient, gradient);
  if (previous) {
    const beta = Math.max(0, (square - inner(gradient, previous.gradient)) / previous.square);
    const combined = {
      mixing: combine(mixing, previous.mixing, beta),
      shifts: combine(value.shifts, previous.shifts, beta),
    };
    const slope = inner(gradient, combined);
    if (slope > 0) return { ...combined, gradient, square, slope };
  }
  return { ...gradient, gradient, square, slope: square };
}

/** Backtracking until λ falls as it should; null where no step does. */
async function search(
  problem: MixingProblem,
  point: MixingPoint,
  value: MixingValue,
  direction: Direction,
  start: number,
  delta: number,
  ctx: JobContext,
) {
  const npair = numSymmetricPairs(problem.n);
  let length = start;
  for (let attempt = 0; attempt < MAX_BACKTRACKS; attempt++, length *= 0.4) {
    await ctx.checkpoint();
    const moved: MixingPoint = {
      count: point.count,
      columns: rotated(point.columns, direction.mixing, point.count, npair, -length),
      shifts: combine(point.shifts, direction.shifts, -length),
    };
    const found = await mixingValue(problem, moved, delta, ctx);
    if (found.lambda <= value.lambda - 1e-4 * length * direction.slope) {
      return { point: moved, value: found, length };
    }
  }
  return null;
}

/**
 * exp(scale·A) W. The exponential is taken by its power series at norm ≤ ½ and squared back: orthogonal to rounding,
 * and made of matrix products only, which the kernels are good at.
 */
function rotated(
  columns: Float64Array,
  antisymmetric: Float64Array,
  count: number,
  npair: number,
  scale: number,
): Float64Array {
  // The Frobenius norm over √2 bounds the largest |eigenvalue|, since they come in ± pairs.
  const norm = Math.abs(scale) * Math.sqrt(dot(antisymmetric, antisymmetric) / 2);
  if (norm === 0) return columns;
  const squarings = Math.max(0, Math.ceil(Math.log2(2 * norm)));
  const small = antisymmetric.map((x) => (x * scale) / 2 ** squarings);
  let term: Float64Array = small;
  let exponential: Float64Array = Float64Array.from(small);
  for (let i = 0; i < count; i++) exponential[i * count + i]! += 1;
  for (let k = 2; k <= 18; k++) {
    term = multiply(small, term, count, count, count);
    let largest = 0;
    for (let i = 0; i < term.length; i++) {
      term[i]! /= k;
      exponential[i]! += term[i]!;
      largest = Math.max(largest, Math.abs(term[i]!));
    }
    if (largest < 1e-17) break;
  }
  for (let i = 0; i < squarings; i++) exponential = multiply(exponential, exponential, count, count, count);
  return multiply(exponential, columns, count, count, npair);
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i]! * b[i]!;
  return sum;
}

/** a + scale·b. */
function combine(a: Float64Array, b: Float64Array, scale: number): Float64Array {
  const out = Float64Array.from(a);
  for (let i = 0; i < out.length; i++) out[i]! += scale * b[i]!;
  return out;
}

import { addScaledTo, dot } from './vectors';

/** A smooth function's value and its gradient. */
export interface SmoothValue {
  readonly value: number;
  readonly gradient: Float64Array;
}

export interface SmoothPoint extends SmoothValue {
  readonly x: Float64Array;
}

/**
 * A step along `direction` that lowers the value enough; null where rounding leaves none.
 *
 * @param slope - gradient · direction, negative
 * @param first - the multiple of `direction` that is tried first
 */
export type LineSearch = (
  at: (x: Float64Array) => Promise<SmoothValue>,
  here: SmoothPoint,
  direction: Float64Array,
  slope: number,
  first: number,
) => Promise<SmoothPoint | null>;

const SUFFICIENT = 1e-4;
const CURVATURE = 0.9;
const MAX_TRIALS = 40;
const MAX_BACKTRACKS = 20;

/**
 * Weak Wolfe conditions by bisection, which also copes with kinks that are hardly rounded (A. S. Lewis, M. L. Overton,
 * Math. Programming 141, 135 (2013), quoted from memory).
 */
export const wolfe: LineSearch = async (at, here, direction, slope, first) => {
  let low = 0;
  let high = Number.POSITIVE_INFINITY;
  let length = first;
  let best: SmoothPoint | null = null;
  for (let trial = 0; trial < MAX_TRIALS; trial++) {
    const found = await along(at, here, direction, length);
    if (!(found.value <= here.value + SUFFICIENT * length * slope)) {
      high = length;
    } else {
      if (!best || found.value < best.value) best = found;
      if (dot(found.gradient, direction) >= CURVATURE * slope) return best;
      low = length;
    }
    length = Number.isFinite(high) ? (low + high) / 2 : 2 * length;
    if (high - low < 1e-14 * high) break;
  }
  return best;
};

/** The first step that lowers the value enough, shortened by parabolas: seldom more than one evaluation. */
export const backtracking: LineSearch = async (at, here, direction, slope, first) => {
  let length = first;
  for (let attempt = 0; attempt < MAX_BACKTRACKS; attempt++) {
    const found = await along(at, here, direction, length);
    if (found.value <= here.value + SUFFICIENT * length * slope) return found;
    // The parabola through both values and the slope, kept within reason.
    const curvature = 2 * (found.value - here.value - length * slope);
    const vertex = Number.isFinite(curvature) ? (-slope * length * length) / curvature : 0;
    length = Math.min(0.5 * length, Math.max(0.1 * length, vertex));
  }
  return null;
};

async function along(
  at: (x: Float64Array) => Promise<SmoothValue>,
  { x }: SmoothPoint,
  direction: Float64Array,
  length: number,
): Promise<SmoothPoint> {
  const moved = x.slice();
  addScaledTo(moved, direction, length);
  const { value, gradient } = await at(moved);
  return { x: moved, value, gradient };
}

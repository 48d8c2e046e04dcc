/** A smooth function's value and its gradient. */
export interface SmoothValue {
  readonly value: number;
  readonly gradient: Float64Array;
}

export interface QuasiNewtonOptions {
  /** @defaultValue 200 */
  readonly steps?: number;
  /** Pairs of steps and gradient changes that are remembered. @defaultValue 16 */
  readonly memory?: number;
  /** Ends where ten steps together lower the value by less than this part of it. @defaultValue 1e-9 */
  readonly settled?: number;
  /** Called before each evaluation; may throw to stop. */
  readonly checkpoint?: () => Promise<void>;
}

export interface QuasiNewtonResult extends SmoothValue {
  readonly x: Float64Array;
  readonly evaluations: number;
}

const SUFFICIENT = 1e-4;
const CURVATURE = 0.9;
const MAX_TRIALS = 40;
const WINDOW = 10;

/**
 * Least value of a smooth function by limited-memory BFGS (D. C. Liu, J. Nocedal, Math. Programming 45, 503 (1989)) with
 * the weak Wolfe line search by bisection, which also copes with kinks that are hardly rounded (A. S. Lewis,
 * M. L. Overton, Math. Programming 141, 135 (2013)). Both quoted from memory.
 *
 * @returns the last point, which has the least value met.
 */
export async function minimiseSmooth(
  evaluate: (x: Float64Array) => SmoothValue | Promise<SmoothValue>,
  start: Float64Array,
  options: QuasiNewtonOptions = {},
): Promise<QuasiNewtonResult> {
  const { steps = 200, memory = 16, settled = 1e-9 } = options;
  let evaluations = 0;
  const at = async (x: Float64Array): Promise<SmoothValue> => {
    await options.checkpoint?.();
    evaluations++;
    return evaluate(x);
  };
  let x: Float64Array = Float64Array.from(start);
  let here = await at(x);
  const pairs: Pair[] = [];
  const values = [here.value];
  for (let step = 0; step < steps; step++) {
    const direction = descent(here.gradient, pairs);
    const slope = dot(direction, here.gradient);
    if (!(slope < 0)) break;
    const first = pairs.length > 0 ? 1 : Math.min(1, (0.1 * Math.abs(here.value)) / -slope);
    const found = await search(at, x, here, direction, slope, first);
    if (!found) {
      if (pairs.length === 0) break;
      pairs.length = 0;
      continue;
    }
    const moved = found.x.map((value, i) => value - x[i]!);
    const change = found.gradient.map((value, i) => value - here.gradient[i]!);
    const curvature = dot(moved, change);
    if (curvature > 0) {
      pairs.push({ moved, change, curvature });
      if (pairs.length > memory) pairs.shift();
    }
    ({ x } = found);
    here = found;
    values.push(here.value);
    const before = values[values.length - 1 - WINDOW];
    if (before !== undefined && before - here.value < settled * Math.abs(here.value)) break;
  }
  return { x, value: here.value, gradient: here.gradient, evaluations };
}

interface Pair {
  readonly moved: Float64Array;
  readonly change: Float64Array;
  readonly curvature: number;
}

/** −(inverse Hessian as the pairs know it) · gradient, by the two-loop recursion. */
function descent(gradient: Float64Array, pairs: readonly Pair[]): Float64Array {
  const out = gradient.map((value) => -value);
  const weights: number[] = [];
  for (const { moved, change, curvature } of [...pairs].reverse()) {
    const weight = dot(moved, out) / curvature;
    weights.push(weight);
    add(out, change, -weight);
  }
  const last = pairs.at(-1);
  if (last) {
    const scale = last.curvature / dot(last.change, last.change);
    for (let i = 0; i < out.length; i++) out[i]! *= scale;
  }
  for (const { moved, change, curvature } of pairs) {
    const weight = weights.pop()!;
    add(out, moved, weight - dot(change, out) / curvature);
  }
  return out;
}

/** A step that lowers the value and the slope enough; null where rounding leaves none. */
async function search(
  at: (x: Float64Array) => Promise<SmoothValue>,
  x: Float64Array,
  here: SmoothValue,
  direction: Float64Array,
  slope: number,
  first: number,
): Promise<(SmoothValue & { readonly x: Float64Array }) | null> {
  let low = 0;
  let high = Number.POSITIVE_INFINITY;
  let length = first;
  let best: (SmoothValue & { readonly x: Float64Array }) | null = null;
  for (let trial = 0; trial < MAX_TRIALS; trial++) {
    const moved = x.slice();
    add(moved, direction, length);
    const found = await at(moved);
    if (!(found.value <= here.value + SUFFICIENT * length * slope)) {
      high = length;
    } else {
      if (!best || found.value < best.value) best = { ...found, x: moved };
      if (dot(found.gradient, direction) >= CURVATURE * slope) return best;
      low = length;
    }
    length = Number.isFinite(high) ? (low + high) / 2 : 2 * length;
    if (high - low < 1e-14 * high) break;
  }
  return best;
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i]! * b[i]!;
  return sum;
}

function add(target: Float64Array, source: Float64Array, scale: number): void {
  for (let i = 0; i < target.length; i++) target[i]! += scale * source[i]!;
}

import type { JobContext } from '../../job';
import { dot, GradientMemory } from '../../linalg';

/** λ of a point, smoothed and exact, and how it changes along the directions in which the point can move. */
export interface MixingValue {
  readonly smooth: number;
  readonly exact: number;
  /** Derivatives along the tangent directions; the layout is the problem's own. */
  readonly gradient: Float64Array;
}

/** Something to be made small along a group of transformations: tangent vectors of all points share one basis. */
export interface MixingProblem<Point> {
  /** λ with nuclear norms smoothed by √(x² + δ²), δ = `width` times the size of a typical large factor. Hartree. */
  value(point: Point, width: number): Promise<MixingValue>;
  /** Along the one-parameter group of `direction`. */
  move(point: Point, direction: Float64Array, length: number): Point;
  /** The same factors with the shifts that make each norm least by itself: smoothing rounds off that kink. */
  withMedians(point: Point): Promise<Point>;
}

export interface DescentOptions<Point> {
  /** Steps at each smoothing width. */
  readonly steps: number;
  /** Hartree: two steps running that lower λ by less end a width. */
  readonly settled: number;
  /** Stage to begin with, where a run goes on that was stopped. */
  readonly stage: number;
  /** What progress is called. */
  readonly label: string;
  /** Told of every better point, so that a stopped run leaves its best. */
  readonly onBest?: (point: Point, lambda: number, stage: number) => void;
}

/** Smoothing widths: each is a start for the next, and the last is next to nothing. */
export const WIDTHS = [0.05, 0.02, 0.007, 0.002, 0.0007];
const MAX_BACKTRACKS = 12;
/** Pairs of steps and gradient changes that the direction is made from. */
const MEMORY = 8;
/** Length of a first step in the tangent space. */
const FIRST = 0.3;

/**
 * Descent by limited-memory BFGS on a matrix group, see {@link GradientMemory}, tangent vectors of different points compared in the group's own frame, steps backtracked until
 * λ falls as it should. Never returns a worse point than `start`.
 *
 * @throws Cancelled when stopped; `onBest` has then seen the best so far.
 */
export async function descend<Point>(
  problem: MixingProblem<Point>,
  start: Point,
  options: DescentOptions<Point>,
  ctx: JobContext,
): Promise<{ readonly point: Point; readonly lambda: number; readonly evaluations: number }> {
  const { steps, settled, label } = options;
  let point = start;
  let best = start;
  let bestLambda = Infinity;
  let evaluations = 0;
  const evaluate = (at: Point, width: number) => {
    evaluations++;
    return problem.value(at, width);
  };
  const consider = (candidate: Point, lambda: number, stage: number) => {
    if (lambda >= bestLambda) return;
    best = candidate;
    bestLambda = lambda;
    options.onBest?.(candidate, lambda, stage);
  };
  const considerMedians = async (stage: number) => {
    const candidate = await problem.withMedians(point);
    consider(candidate, (await evaluate(candidate, 0)).exact, stage);
  };
  const total = WIDTHS.length * steps;
  for (let stage = options.stage; stage < WIDTHS.length; stage++) {
    const width = WIDTHS[stage]!;
    let value = await evaluate(point, width);
    consider(point, value.exact, stage);
    if (stage === options.stage) await considerMedians(stage);
    const memory = new GradientMemory(MEMORY);
    let idle = 0;
    for (let step = 0; step < steps && idle < 2; step++) {
      ctx.report(label, stage * steps + step, total);
      await ctx.checkpoint();
      const moved = await search(problem, point, value, memory, width, evaluate, ctx);
      if (!moved) {
        if (memory.size === 0) break;
        memory.forget();
        continue;
      }
      const gain = value.smooth - moved.value.smooth;
      const before = value.gradient;
      memory.learn(
        moved.step,
        moved.value.gradient.map((x, i) => x - before[i]!),
      );
      point = moved.point;
      value = moved.value;
      consider(point, value.exact, stage);
      idle = gain < settled ? idle + 1 : 0;
    }
    await considerMedians(stage);
  }
  ctx.report(label, total, total);
  return { point: best, lambda: bestLambda, evaluations };
}

async function search<Point>(
  problem: MixingProblem<Point>,
  point: Point,
  value: MixingValue,
  memory: GradientMemory,
  width: number,
  evaluate: (at: Point, width: number) => Promise<MixingValue>,
  ctx: JobContext,
) {
  const direction = memory.direction(value.gradient);
  const slope = dot(direction, value.gradient);
  if (!(slope < 0)) return null;
  let length = memory.size > 0 ? 1 : FIRST / Math.sqrt(dot(direction, direction));
  for (let attempt = 0; attempt < MAX_BACKTRACKS; attempt++, length *= 0.35) {
    await ctx.checkpoint();
    const moved = problem.move(point, direction, length);
    const found = await evaluate(moved, width);
    if (found.smooth <= value.smooth + 1e-4 * length * slope) {
      return { point: moved, value: found, step: direction.map((x) => length * x) };
    }
  }
  return null;
}

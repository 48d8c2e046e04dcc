import { GradientMemory } from './gradient-memory';
import { backtracking, type SmoothPoint, type SmoothValue, wolfe } from './line-search';
import { dot } from './vectors';

export interface QuasiNewtonOptions {
  /** @defaultValue 200 */
  readonly steps?: number;
  /** Pairs of steps and gradient changes that are remembered. @defaultValue 16 */
  readonly memory?: number;
  /** Ends where ten steps together lower the value by less than this part of it. @defaultValue 1e-9 */
  readonly settled?: number;
  /**
   * `wolfe` for functions with kinks hardly rounded; `backtracking` where evaluations are dear and the function is
   * smooth on the scale of a step. @defaultValue 'wolfe'
   */
  readonly search?: 'wolfe' | 'backtracking';
  /** Greatest length of a step that nothing is known for. @defaultValue what lowers a linear function by a tenth */
  readonly firstLength?: number;
  /** Called before each evaluation; may throw to stop. */
  readonly checkpoint?: () => Promise<void>;
  /** Told of every step taken, counted from 1. */
  readonly onStep?: (x: Float64Array, step: number) => void;
}

export interface QuasiNewtonResult extends SmoothPoint {
  readonly steps: number;
  readonly evaluations: number;
}

const WINDOW = 10;

/**
 * Least value of a smooth function by limited-memory BFGS, see {@link GradientMemory}, with either line search.
 *
 * @param start - not modified
 * @returns the last point, which has the least value met.
 */
export async function minimiseSmooth(
  evaluate: (x: Float64Array) => SmoothValue | Promise<SmoothValue>,
  start: Float64Array,
  options: QuasiNewtonOptions = {},
): Promise<QuasiNewtonResult> {
  const { steps = 200, settled = 1e-9, firstLength } = options;
  const search = options.search === 'backtracking' ? backtracking : wolfe;
  let evaluations = 0;
  const at = async (x: Float64Array): Promise<SmoothValue> => {
    await options.checkpoint?.();
    evaluations++;
    return evaluate(x);
  };
  const x = Float64Array.from(start);
  let here: SmoothPoint = { x, ...(await at(x)) };
  const memory = new GradientMemory(options.memory ?? 16);
  const values = [here.value];
  while (values.length <= steps) {
    const direction = memory.direction(here.gradient);
    const slope = dot(direction, here.gradient);
    if (!(slope < 0)) break;
    let first = 1;
    if (memory.size === 0) {
      first = Math.min(
        1,
        firstLength ? firstLength / Math.sqrt(-slope) : (0.1 * Math.abs(here.value)) / -slope,
      );
    }
    const found = await search(at, here, direction, slope, first);
    if (!found) {
      if (memory.size === 0) break;
      memory.forget();
      continue;
    }
    const before = here;
    memory.learn(
      found.x.map((value, i) => value - before.x[i]!),
      found.gradient.map((value, i) => value - before.gradient[i]!),
    );
    here = found;
    values.push(here.value);
    options.onStep?.(here.x, values.length - 1);
    const earlier = values[values.length - 1 - WINDOW];
    if (earlier !== undefined && earlier - here.value < settled * Math.abs(here.value)) break;
  }
  return { ...here, steps: values.length - 1, evaluations };
}

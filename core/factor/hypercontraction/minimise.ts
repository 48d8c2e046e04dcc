/** Objective and gradient at a point. */
export interface Evaluation {
  readonly objective: number;
  readonly gradient: Float64Array;
}

export interface MinimiseOptions {
  readonly steps: number;
  /** Ends where ten steps lower the objective by less than this part of it. @defaultValue 1e-5 */
  readonly settled?: number;
  /** Pairs of steps and gradient changes remembered. @defaultValue 20 */
  readonly memory?: number;
  /** Called after every step; false ends. */
  readonly onStep?: (x: Float64Array, value: Evaluation, step: number) => boolean | Promise<boolean>;
}

const MAX_BACKTRACKS = 20;

/**
 * Limited-memory BFGS (D. C. Liu, J. Nocedal, Math. Program. 45, 503 (1989)) with backtracking; pairs without positive
 * curvature are left out.
 *
 * @param x - not modified
 */
export async function minimise(
  x: Float64Array,
  evaluate: (x: Float64Array) => Evaluation | Promise<Evaluation>,
  options: MinimiseOptions,
): Promise<{ readonly x: Float64Array; readonly value: Evaluation; readonly steps: number }> {
  const { steps, settled = 1e-5, memory = 20, onStep } = options;
  const pairs: { s: Float64Array; y: Float64Array; rho: number }[] = [];
  let value = await evaluate(x);
  let taken = 0;
  const history = [value.objective];
  while (taken < steps) {
    let direction = towards(value.gradient, pairs);
    let slope = dot(direction, value.gradient);
    if (!(slope < 0)) {
      pairs.length = 0;
      direction = value.gradient.map((g) => -g);
      slope = -dot(value.gradient, value.gradient);
    }
    if (slope === 0) break;
    let length = pairs.length > 0 ? 1 : Math.min(1, 0.01 / Math.sqrt(-slope));
    let moved: { x: Float64Array; value: Evaluation } | null = null;
    for (let attempt = 0; attempt < MAX_BACKTRACKS && !moved; attempt++) {
      const next = x.map((v, i) => v + length * direction[i]!);
      const found = await evaluate(next);
      if (found.objective <= value.objective + 1e-4 * length * slope) moved = { x: next, value: found };
      else {
        // The parabola through both values and the slope, kept within reason.
        const curvature = 2 * (found.objective - value.objective - length * slope);
        const best = Number.isFinite(curvature) ? (-slope * length * length) / curvature : 0;
        length = Math.min(0.5 * length, Math.max(0.1 * length, best));
      }
    }
    if (!moved) {
      if (pairs.length === 0) break;
      pairs.length = 0;
      continue;
    }
    const s = moved.x.map((v, i) => v - x[i]!);
    const y = moved.value.gradient.map((g, i) => g - value.gradient[i]!);
    const sy = dot(s, y);
    if (sy > 1e-10 * Math.sqrt(dot(s, s) * dot(y, y))) {
      pairs.push({ s, y, rho: 1 / sy });
      if (pairs.length > memory) pairs.shift();
    }
    x = moved.x;
    value = moved.value;
    taken++;
    history.push(value.objective);
    if (onStep && !(await onStep(x, value, taken))) break;
    const before = history[history.length - 11];
    if (before !== undefined && before - value.objective < settled * Math.abs(value.objective)) break;
  }
  return { x, value, steps: taken };
}

function towards(
  gradient: Float64Array,
  pairs: readonly { s: Float64Array; y: Float64Array; rho: number }[],
): Float64Array {
  const d = gradient.map((g) => -g);
  const alphas = new Float64Array(pairs.length);
  for (let i = pairs.length - 1; i >= 0; i--) {
    const { s, y, rho } = pairs[i]!;
    alphas[i] = rho * dot(s, d);
    for (let j = 0; j < d.length; j++) d[j]! -= alphas[i]! * y[j]!;
  }
  const last = pairs.at(-1);
  if (last) {
    const scale = 1 / (last.rho * dot(last.y, last.y));
    for (let j = 0; j < d.length; j++) d[j]! *= scale;
  }
  for (let i = 0; i < pairs.length; i++) {
    const { s, y, rho } = pairs[i]!;
    const beta = alphas[i]! - rho * dot(y, d);
    for (let j = 0; j < d.length; j++) d[j]! += beta * s[j]!;
  }
  return d;
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i]! * b[i]!;
  return sum;
}

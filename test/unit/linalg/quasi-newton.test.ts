import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { dot, GradientMemory, minimiseSmooth } from '../../../core/linalg';

const searches = ['wolfe', 'backtracking'] as const;

/** H. H. Rosenbrock's function, least at 1, 1. */
function valley([x, y]: Float64Array) {
  const [a, b] = [1 - x!, y! - x! * x!];
  return { value: a * a + 100 * b * b, gradient: Float64Array.of(-2 * a - 400 * x! * b, 200 * b) };
}

describe('memory of steps and gradients', () => {
  const vector = fc
    .array(fc.double({ min: -2, max: 2, noNaN: true }), { minLength: 4, maxLength: 4 })
    .map((x) => Float64Array.from(x));

  it('turns the last change of the gradient into the last step, and descends whatever the gradient', () =>
    fc.assert(
      fc.property(fc.array(vector, { minLength: 1, maxLength: 9 }), vector, (steps, gradient) => {
        const memory = new GradientMemory(3);
        // A quadratic with eigenvalues 1 to 4: changes of its gradient are known.
        const hessian = (x: Float64Array) => x.map((v, i) => (i + 1) * v);
        const long = steps.filter((x) => dot(x, x) > 1e-3);
        for (const step of long) memory.learn(step, hessian(step));
        expect(memory.size).toBe(Math.min(3, long.length));
        const last = long.at(-1);
        if (last) {
          // The secant condition: inverse Hessian · change = step.
          memory.direction(hessian(last)).forEach((x, i) => {
            expect(x).toBeCloseTo(-last[i]!, 8);
          });
        }
        if (dot(gradient, gradient) > 0) expect(dot(memory.direction(gradient), gradient)).toBeLessThan(0);
      }),
    ));

  it('takes nothing from a step along which the slope falls, and is steepest descent without pairs', () => {
    const memory = new GradientMemory(3);
    memory.learn(Float64Array.of(1, 2), Float64Array.of(-1, 0.4));
    expect(memory.size).toBe(0);
    expect(memory.direction(Float64Array.of(3, -4))).toEqual(Float64Array.of(-3, 4));
  });
});

describe('limited-memory quasi-Newton steps', () => {
  it.each(searches)('find the minimum of a curved valley, %s', async (search) => {
    const found = await minimiseSmooth(valley, Float64Array.of(-1.2, 1), { settled: 0, search });
    expect(found.x[0]).toBeCloseTo(1, 6);
    expect(found.x[1]).toBeCloseTo(1, 6);
  });

  it('come close to a kink', async () => {
    const found = await minimiseSmooth(
      ([x, y]) => ({
        value: Math.abs(x! - 2) + 3 * Math.abs(y! + 1) + 0.5 * (x! + y!) ** 2,
        gradient: Float64Array.of(Math.sign(x! - 2) + x! + y!, 3 * Math.sign(y! + 1) + x! + y!),
      }),
      Float64Array.of(5, 4),
    );
    // On the kinks x = 2, y = −1 the square pulls with 1 ≤ 1 and 1 ≤ 3: it is the minimum.
    expect(found.value).toBeLessThan(0.5 + 1e-3);
  });

  it.each(searches)('tell of every step, of falling values, and stop when asked to, %s', async (search) => {
    const start = Float64Array.of(-1.2, 1);
    const values = [valley(start).value];
    let checkpoints = 0;
    const found = await minimiseSmooth(valley, start, {
      steps: 12,
      search,
      firstLength: 1e-3,
      checkpoint: async () => {
        checkpoints++;
      },
      onStep: (x, step) => {
        expect(step).toBe(values.length);
        values.push(valley(x).value);
        // Backtracking only shortens the first step; the Wolfe conditions may lengthen it.
        const length = Math.hypot(x[0]! + 1.2, x[1]! - 1);
        if (step === 1 && search === 'backtracking') expect(length).toBeLessThan(1.000001e-3);
      },
    });
    expect(found.steps).toBe(12);
    expect(values).toHaveLength(13);
    for (let i = 1; i < values.length; i++) expect(values[i]).toBeLessThan(values[i - 1]!);
    expect(values.at(-1)).toBe(found.value);
    expect(checkpoints).toBe(found.evaluations);
    expect(start).toEqual(Float64Array.of(-1.2, 1));
    const stopped = minimiseSmooth(valley, start, {
      search,
      checkpoint: async () => {
        if (++checkpoints > 20) throw new RangeError('stop');
      },
    });
    await expect(stopped).rejects.toThrow('stop');
  });
});

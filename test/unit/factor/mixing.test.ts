import { describe, expect, it } from 'vitest';
import { mixFactors } from '../../../core/factor/mixing/mix';
import { type MixingPoint, mixingValue } from '../../../core/factor/mixing/objective';
import { inlineContext } from '../../../core/job';

function randomNumbers(seed: number): () => number {
  let a = seed;
  return () => {
    a = (a + 0x6d2b79f5) | 0;
    let t = Math.imul(a ^ (a >>> 15), 1 | a);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 2147483648 - 1;
  };
}

const n = 4;
const npair = 10;
const count = 6;

function example(excess: number) {
  const random = randomNumbers(3);
  const kappa = new Float64Array(n * n);
  for (let p = 0; p < n; p++) for (let q = 0; q <= p; q++) kappa[p * n + q] = kappa[q * n + p] = random();
  const columns = Float64Array.from({ length: count * npair }, random);
  const shifts = Float64Array.from({ length: count }, () => 0.3 * random());
  return { problem: { n, kappa, excess }, columns, shifts };
}

/** Σ v vᵀ. */
function gram(columns: Float64Array, rows: number): Float64Array {
  const out = new Float64Array(npair * npair);
  for (let t = 0; t < rows; t++) {
    for (let i = 0; i < npair; i++) {
      for (let j = 0; j < npair; j++)
        out[i * npair + j]! += columns[t * npair + i]! * columns[t * npair + j]!;
    }
  }
  return out;
}

describe('mixing of factors', () => {
  it.each([0, 2, -3])('has the gradient that finite differences give, η − N = %i', async (excess) => {
    const { problem, columns, shifts } = example(excess);
    const point: MixingPoint = { count, columns, shifts };
    const context = inlineContext();
    const delta = 0.05;
    const value = await mixingValue(problem, point, delta, context);
    const step = 1e-5;
    const difference = async (array: Float64Array, i: number) => {
      const keep = array[i]!;
      array[i] = keep + step;
      const up = (await mixingValue(problem, point, delta, context)).lambda;
      array[i] = keep - step;
      const down = (await mixingValue(problem, point, delta, context)).lambda;
      array[i] = keep;
      return (up - down) / (2 * step);
    };
    for (let i = 0; i < columns.length; i += 7) {
      expect(await difference(columns, i)).toBeCloseTo(value.columns[i]!, 6);
    }
    for (let t = 0; t < count; t++) expect(await difference(shifts, t)).toBeCloseTo(value.shifts[t]!, 6);
  });

  it.each([count, count + 4])('lowers λ and leaves Σ v vᵀ what it was, %i factors', async (factors) => {
    const { problem, columns } = example(1);
    const context = inlineContext(5);
    const before = await mixingValue(
      problem,
      { count, columns, shifts: new Float64Array(count) },
      0,
      context,
    );
    const seen: number[] = [];
    const result = await mixFactors(
      problem,
      columns,
      count,
      { factors, onBest: (_, lambda) => seen.push(lambda) },
      context,
    );
    expect(result.count).toBe(factors);
    expect(result.lambda).toBeLessThan(0.9 * before.lambda);
    expect(seen[seen.length - 1]).toBe(result.lambda);
    const again = await mixingValue(problem, result, 0, context);
    expect(again.lambda).toBe(result.lambda);
    const [a, b] = [gram(columns, count), gram(result.columns, factors)];
    for (let i = 0; i < a.length; i++) expect(b[i]).toBeCloseTo(a[i]!, 12);
  });

  it('gives the same result for the same seed', async () => {
    const { problem, columns } = example(1);
    const run = () => mixFactors(problem, columns, count, { factors: count + 3, steps: 5 }, inlineContext(9));
    expect((await run()).lambda).toBe((await run()).lambda);
  });
});

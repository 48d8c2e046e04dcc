import { describe, expect, it } from 'vitest';
import { inlineContext } from '../../../core/job';
import { multiply, multiplyAsync, transpose } from '../../../core/linalg';
import { distance, naiveProduct, naiveTranspose, randomNumbers } from './support';

describe('multiply', () => {
  for (const [m, k, n] of [
    [1, 1, 1],
    [3, 5, 2],
    [17, 1, 19],
    [40, 300, 9],
    [130, 20, 530],
  ]) {
    it(`${m}×${k} by ${k}×${n} is the sum of products, transposed or not`, () => {
      const a = randomNumbers(m * k, 1);
      const b = randomNumbers(k * n, 2);
      const at = naiveTranspose(a, m, k);
      const bt = naiveTranspose(b, k, n);
      const c = naiveProduct(a, b, m, k, n);
      expect(distance(multiply(a, b, m, k, n), c)).toBeLessThan(1e-12);
      expect(distance(multiply(at, b, m, k, n, { transposeA: true }), c)).toBeLessThan(1e-12);
      expect(distance(multiply(a, bt, m, k, n, { transposeB: true }), c)).toBeLessThan(1e-12);
      expect(distance(multiply(at, bt, m, k, n, { transposeA: true, transposeB: true }), c)).toBeLessThan(
        1e-12,
      );
    });
  }

  it('as a job it gives the same numbers, with rising progress', async () => {
    const [m, k, n] = [700, 500, 600];
    const a = randomNumbers(m * k, 3);
    const b = randomNumbers(k * n, 4);
    const done: number[] = [];
    const context = { ...inlineContext(), report: (_: string, x: number) => done.push(x) };
    const options = { transposeA: true, transposeB: true };
    const c = await multiplyAsync(a, b, m, k, n, options, context);
    expect(distance(c, multiply(a, b, m, k, n, options))).toBe(0);
    expect(done.length).toBeGreaterThan(3);
    expect(done).toEqual(done.slice().sort((x, y) => x - y));
    expect(done.at(-1)).toBe(2 * m * k * n);
  });

  it('gives zeros for an empty sum and nothing for no rows', () => {
    expect(Array.from(multiply(new Float64Array(0), new Float64Array(0), 2, 0, 2))).toEqual([0, 0, 0, 0]);
    expect(multiply(new Float64Array(0), randomNumbers(6), 0, 3, 2).length).toBe(0);
  });

  it('refuses factors that are too short', () => {
    expect(() => multiply(new Float64Array(5), new Float64Array(6), 2, 3, 2)).toThrow(
      /left factor needs 2×3/,
    );
    expect(() => multiply(new Float64Array(6), new Float64Array(5), 2, 3, 2)).toThrow(
      /right factor needs 3×2/,
    );
  });
});

it('transpose swaps rows and columns', () => {
  expect(Array.from(transpose(Float64Array.of(1, 2, 3, 4, 5, 6), 2, 3))).toEqual([1, 4, 2, 5, 3, 6]);
});

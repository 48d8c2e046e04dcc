import { describe, expect, it } from 'vitest';
import { Cancelled, inlineContext } from '../../../core/job';
import { denseRows, multiply, pivotedCholesky, pivotedCholeskyAsync } from '../../../core/linalg';
import { distance, naiveProduct, naiveTranspose, randomNumbers } from './support';

const gram = (rows: Float64Array, rank: number, n: number) =>
  naiveProduct(naiveTranspose(rows, rank, n), rows, n, rank, n);

const trace = (a: Float64Array, n: number) =>
  a.filter((_, i) => i % (n + 1) === 0).reduce((x, y) => x + y, 0);

it('a worked example: 2×2 by hand', () => {
  // [[4, 2], [2, 5]]: pivot 1 (5), c = (2, 5)/√5, remainder 4 − 4/5.
  const c = pivotedCholesky(denseRows(Float64Array.of(4, 2, 2, 5), 2));
  expect(Array.from(c.pivots)).toEqual([1, 0]);
  expect(distance(c.vectors, [2 / Math.sqrt(5), Math.sqrt(5), Math.sqrt(3.2), 0])).toBeLessThan(1e-15);
});

describe('reconstruction', () => {
  for (const [n, rank] of [
    [5, 5],
    [12, 4],
    [61, 20],
    [150, 150],
  ]) {
    it(`order ${n}, rank ${rank}`, () => {
      const a = gram(randomNumbers(rank * n, n), rank, n);
      const c = pivotedCholesky(denseRows(a, n), { threshold: 1e-10 });
      expect(c.rank).toBe(rank);
      expect(distance(gram(c.vectors, rank, n), a)).toBeLessThan(1e-12);
      expect(c.residualTrace).toBeLessThan(1e-10);
      // Triangular in pivot order.
      c.pivots.forEach((_, j) => {
        for (let i = 0; i < j; i++) expect(c.vectors[j * n + c.pivots[i]]).toBe(0);
        expect(c.vectors[j * n + c.pivots[j]]).toBeGreaterThan(0);
      });
    });
  }

  it('stops at the threshold with the true trace of the remainder', () => {
    const n = 40;
    const rows = randomNumbers(n * n, 2).map((x, i) => x * 2 ** -Math.floor(i / n));
    const a = gram(rows, n, n);
    let before = n;
    for (const threshold of [1e-8, 1e-4, 1e-1]) {
      const c = pivotedCholesky(denseRows(a, n), { threshold });
      const left = a.map((x, i) => x - gram(c.vectors, c.rank, n)[i]);
      expect(trace(left, n)).toBeCloseTo(c.residualTrace, 11);
      expect(c.residualTrace).toBeLessThanOrEqual(threshold);
      expect(c.rank).toBeLessThan(before);
      const oneLess = pivotedCholesky(denseRows(a, n), { threshold, maxRank: c.rank - 1 });
      expect(oneLess.residualTrace).toBeGreaterThan(threshold);
      before = c.rank;
    }
  });

  it('keeps the number of columns asked for', () => {
    const a = gram(randomNumbers(100, 3), 10, 10);
    const c = pivotedCholesky(denseRows(a, 10), { maxRank: 3 });
    expect([c.rank, c.vectors.length, c.pivots.length]).toEqual([3, 30, 3]);
  });

  it('does not take rounding for content', () => {
    const n = 30;
    const a = gram(randomNumbers(3 * n, 4), 3, n);
    const c = pivotedCholesky(denseRows(a, n));
    expect(c.residualTrace).toBeLessThan(1e-12);
    expect(c.rank).toBeLessThan(n);
    expect(distance(gram(c.vectors, c.rank, n), a)).toBeLessThan(1e-12);
  });

  it('finds nothing in zero or in an empty matrix', () => {
    expect(pivotedCholesky(denseRows(new Float64Array(16), 4)).rank).toBe(0);
    expect(pivotedCholesky(denseRows(new Float64Array(0), 0)).rank).toBe(0);
  });
});

describe('pivot rule', () => {
  const diagonal = (...d: number[]) => {
    const a = new Float64Array(d.length ** 2);
    d.forEach((x, i) => {
      a[i * (d.length + 1)] = x;
    });
    return Array.from(pivotedCholesky(denseRows(a, d.length)).pivots);
  };

  it('takes the largest diagonal element first', () => {
    expect(diagonal(1, 3, 2)).toEqual([1, 2, 0]);
  });

  it('takes the lowest index among those within 1e-6', () => {
    expect(diagonal(1, 1 + 5e-7, 1 - 5e-7)).toEqual([0, 1, 2]);
    expect(diagonal(1, 1 + 2e-6)).toEqual([1, 0]);
  });
});

it('asks for the rows of the pivots only, and sees no change of its input', () => {
  const n = 20;
  const a = gram(randomNumbers(4 * n, 5), 4, n);
  const source = denseRows(a, n);
  const asked: number[] = [];
  const diagonal = source.diagonal.slice();
  const spy = {
    n,
    diagonal,
    rowInto(out: Float64Array, i: number) {
      asked.push(i);
      multiply(a, a, 1, n, 1); // other users of the shared memory do no harm
      source.rowInto(out, i);
    },
  };
  const c = pivotedCholesky(spy, { threshold: 1e-12 });
  expect(asked).toEqual(Array.from(c.pivots));
  expect(diagonal).toEqual(source.diagonal);
});

it('as a job it gives the same columns, counts them, and stops on request', async () => {
  const n = 25;
  const a = gram(randomNumbers(9 * n, 6), 9, n);
  const counts: number[] = [];
  const context = { ...inlineContext(), report: (_: string, done: number) => counts.push(done) };
  const c = await pivotedCholeskyAsync(denseRows(a, n), { threshold: 1e-11 }, context);
  expect(c).toEqual(pivotedCholesky(denseRows(a, n), { threshold: 1e-11 }));
  expect(counts).toEqual([1, 2, 3, 4, 5, 6, 7, 8, 9]);
  const stopping = {
    ...inlineContext(),
    checkpoint: async () => {
      throw new Cancelled();
    },
  };
  await expect(pivotedCholeskyAsync(denseRows(a, n), {}, stopping)).rejects.toThrow(Cancelled);
});

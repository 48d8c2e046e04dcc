import { Matrix, SingularValueDecomposition } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { inlineContext, type JobContext } from '../../../core/job';
import { type SingularOptions, type SingularValues, singularValues } from '../../../core/linalg';
import { distance, naiveProduct, naiveTranspose, orthonormality, randomNumbers } from './support';

function rebuilt({ rows, cols, rank, s, u, v }: SingularValues): Float64Array {
  const scaled = u.map((x, i) => x * s[Math.floor(i / rows)]);
  return naiveProduct(naiveTranspose(scaled, rank, rows), v, rows, rank, cols);
}

async function check(a: Float64Array, rows: number, cols: number, options: SingularOptions = {}) {
  const x = await singularValues(a, rows, cols, inlineContext(), options);
  const largest = x.s[0] ?? 0;
  expect(distance(rebuilt(x), a)).toBeLessThan(1e-14 * Math.max(1, largest));
  const short = rows <= cols ? orthonormality(x.u, x.rank, rows) : orthonormality(x.v, x.rank, cols);
  const long = rows <= cols ? orthonormality(x.v, x.rank, cols) : orthonormality(x.u, x.rank, rows);
  expect(short).toBeLessThan(1e-13);
  expect(long).toBeLessThan(1e-9);
  for (let i = 1; i < x.rank; i++) expect(x.s[i]).toBeLessThanOrEqual(x.s[i - 1]);
  return { ...x, long };
}

/** Orthonormal rows of the discrete cosine transform (type II): exact by formula. */
function cosines(n: number): Float64Array {
  return Float64Array.from({ length: n * n }, (_, i) => {
    const k = Math.floor(i / n);
    return Math.sqrt((k === 0 ? 1 : 2) / n) * Math.cos((Math.PI * k * ((i % n) + 0.5)) / n);
  });
}

/** Σ s_k x_k y_kᵀ with cosine vectors of both lengths. */
function withValues(s: number[], rows: number, cols: number): Float64Array {
  const left = cosines(rows).slice(0, s.length * rows);
  const right = cosines(cols)
    .slice(0, s.length * cols)
    .map((x, i) => x * s[Math.floor(i / cols)]);
  return naiveProduct(naiveTranspose(left, s.length, rows), right, rows, s.length, cols);
}

describe('prescribed singular values', () => {
  it('well separated', async () => {
    const s = [5, 3, 2, 1, 0.5];
    for (const [rows, cols] of [
      [5, 9],
      [9, 5],
      [20, 20],
    ]) {
      const x = await check(withValues(s, rows, cols), rows, cols);
      expect(distance(x.s, s)).toBeLessThan(1e-14);
      expect(x.long).toBeLessThan(1e-12);
    }
  });

  it('equal ones', async () => {
    const s = [2, 2, 2, 2, 1, 1, 1, 1e-2, 1e-2];
    const x = await check(withValues(s, 30, 40), 30, 40);
    expect(distance(x.s, s)).toBeLessThan(1e-14);
    expect(x.long).toBeLessThan(1e-11);
  });

  it('an orthogonal matrix', async () => {
    const x = await check(cosines(33), 33, 33);
    expect(distance(x.s, new Array(33).fill(1))).toBeLessThan(1e-13);
  });

  it('thirteen decades: each right relative to the largest', async () => {
    const s = Array.from({ length: 60 }, (_, i) => 10 ** (-i / 4.8));
    const x = await check(withValues(s, 80, 70), 80, 70);
    expect(x.rank).toBe(60);
    expect(distance(x.s, s)).toBeLessThan(1e-14);
  });

  it('clusters at the border between two levels of the recursion', async () => {
    for (const border of [1e-3, 5e-4, 1e-6]) {
      const s = [1, 1, 0.1, border, border, border, border, border / 20, border / 20];
      const x = await check(withValues(s, 20, 24), 20, 24);
      expect(distance(x.s, s)).toBeLessThan(1e-14);
    }
  });

  it('rank below both sides', async () => {
    for (const small of [1e-2, 1e-5, 1e-8]) {
      const x = await check(withValues([1, 0.5, small], 25, 30), 25, 30);
      expect(x.rank).toBe(3);
    }
    const none = await check(new Float64Array(12), 3, 4);
    expect(none.rank).toBe(0);
  });

  it('drops what the tolerance says', async () => {
    const s = [1, 1e-2, 1e-5, 1e-7];
    const a = withValues(s, 12, 15);
    for (const [tolerance, rank] of [
      [1e-3, 2],
      [1e-6, 3],
      [1e-9, 4],
    ]) {
      const x = await singularValues(a, 12, 15, inlineContext(), { tolerance });
      expect(x.rank).toBe(rank);
      expect(distance(rebuilt(x), a)).toBeLessThan(tolerance);
    }
  });
});

it('random matrices agree with ml-matrix', async () => {
  for (const [rows, cols] of [
    [1, 1],
    [1, 6],
    [7, 4],
    [15, 15],
    [30, 44],
  ]) {
    const a = randomNumbers(rows * cols, rows);
    const other = new SingularValueDecomposition(Matrix.from1DArray(rows, cols, a), { autoTranspose: true });
    const x = await check(a, rows, cols);
    expect(distance(x.s, other.diagonal.slice(0, Math.min(rows, cols)))).toBeLessThan(1e-13 * x.s[0]);
  }
});

it('reports rising progress up to the end', async () => {
  const seen: [number, number | null][] = [];
  const context: JobContext = {
    ...inlineContext(),
    report: (_stage, done, total) => seen.push([done, total]),
  };
  await singularValues(randomNumbers(60 * 70, 1), 60, 70, context);
  for (let i = 1; i < seen.length; i++) expect(seen[i][0]).toBeGreaterThanOrEqual(seen[i - 1][0]);
  expect(seen.at(-1)![0]).toBe(seen.at(-1)![1]);
});

it('refuses data that are too short', async () => {
  await expect(singularValues(new Float64Array(5), 2, 3, inlineContext())).rejects.toThrow(
    /2×3 matrix: got 5/,
  );
});

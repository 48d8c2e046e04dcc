import { describe, expect, it } from 'vitest';
import { antisymmetricNormsBatch, antisymmetricPairs, hermitianEigenvalues } from '../../../core/linalg';
import {
  distance,
  identity,
  naiveProduct,
  naiveTranspose,
  randomAntisymmetric,
  randomNumbers,
} from './support';

/** Checks the canonical form and returns the a_j. */
function check(a: Float64Array, n: number, tolerance = 1e-13): Float64Array {
  const { count, a: sizes, u, v } = antisymmetricPairs(a, n);
  const all = Float64Array.of(...u, ...v);
  const overlaps = naiveProduct(all, naiveTranspose(all, 2 * count, n), 2 * count, n, 2 * count);
  expect(distance(overlaps, identity(2 * count))).toBeLessThan(tolerance);
  const back = new Float64Array(n * n);
  for (let j = 0; j < count; j++) {
    for (let p = 0; p < n; p++) {
      for (let q = 0; q < n; q++) {
        back[p * n + q] += sizes[j] * (u[j * n + p] * v[j * n + q] - v[j * n + p] * u[j * n + q]);
      }
    }
  }
  const scale = Math.max(1, sizes[0] ?? 0);
  expect(distance(back, a)).toBeLessThan(tolerance * scale);
  for (let j = 1; j < count; j++) expect(sizes[j]).toBeLessThanOrEqual(sizes[j - 1]);
  // The values alone come by another route.
  const norms = antisymmetricNormsBatch(a, 1, n);
  expect(norms.length).toBe(n >> 1);
  expect(distance(norms.slice(0, count), sizes)).toBeLessThan(tolerance * scale);
  for (const rest of norms.slice(count)) expect(rest).toBeLessThan(1e-12 * scale);
  return sizes;
}

/** Q A Qᵀ with a product of reflections Q. */
function rotated(a: Float64Array, n: number, seed: number): Float64Array {
  let q = identity(n);
  for (let r = 0; r < 3; r++) {
    const x = randomNumbers(n, seed + r);
    const size = x.reduce((sum, y) => sum + y * y, 0);
    const reflection = identity(n).map((e, i) => e - (2 * x[Math.floor(i / n)] * x[i % n]) / size);
    q = naiveProduct(q, reflection, n, n, n);
  }
  const b = naiveProduct(naiveProduct(q, a, n, n, n), naiveTranspose(q, n, n), n, n, n);
  return b.map((x, i) => (x - b[(i % n) * n + Math.floor(i / n)]) / 2);
}

/** Block diagonal with [[0, a], [−a, 0]]; zeros fill up to n. */
function blocks(sizes: number[], n: number): Float64Array {
  const m = new Float64Array(n * n);
  sizes.forEach((a, j) => {
    m[2 * j * n + 2 * j + 1] = a;
    m[(2 * j + 1) * n + 2 * j] = -a;
  });
  return m;
}

describe('known forms', () => {
  it('cross product with w: one pair |w| and the axis as zero mode', () => {
    const a = Float64Array.of(0, -3, 2, 3, 0, -6, -2, 6, 0);
    expect(distance(check(a, 3), [7])).toBeLessThan(1e-14);
  });

  it('directed path: 2 cos(πk/(n+1))', () => {
    for (const n of [2, 3, 4, 9, 50, 51]) {
      const a = new Float64Array(n * n);
      for (let i = 1; i < n; i++) {
        a[i * n + i - 1] = -1;
        a[(i - 1) * n + i] = 1;
      }
      const exact = Float64Array.from(
        { length: n >> 1 },
        (_, k) => 2 * Math.cos((Math.PI * (k + 1)) / (n + 1)),
      );
      expect(distance(check(a, n), exact)).toBeLessThan(1e-13);
    }
  });

  it('equal sizes: a complex structure, rotated', () => {
    for (const n of [6, 20, 50]) {
      const a = rotated(blocks(new Array(n / 2).fill(1), n), n, n);
      expect(distance(check(a, n), new Array(n / 2).fill(1))).toBeLessThan(1e-13);
    }
  });

  it('equal pairs, zero modes and an odd order together', () => {
    const a = rotated(blocks([3, 3, 3, 1, 1, 0.5], 17), 17, 5);
    expect(distance(check(a, 17), [3, 3, 3, 1, 1, 0.5])).toBeLessThan(1e-13);
  });

  it('tiny sizes are not squared away', () => {
    // In −A² the last three would be 1e-14, 1e-20 and 1e-22, below the rounding of the first.
    const sizes = [1, 0.3, 1e-7, 1e-10, 1e-11];
    const found = check(rotated(blocks(sizes, 12), 12, 9), 12);
    expect(distance(found, sizes)).toBeLessThan(1e-15);
  });

  it('nothing from zero, of any order', () => {
    for (const n of [0, 1, 2, 7]) expect(antisymmetricPairs(new Float64Array(n * n), n).count).toBe(0);
    expect(antisymmetricPairs(new Float64Array(1), 1).count).toBe(0);
  });
});

describe('random matrices', () => {
  for (const n of [2, 3, 4, 5, 10, 31, 50, 81]) {
    it(`order ${n}: the positive eigenvalues of iA`, () => {
      const a = randomAntisymmetric(n, n);
      const values = hermitianEigenvalues({ n, re: new Float64Array(n * n), im: a });
      const positive = values.slice(n - (n >> 1)).reverse();
      expect(distance(check(a, n), positive)).toBeLessThan(1e-13 * n);
    });
  }

  it('a batch equals one by one, and only the strict lower triangle is read', () => {
    const [n, count] = [11, 7];
    const all = Array.from({ length: count }, (_, i) => randomAntisymmetric(n, 40 + i));
    const joined = Float64Array.from(all.flatMap((a) => Array.from(a)));
    const spoiled = joined.map((x, i) => (i % n >= Math.floor((i % (n * n)) / n) ? 9 : x));
    const norms = antisymmetricNormsBatch(joined, count, n);
    expect(antisymmetricNormsBatch(spoiled, count, n)).toEqual(norms);
    all.forEach((a, i) => {
      expect(distance(norms.slice(i * 5, i * 5 + 5), antisymmetricPairs(a, n).a)).toBeLessThan(1e-14);
    });
  });
});

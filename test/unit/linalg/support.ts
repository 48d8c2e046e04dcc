import { expect } from 'vitest';
import { randomSource } from '../../../core/linalg/random';

/** Uniform numbers in (−1, 1). */
export function randomNumbers(count: number, seed = 1): Float64Array {
  const random = randomSource(seed);
  return Float64Array.from({ length: count }, random);
}

export function randomSymmetric(n: number, seed = 1): Float64Array {
  return mirrored(randomNumbers(n * n, seed), n, 1);
}

export function randomAntisymmetric(n: number, seed = 1): Float64Array {
  const a = mirrored(randomNumbers(n * n, seed), n, -1);
  for (let i = 0; i < n; i++) a[i * n + i] = 0;
  return a;
}

export function randomHermitian(n: number, seed = 1) {
  return { n, re: randomSymmetric(n, seed), im: randomAntisymmetric(n, seed + 1000) };
}

/** Product by the definition, independent of every kernel. */
export function naiveProduct(a: Float64Array, b: Float64Array, m: number, k: number, n: number) {
  const c = new Float64Array(m * n);
  for (let i = 0; i < m; i++) {
    for (let j = 0; j < n; j++) {
      for (let p = 0; p < k; p++) c[i * n + j] += a[i * k + p] * b[p * n + j];
    }
  }
  return c;
}

export function naiveTranspose(a: Float64Array, rows: number, cols: number): Float64Array {
  return Float64Array.from({ length: rows * cols }, (_, i) => a[(i % rows) * cols + Math.floor(i / rows)]);
}

export function identity(n: number): Float64Array {
  return Float64Array.from({ length: n * n }, (_, i) => (i % (n + 1) === 0 ? 1 : 0));
}

/** Largest |a_i − b_i|; unequal lengths and NaN fail. */
export function distance(a: ArrayLike<number>, b: ArrayLike<number>): number {
  expect(a.length).toBe(b.length);
  let worst = 0;
  for (let i = 0; i < a.length; i++) {
    const gap = Math.abs(a[i] - b[i]);
    if (!(gap <= worst)) worst = gap;
  }
  return worst;
}

/** Deviation of `count` rows of length n from orthonormality. */
export function orthonormality(rows: Float64Array, count: number, n: number): number {
  return distance(naiveProduct(rows, naiveTranspose(rows, count, n), count, n, count), identity(count));
}

/** Largest element of A V − V Λ for eigenvectors in rows of V. */
export function eigenResidual(
  a: Float64Array,
  n: number,
  values: ArrayLike<number>,
  vectors: Float64Array,
): number {
  const scaled = vectors.map((x, i) => x * values[Math.floor(i / n)]);
  return distance(naiveProduct(vectors, a, values.length, n, n), scaled);
}

/** The same for a Hermitian matrix, with the orthonormality of its complex vectors. */
export function hermitianResiduals(
  h: { n: number; re: Float64Array; im: Float64Array },
  x: { values: Float64Array; re: Float64Array; im: Float64Array },
) {
  const { n } = h;
  const count = x.values.length;
  let residual = 0;
  let overlap = 0;
  for (let v = 0; v < count; v++) {
    for (let p = 0; p < n; p++) {
      let sr = 0;
      let si = 0;
      for (let q = 0; q < n; q++) {
        sr += h.re[p * n + q] * x.re[v * n + q] - h.im[p * n + q] * x.im[v * n + q];
        si += h.re[p * n + q] * x.im[v * n + q] + h.im[p * n + q] * x.re[v * n + q];
      }
      const gap = Math.max(
        Math.abs(sr - x.values[v] * x.re[v * n + p]),
        Math.abs(si - x.values[v] * x.im[v * n + p]),
      );
      if (!(gap <= residual)) residual = gap;
    }
    for (let w = 0; w <= v; w++) {
      let sr = v === w ? -1 : 0;
      let si = 0;
      for (let q = 0; q < n; q++) {
        sr += x.re[w * n + q] * x.re[v * n + q] + x.im[w * n + q] * x.im[v * n + q];
        si += x.re[w * n + q] * x.im[v * n + q] - x.im[w * n + q] * x.re[v * n + q];
      }
      const gap = Math.max(Math.abs(sr), Math.abs(si));
      if (!(gap <= overlap)) overlap = gap;
    }
  }
  return { residual, overlap };
}

function mirrored(a: Float64Array, n: number, sign: number): Float64Array {
  for (let i = 0; i < n; i++) for (let j = 0; j < i; j++) a[j * n + i] = sign * a[i * n + j];
  return a;
}

import { expect, it } from 'vitest';
import { inlineContext } from '../../../core/job';
import { householderQr, symmetricEigenvalues } from '../../../core/linalg';
import {
  distance,
  naiveProduct,
  naiveTranspose,
  orthonormality,
  randomNumbers,
  randomSymmetric,
} from './support';

async function check(a: Float64Array, rows: number, cols: number) {
  const { q, r } = await householderQr(a, rows, cols, inlineContext());
  expect(distance(naiveProduct(q, r, rows, cols, cols), a)).toBeLessThan(1e-13);
  expect(orthonormality(naiveTranspose(q, rows, cols), cols, rows)).toBeLessThan(1e-13);
  for (let i = 0; i < cols; i++) for (let j = 0; j < i; j++) expect(r[i * cols + j]).toBe(0);
  return { q, r };
}

for (const [rows, cols] of [
  [1, 1],
  [5, 1],
  [6, 6],
  [40, 31],
  [70, 33],
  [90, 90],
  [320, 70],
]) {
  it(`${rows}×${cols}: A = QR, QᵀQ = 1, R upper triangular`, () =>
    check(randomNumbers(rows * cols, rows), rows, cols));
}

it('zero, dependent and tiny columns keep Q orthonormal', async () => {
  await check(new Float64Array(20), 5, 4);
  const a = randomNumbers(50 * 40, 3);
  for (let i = 0; i < 50; i++) {
    a[i * 40 + 7] = a[i * 40 + 2] - a[i * 40 + 3];
    a[i * 40 + 20] = 0;
    a[i * 40 + 30] *= 1e-200;
  }
  const { r } = await check(a, 50, 40);
  expect(Math.abs(r[7 * 40 + 7])).toBeLessThan(1e-14);
});

it('halves the eigenproblem [[C, W], [Wᵀ, 0]]', async () => {
  // With Wᵀ = Q R the other values of the large matrix are zero: design page 01, the large sets.
  const [n, long] = [9, 30];
  const c = randomSymmetric(n, 4);
  const w = randomNumbers(n * long, 5);
  const { r } = await householderQr(naiveTranspose(w, n, long), long, n, inlineContext());
  const assemble = (size: number, upper: (i: number, j: number) => number) => {
    const m = new Float64Array(size * size);
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) m[i * size + j] = c[i * n + j];
      for (let j = n; j < size; j++) m[i * size + j] = m[j * size + i] = upper(i, j - n);
    }
    return symmetricEigenvalues(m, size);
  };
  const full = assemble(n + long, (i, j) => w[i * long + j]);
  const halved = assemble(2 * n, (i, j) => r[j * n + i]);
  const zeros = new Float64Array(long - n);
  expect(distance(full, Float64Array.of(...halved, ...zeros).sort())).toBeLessThan(1e-13);
});

it('refuses wide matrices and short data', async () => {
  await expect(householderQr(new Float64Array(6), 2, 3, inlineContext())).rejects.toThrow(
    /expected rows ≥ cols/,
  );
  await expect(householderQr(new Float64Array(5), 3, 2, inlineContext())).rejects.toThrow(
    /5 numbers for 3×2/,
  );
});

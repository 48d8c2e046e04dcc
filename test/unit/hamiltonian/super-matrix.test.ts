import { describe, expect, it } from 'vitest';
import {
  isSymmetricPlane,
  MUS,
  type Mu,
  operatorFromVector,
  type Sector,
  sectorDimension,
  sectorMatrix,
  tensorElement,
  vectorFromOperator,
} from '../../../core/hamiltonian';
import { randomArray, randomTensor, uniform } from './random-hamiltonian';

/** All basis matrices of a sector: [μ, re or im flag, n×n values], in the documented order. */
function basis(n: number, sector: Sector): { mu: Mu; matrix: Float64Array; imaginary: boolean }[] {
  const elements = [];
  for (const mu of MUS) {
    const symmetric = isSymmetricPlane(sector, mu);
    for (let p = 0; p < n; p++) {
      for (let q = 0; q <= (symmetric ? p : p - 1); q++) {
        const matrix = new Float64Array(n * n);
        matrix[p * n + q] = p === q ? 1 : Math.SQRT1_2;
        if (p !== q) matrix[q * n + p] = symmetric ? Math.SQRT1_2 : -Math.SQRT1_2;
        elements.push({ mu, matrix, imaginary: !symmetric });
      }
    }
  }
  return elements;
}

describe('super-matrix', () => {
  // Dimensions as printed in textbooks of real and imaginary Hermitian matrices: n(n+1)/2 and n(n−1)/2.
  it.each([1, 2, 5])('has sectors of dimension 2n² each for n = %i, 4n² together', (n) => {
    expect(sectorDimension(n, 'even')).toBe((n * (n + 1)) / 2 + (3 * n * (n - 1)) / 2);
    expect(sectorDimension(n, 'odd')).toBe((n * (n - 1)) / 2 + (3 * n * (n + 1)) / 2);
    expect(sectorDimension(n, 'even') + sectorDimension(n, 'odd')).toBe(4 * n * n);
  });

  it.each([1, 2, 3])('expands back to the tensor, n = %i', (n) => {
    const g = randomTensor(n, uniform(17 + n));
    const re = new Float64Array(16 * n ** 4);
    const im = new Float64Array(16 * n ** 4);
    for (const sector of ['even', 'odd'] as const) {
      const elements = basis(n, sector);
      const matrix = sectorMatrix(n, g, sector);
      const dim = elements.length;
      for (let a = 0; a < dim; a++) {
        for (let b = 0; b < dim; b++) {
          expect(matrix[a * dim + b]).toBe(matrix[b * dim + a]);
          const [x, y] = [elements[a]!, elements[b]!];
          const quarterTurns = (x.imaginary ? 1 : 0) + (y.imaginary ? 1 : 0);
          for (let i = 0; i < n * n; i++) {
            for (let j = 0; j < n * n; j++) {
              const value = matrix[a * dim + b]! * x.matrix[i]! * y.matrix[j]!;
              const at = ((x.mu * 4 + y.mu) * n * n + i) * n * n + j;
              if (quarterTurns === 0) re[at]! += value;
              else if (quarterTurns === 1) im[at]! += value;
              else re[at]! -= value;
            }
          }
        }
      }
    }
    for (const mu of MUS) {
      for (const nu of MUS) {
        for (let i = 0; i < n ** 4; i++) {
          const at = (mu * 4 + nu) * n ** 4 + i;
          const [p, q, r, s] = [
            Math.floor(i / n ** 3),
            Math.floor(i / n ** 2) % n,
            Math.floor(i / n) % n,
            i % n,
          ];
          const [x, y] = tensorElement(g, n, mu, nu, p, q, r, s);
          expect(Math.abs(re[at]! - x)).toBeLessThan(1e-14);
          expect(Math.abs(im[at]! - y)).toBeLessThan(1e-14);
        }
      }
    }
  });

  it('keeps the norm: basis vectors and operators are one to one', () => {
    for (const sector of ['even', 'odd'] as const) {
      const vector = randomArray(sectorDimension(4, sector), uniform(3));
      const operator = operatorFromVector(4, sector, [0, 1, 2, 3], vector);
      const again = vectorFromOperator(operator);
      const norm = (x: Float64Array) => x.reduce((sum, value) => sum + value * value, 0);
      expect(norm(operator.planes)).toBeCloseTo(norm(vector), 12);
      for (const [i, value] of vector.entries()) expect(again[i]).toBeCloseTo(value, 14);
    }
  });

  it('takes a subset of planes in the given order', () => {
    const n = 3;
    const g = randomTensor(n, uniform(5));
    const all = sectorMatrix(n, g, 'odd');
    const some = sectorMatrix(n, g, 'odd', [1, 2, 3]);
    const [dim, part] = [sectorDimension(n, 'odd'), sectorDimension(n, 'odd', [1, 2, 3])];
    for (let a = 0; a < part; a++) {
      for (let b = 0; b < part; b++) {
        expect(some[a * part + b]).toBe(all[(a + dim - part) * dim + b + dim - part]);
      }
    }
  });
});

import { EigenvalueDecomposition, Matrix } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { Cancelled, inlineContext, type JobContext } from '../../../core/job';
import {
  multiply,
  symmetricEigen,
  symmetricEigenAsync,
  symmetricEigenvalues,
  symmetricEigenvaluesAsync,
  symmetricEigenvaluesBatch,
  symmetricNuclearNorm,
} from '../../../core/linalg';
import { createArena, plainArena, put } from '../../../core/linalg/kernels/arena';
import { finish } from '../../../core/linalg/steps';
import { eigenInArena } from '../../../core/linalg/symmetric';
import { distance, eigenResidual, identity, orthonormality, randomNumbers, randomSymmetric } from './support';

/** Symmetric tridiagonal matrix. */
function tridiagonal(
  n: number,
  diagonal: (i: number) => number,
  beside: (i: number) => number,
): Float64Array {
  const a = new Float64Array(n * n);
  for (let i = 0; i < n; i++) {
    a[i * n + i] = diagonal(i);
    if (i > 0) a[i * n + i - 1] = a[(i - 1) * n + i] = beside(i);
  }
  return a;
}

function check(a: Float64Array, n: number, tolerance = 1e-13): Float64Array {
  const { values, vectors } = symmetricEigen(a, n);
  const scale = Math.max(1, Math.abs(values[0]), Math.abs(values[n - 1]));
  expect(eigenResidual(a, n, values, vectors)).toBeLessThan(tolerance * scale);
  expect(orthonormality(vectors, n, n)).toBeLessThan(tolerance);
  expect(Array.from(values)).toEqual(Array.from(values).sort((x, y) => x - y));
  // Values alone come from QL instead of divide and conquer.
  expect(distance(symmetricEigenvalues(a, n), values)).toBeLessThan(tolerance * scale);
  return values;
}

describe('known spectra', () => {
  // Below, at and above the borders of the unpanelled reduction and of the leaves.
  for (const n of [1, 2, 3, 48, 49, 97, 160, 161, 193, 260]) {
    it(`path graph of ${n}: 2 − 2 cos(πk/n)`, () => {
      const laplacian = tridiagonal(
        n,
        (i) => (n === 1 ? 0 : i === 0 || i === n - 1 ? 1 : 2),
        () => -1,
      );
      const exact = Float64Array.from({ length: n }, (_, k) => 2 - 2 * Math.cos((Math.PI * k) / n));
      expect(distance(check(laplacian, n), exact)).toBeLessThan(1e-13);
    });
  }

  it("Wilkinson's W21+: the largest pair agrees to 14 digits", () => {
    // 10.746194182903322 and …393 as printed by Wilkinson, The Algebraic Eigenvalue Problem (1965), quoted from memory.
    const values = check(
      tridiagonal(
        21,
        (i) => Math.abs(10 - i),
        () => 1,
      ),
      21,
    );
    expect(values[19]).toBeCloseTo(10.746194182903322, 12);
    expect(values[20]).toBeCloseTo(10.746194182903393, 12);
    expect(values[20]).toBeGreaterThanOrEqual(values[19]);
  });

  it('glued Wilkinson matrices: clusters within 1e-13 keep orthogonal vectors', () => {
    check(
      tridiagonal(
        210,
        (i) => Math.abs(10 - (i % 21)),
        (i) => (i % 21 === 0 ? 1e-9 : 1),
      ),
      210,
    );
  });

  it('Hilbert matrices: the product of the values is the known determinant', () => {
    // det H_n = c_n⁴ / c_{2n}, c_n = Π_{i<n} i! (Hilbert 1894).
    const c = (n: number) => {
      let product = 1;
      for (let i = 1, factorial = 1; i < n; i++) {
        factorial *= i;
        product *= factorial;
      }
      return product;
    };
    for (const n of [2, 3, 4, 5]) {
      const h = Float64Array.from({ length: n * n }, (_, i) => 1 / (Math.floor(i / n) + (i % n) + 1));
      const determinant = check(h, n).reduce((x, y) => x * y, 1);
      expect(determinant / (c(n) ** 4 / c(2 * n))).toBeCloseTo(1, 9);
    }
  });

  it('complete graph: energy 2(n − 1), one value n − 1 and n − 1 times −1', () => {
    for (const n of [5, 64, 200]) {
      const a = Float64Array.from({ length: n * n }, (_, i) => (i % (n + 1) === 0 ? 0 : 1));
      const exact = new Float64Array(n).fill(-1);
      exact[n - 1] = n - 1;
      expect(distance(check(a, n), exact)).toBeLessThan(1e-11);
      expect(symmetricNuclearNorm(a, n)).toBeCloseTo(2 * (n - 1), 10);
    }
  });

  it('unit, zero and rank-one matrices', () => {
    for (const n of [7, 200]) {
      check(identity(n), n);
      check(new Float64Array(n * n), n);
      const x = randomNumbers(n, 3);
      const values = check(multiply(x, x, n, 1, n), n, 1e-12);
      expect(values[n - 1]).toBeCloseTo(
        x.reduce((sum, y) => sum + y * y, 0),
        11,
      );
    }
  });

  it('values of very different size', () => {
    const n = 170;
    const a = randomSymmetric(n, 4).map(
      (x, i) => x * 10 ** (-14 * (((i % n) + Math.floor(i / n)) / (2 * n))),
    );
    check(a, n);
    const huge = randomSymmetric(9, 5).map((x) => x * 1e200);
    expect(
      distance(
        symmetricEigenvalues(huge, 9).map((x) => x / 1e200),
        check(randomSymmetric(9, 5), 9),
      ),
    ).toBeLessThan(1e-13);
  });
});

describe('random matrices', () => {
  it('agree with ml-matrix', () => {
    for (const n of [4, 11, 33]) {
      const a = randomSymmetric(n, n);
      const other = new EigenvalueDecomposition(Matrix.from1DArray(n, n, a), { assumeSymmetric: true });
      const values = Float64Array.from(other.realEigenvalues).sort();
      expect(distance(check(a, n), values)).toBeLessThan(1e-12);
    }
  });

  it('read the lower triangle only and leave the input alone', () => {
    for (const n of [20, 200]) {
      const a = randomSymmetric(n, 6);
      const spoiled = a.map((x, i) => (i % n > Math.floor(i / n) ? Number.NaN : x));
      const before = spoiled.slice();
      expect(distance(symmetricEigen(spoiled, n).values, symmetricEigen(a, n).values)).toBe(0);
      expect(spoiled).toEqual(before);
    }
  });

  it('come out the same from the plain kernels', () => {
    const n = 230;
    const a = randomSymmetric(n, 7);
    const [compiled, plain] = [createArena(), plainArena()].map((arena) => {
      const { values } = finish(eigenInArena(arena, put(arena, a), n));
      return arena.f64.slice(values, values + n).sort();
    });
    expect(distance(compiled, plain)).toBeLessThan(1e-12);
  });
});

describe('batches', () => {
  it('equal one by one, also over the border of a copy', () => {
    for (const [n, count] of [
      [1, 3],
      [6, 5],
      [50, 203],
    ]) {
      const matrices = new Float64Array(count * n * n);
      for (let i = 0; i < count; i++) matrices.set(randomSymmetric(n, i + 1), i * n * n);
      const values = symmetricEigenvaluesBatch(matrices, count, n);
      for (const i of [0, count >> 1, count - 1]) {
        const one = symmetricEigen(matrices.slice(i * n * n, (i + 1) * n * n), n).values;
        expect(distance(values.slice(i * n, (i + 1) * n), one)).toBeLessThan(1e-12);
      }
    }
    expect(symmetricEigenvaluesBatch(new Float64Array(0), 0, 50).length).toBe(0);
  });

  it('refuse data that are too short', () => {
    expect(() => symmetricEigenvaluesBatch(new Float64Array(7), 2, 2)).toThrow(/do not fit/);
    expect(() => symmetricEigen(new Float64Array(8), 3)).toThrow(/needs 9 numbers, got 8/);
  });
});

describe('as a job', () => {
  it('gives the same numbers and reports rising progress', async () => {
    const n = 300;
    const a = randomSymmetric(n, 8);
    const seen: [number, number | null][] = [];
    let checkpoints = 0;
    const context: JobContext = {
      ...inlineContext(),
      report: (_stage, done, total) => seen.push([done, total]),
      checkpoint: async () => {
        checkpoints++;
      },
    };
    const eigen = await symmetricEigenAsync(a, n, context);
    const atOnce = symmetricEigen(a, n);
    expect(distance(eigen.values, atOnce.values)).toBe(0);
    expect(distance(eigen.vectors, atOnce.vectors)).toBe(0);
    expect(checkpoints).toBeGreaterThan(150);
    for (let i = 1; i < seen.length; i++) expect(seen[i][0]).toBeGreaterThanOrEqual(seen[i - 1][0]);
    expect(seen.at(-1)![0]).toBe(seen.at(-1)![1]);
    // The plan of the work is about right: the end is not reached early.
    expect(seen[seen.length >> 1][0]).toBeLessThan(seen.at(-1)![0]);
    expect(await symmetricEigenvaluesAsync(a, n, inlineContext())).toEqual(symmetricEigenvalues(a, n));
  });

  it('stops on request, and other work in between does no harm', async () => {
    const n = 200;
    const a = randomSymmetric(n, 9);
    let left = 40;
    const stopping: JobContext = {
      ...inlineContext(),
      checkpoint: async () => {
        if (left-- === 0) throw new Cancelled();
      },
    };
    await expect(symmetricEigenAsync(a, n, stopping)).rejects.toThrow(Cancelled);
    const busy: JobContext = {
      ...inlineContext(),
      checkpoint: async () => {
        symmetricEigen(randomSymmetric(12, 1), 12);
      },
    };
    const disturbed = await symmetricEigenAsync(a, n, busy);
    expect(distance(disturbed.vectors, symmetricEigen(a, n).vectors)).toBe(0);
  });
});

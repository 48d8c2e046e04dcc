import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { inlineContext } from '../../core/job';
import {
  antisymmetricNormsBatch,
  antisymmetricPairs,
  clusterBasis,
  denseRows,
  hermitianEigen,
  hermitianNuclearNorm,
  householderQr,
  pivotedCholesky,
  singularValues,
  symmetricEigen,
  symmetricEigenvalues,
  symmetricNuclearNorm,
} from '../../core/linalg';
import {
  distance,
  eigenResidual,
  hermitianResiduals,
  identity,
  naiveProduct,
  naiveTranspose,
  orthonormality,
} from '../unit/linalg/support';

const order = fc.integer({ min: 1, max: 14 });
/** Plain numbers, with exact zeros and repeats thrown in: those are what breaks eigensolvers. */
const element = fc.oneof(
  { weight: 4, arbitrary: fc.double({ min: -4, max: 4, noNaN: true }) },
  { weight: 2, arbitrary: fc.constantFrom(0, 1, -1, 2) },
);
const numbers = (count: number) =>
  fc.array(element, { minLength: count, maxLength: count }).map((x) => Float64Array.from(x));

const mirrored = (a: Float64Array, n: number, sign: number) =>
  a.map((x, i) => {
    const [p, q] = [Math.floor(i / n), i % n];
    return p > q ? x : p < q ? sign * a[q * n + p] : sign > 0 ? x : 0;
  });

const symmetric = order.chain((n) => numbers(n * n).map((a) => ({ n, a: mirrored(a, n, 1) })));
const antisymmetric = order.chain((n) => numbers(n * n).map((a) => ({ n, a: mirrored(a, n, -1) })));
const hermitian = order.chain((n) =>
  fc
    .tuple(numbers(n * n), numbers(n * n))
    .map(([re, im]) => ({ n, re: mirrored(re, n, 1), im: mirrored(im, n, -1) })),
);
const rectangular = fc
  .tuple(order, order)
  .chain(([rows, cols]) => numbers(rows * cols).map((a) => ({ rows, cols, a })));

const sum = (x: ArrayLike<number>, f: (y: number) => number) => Array.from(x).reduce((s, y) => s + f(y), 0);
const square = (x: number) => x * x;

describe('symmetric eigenvectors', () => {
  it('are orthonormal and diagonalise', () => {
    fc.assert(
      fc.property(symmetric, ({ n, a }) => {
        const { values, vectors } = symmetricEigen(a, n);
        expect(orthonormality(vectors, n, n)).toBeLessThan(1e-13);
        expect(eigenResidual(a, n, values, vectors)).toBeLessThan(1e-12);
      }),
    );
  });

  it('keep trace and Frobenius norm', () => {
    fc.assert(
      fc.property(symmetric, ({ n, a }) => {
        const values = symmetricEigenvalues(a, n);
        const trace = sum(
          a.filter((_, i) => i % (n + 1) === 0),
          (x) => x,
        );
        expect(sum(values, (x) => x)).toBeCloseTo(trace, 11);
        expect(sum(values, square)).toBeCloseTo(sum(a, square), 10);
      }),
    );
  });

  it('interlace with those of the leading submatrix (Cauchy)', () => {
    fc.assert(
      fc.property(symmetric, ({ n, a }) => {
        const values = symmetricEigenvalues(a, n);
        const part = a.filter((_, i) => i % n < n - 1 && i < n * (n - 1));
        const inner = symmetricEigenvalues(part, n - 1);
        for (let i = 0; i + 1 < n; i++) {
          expect(inner[i]).toBeGreaterThan(values[i] - 1e-12);
          expect(inner[i]).toBeLessThan(values[i + 1] + 1e-12);
        }
      }),
    );
  });

  it('do not see an orthogonal change of basis', () => {
    fc.assert(
      fc.property(
        symmetric.chain(({ n, a }) => numbers(n * n).map((b) => ({ n, a, b: mirrored(b, n, 1) }))),
        ({ n, a, b }) => {
          const q = symmetricEigen(b, n).vectors;
          const turned = naiveProduct(naiveProduct(q, a, n, n, n), naiveTranspose(q, n, n), n, n, n);
          expect(distance(symmetricEigenvalues(turned, n), symmetricEigenvalues(a, n))).toBeLessThan(1e-12);
        },
      ),
    );
  });
});

describe('Hermitian eigenvectors', () => {
  it('are orthonormal and diagonalise', () => {
    fc.assert(
      fc.property(hermitian, (h) => {
        const { residual, overlap } = hermitianResiduals(h, hermitianEigen(h));
        expect(residual).toBeLessThan(1e-12);
        expect(overlap).toBeLessThan(1e-13);
      }),
    );
  });
});

describe('nuclear norms', () => {
  it('are norms: homogeneous, and below the sum of the parts (triangle)', () => {
    fc.assert(
      fc.property(
        symmetric.chain(({ n, a }) => numbers(n * n).map((b) => ({ n, a, b: mirrored(b, n, 1) }))),
        ({ n, a, b }) => {
          const norm = (x: Float64Array) => symmetricNuclearNorm(x, n);
          expect(norm(a.map((x) => -3 * x))).toBeCloseTo(3 * norm(a), 10);
          expect(norm(a.map((x, i) => x + b[i]))).toBeLessThan(norm(a) + norm(b) + 1e-11);
        },
      ),
    );
  });

  it('of iA is twice the sum of the pair sizes', () => {
    fc.assert(
      fc.property(antisymmetric, ({ n, a }) => {
        const norm = hermitianNuclearNorm({ n, re: new Float64Array(n * n), im: a });
        expect(2 * sum(antisymmetricNormsBatch(a, 1, n), (x) => x)).toBeCloseTo(norm, 11);
      }),
    );
  });
});

describe('antisymmetric pairs', () => {
  it('rebuild the matrix from orthonormal vectors', () => {
    fc.assert(
      fc.property(antisymmetric, ({ n, a }) => {
        const { count, a: sizes, u, v } = antisymmetricPairs(a, n);
        const all = Float64Array.of(...u, ...v);
        expect(orthonormality(all, 2 * count, n)).toBeLessThan(1e-13);
        const scaled = u.map((x, i) => x * sizes[Math.floor(i / n)]);
        const half = naiveProduct(naiveTranspose(scaled, count, n), v, n, count, n);
        const back = half.map((x, i) => x - half[(i % n) * n + Math.floor(i / n)]);
        expect(distance(back, a)).toBeLessThan(1e-11);
      }),
    );
  });
});

describe('factorisations', () => {
  it('A = Σ s u vᵀ with Σ s² the squared Frobenius norm', async () => {
    await fc.assert(
      fc.asyncProperty(rectangular, async ({ rows, cols, a }) => {
        const { rank, s, u, v } = await singularValues(a, rows, cols, inlineContext());
        const scaled = u.map((x, i) => x * s[Math.floor(i / rows)]);
        const back = naiveProduct(naiveTranspose(scaled, rank, rows), v, rows, rank, cols);
        expect(distance(back, a)).toBeLessThan(1e-11);
        expect(sum(s, square)).toBeCloseTo(sum(a, square), 9);
        const [short, length] = rows <= cols ? [u, rows] : [v, cols];
        expect(orthonormality(short, rank, length)).toBeLessThan(1e-12);
      }),
    );
  });

  it('A = QR with orthonormal columns', async () => {
    await fc.assert(
      fc.asyncProperty(rectangular, async ({ rows: m, cols: n, a }) => {
        const [rows, cols] = [Math.max(m, n), Math.min(m, n)];
        const { q, r } = await householderQr(a, rows, cols, inlineContext());
        expect(distance(naiveProduct(q, r, rows, cols, cols), a)).toBeLessThan(1e-12);
        const gram = naiveProduct(naiveTranspose(q, rows, cols), q, cols, rows, cols);
        expect(distance(gram, identity(cols))).toBeLessThan(1e-13);
      }),
    );
  });

  it('pivoted Cholesky rebuilds BᵀB and its pivots fall', () => {
    fc.assert(
      fc.property(rectangular, ({ rows, cols: n, a }) => {
        const g = naiveProduct(naiveTranspose(a, rows, n), a, n, rows, n);
        const { rank, vectors, pivots } = pivotedCholesky(denseRows(g, n));
        const back = naiveProduct(naiveTranspose(vectors, rank, n), vectors, n, rank, n);
        expect(distance(back, g)).toBeLessThan(1e-11);
        const sizes = Array.from(pivots, (p, j) => vectors[j * n + p]);
        for (let j = 1; j < rank; j++) expect(sizes[j]).toBeLessThan(sizes[j - 1] * (1 + 1e-6));
      }),
    );
  });
});

describe('degenerate clusters', () => {
  const levels = fc.array(fc.integer({ min: 1, max: 5 }), { minLength: 1, maxLength: 4 });
  const problem = levels.chain((sizes) => {
    const n = sizes.reduce((x, y) => x + y, 0);
    return fc.tuple(numbers(n * n), numbers(n * n)).map(([a, b]) => ({ sizes, n, a, b }));
  });

  it('give the same vectors from any basis of each level', () => {
    fc.assert(
      fc.property(problem, ({ sizes, n, a, b }) => {
        const vectors = symmetricEigen(mirrored(a, n, 1), n).vectors;
        const values = Float64Array.from(sizes.flatMap((r, level) => new Array<number>(r).fill(level + 1)));
        // Another basis: rotate inside each level by the eigenvectors of a block of b.
        const other = vectors.slice();
        let from = 0;
        for (const r of sizes) {
          const block = mirrored(b.slice(from * n, from * n + r * r), r, 1);
          const some = vectors.slice(from * n, (from + r) * n);
          other.set(naiveProduct(symmetricEigen(block, r).vectors, some, r, r, n), from * n);
          from += r;
        }
        const [x, y] = [vectors, other].map((rows) => clusterBasis(values, rows, n).vectors);
        expect(orthonormality(x, n, n)).toBeLessThan(1e-12);
        // A pivot tie on the border of 1e-6 may go either way in the last digit; the projector never does.
        const projector = (rows: Float64Array, start: number, r: number) => {
          const some = rows.slice(start * n, (start + r) * n);
          return naiveProduct(naiveTranspose(some, r, n), some, n, r, n);
        };
        let start = 0;
        for (const r of sizes) {
          expect(distance(projector(x, start, r), projector(vectors, start, r))).toBeLessThan(1e-12);
          start += r;
        }
        expect(distance(x, y)).toBeLessThan(1e-9);
      }),
    );
  });
});

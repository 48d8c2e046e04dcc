import { describe, expect, it } from 'vitest';
import { inlineContext } from '../../../core/job';
import {
  clusterBasis,
  clusterTriples,
  hermitianEigen,
  type SingularValues,
  singularValues,
  symmetricEigen,
} from '../../../core/linalg';
import { distance, identity, naiveProduct, naiveTranspose, orthonormality, randomSymmetric } from './support';

/** Orthonormal rows, different for every seed. */
const orthonormalRows = (n: number, seed: number) => symmetricEigen(randomSymmetric(n, seed), n).vectors;

/** The rows from…to of `vectors` mixed by an orthogonal matrix: what another solver might have returned. */
function remixed(vectors: Float64Array, n: number, from: number, to: number, seed: number): Float64Array {
  const r = to - from;
  const out = vectors.slice();
  const some = vectors.slice(from * n, to * n);
  out.set(naiveProduct(orthonormalRows(r, seed), some, r, r, n), from * n);
  return out;
}

const weighted = (w: Float64Array, rows: Float64Array, n: number) =>
  naiveProduct(
    naiveTranspose(
      rows.map((x, i) => x * w[Math.floor(i / n)]),
      w.length,
      n,
    ),
    rows,
    n,
    w.length,
    n,
  );

describe('clusterBasis', () => {
  it('a worked example: the plane x + y + z = 0', () => {
    // P = 1 − (1,1,1)(1,1,1)ᵀ/3; pivots 0 and 1: (2,−1,−1)/√6 and (0,1,−1)/√2.
    const vectors = Float64Array.of(
      0,
      Math.SQRT1_2,
      -Math.SQRT1_2,
      Math.sqrt(2 / 3),
      -1 / Math.sqrt(6),
      -1 / Math.sqrt(6),
    );
    const { weights, vectors: c } = clusterBasis(Float64Array.of(2, 2), remixed(vectors, 3, 0, 2, 1), 3);
    expect(Array.from(weights)).toEqual([2, 2]);
    const s = Math.sqrt(6);
    expect(distance(c, [2 / s, -1 / s, -1 / s, 0, Math.SQRT1_2, -Math.SQRT1_2])).toBeLessThan(1e-15);
  });

  it('does not depend on the basis inside a cluster, nor on signs', () => {
    const n = 14;
    const values = Float64Array.of(-3, -1, -1, -1, -1 + 4e-9, 0, 0, 2, 2, 2, 2, 2, 7, 7);
    const vectors = orthonormalRows(n, 1);
    const first = clusterBasis(values, vectors, n);
    for (const seed of [2, 3, 4]) {
      let other: Float64Array = vectors.map((x, i) => (Math.floor(i / n) % 2 === seed % 2 ? -x : x));
      for (const [from, to] of [
        [1, 5],
        [5, 7],
        [7, 12],
        [12, 14],
      ]) {
        other = remixed(other, n, from, to, seed);
      }
      expect(distance(clusterBasis(values, other, n).vectors, first.vectors)).toBeLessThan(1e-13);
    }
    // Columns of a projector's Cholesky factor are orthonormal, and Σ w c cᵀ is the matrix.
    expect(orthonormality(first.vectors, n, n)).toBeLessThan(1e-13);
    expect(distance(weighted(first.weights, first.vectors, n), weighted(values, vectors, n))).toBeLessThan(
      1e-8,
    );
    expect(distance(first.weights.slice(1, 5), new Array(4).fill(-1 + 1e-9))).toBeLessThan(1e-15);
  });

  it('leaves separate values alone but for the sign', () => {
    const n = 6;
    const values = Float64Array.of(-2, -1, 0, 1, 1 + 1e-6, 3);
    const vectors = orthonormalRows(n, 5);
    const { weights, vectors: c } = clusterBasis(values, vectors, n);
    expect(weights).toEqual(values);
    for (let i = 0; i < n; i++) {
      const row = c.slice(i * n, (i + 1) * n);
      const old = vectors.slice(i * n, (i + 1) * n);
      const pivot = row.reduce(
        (best, x, k) => (Math.abs(x) > Math.abs(row[best]) * (1 + 1e-9) ? k : best),
        0,
      );
      expect(row[pivot]).toBeGreaterThan(0);
      expect(
        distance(
          row,
          old.map((x) => x * Math.sign(old[pivot])),
        ),
      ).toBeLessThan(1e-14);
    }
  });

  it('measures closeness relative to the largest size, in either order, as asked', () => {
    const n = 4;
    const ordered = (values: number[], relative?: number) =>
      Array.from(clusterBasis(Float64Array.from(values), identity(n), n, relative).weights);
    expect(ordered([0, 1e-7, 1, 100])).toEqual([5e-8, 5e-8, 1, 100]);
    expect(ordered([-100, 1, 1e-7, 0])).toEqual([-100, 1, 1e-7, 0].map((x, i) => (i > 1 ? 5e-8 : x)));
    expect(ordered([0, 1e-7, 1, 100], 1e-10)).toEqual([0, 1e-7, 1, 100]);
  });

  it('refuses rows that span less than they should', () => {
    const twice = Float64Array.of(1, 0, 1, 0);
    expect(() => clusterBasis(Float64Array.of(1, 1), twice, 2)).toThrow(/not orthonormal/);
  });
});

describe('clusterTriples', () => {
  const product = ({ rows, cols, rank, s, u, v }: SingularValues) =>
    naiveProduct(
      naiveTranspose(
        u.map((x, i) => x * s[Math.floor(i / rows)]),
        rank,
        rows,
      ),
      v,
      rows,
      rank,
      cols,
    );

  it('keeps Σ s u vᵀ and does not depend on the basis inside a cluster', () => {
    const [rows, cols] = [9, 12];
    const s = Float64Array.of(5, 5, 5, 2, 1, 1, 0.5);
    const rank = s.length;
    const u = orthonormalRows(rows, 6).slice(0, rank * rows);
    const v = orthonormalRows(cols, 7).slice(0, rank * cols);
    const plain: SingularValues = { rows, cols, rank, s, u, v };
    const first = clusterTriples(plain);
    expect(distance(product(first), product(plain))).toBeLessThan(1e-14);
    expect(orthonormality(first.u, rank, rows)).toBeLessThan(1e-13);
    expect(orthonormality(first.v, rank, cols)).toBeLessThan(1e-13);
    for (const seed of [8, 9]) {
      const mix = (x: Float64Array, n: number) => remixed(remixed(x, n, 0, 3, seed), n, 4, 6, seed + 50);
      const flip = (x: Float64Array, n: number) => x.map((y, i) => (Math.floor(i / n) === 3 ? -y : y));
      const other = clusterTriples({ ...plain, u: flip(mix(u, rows), rows), v: flip(mix(v, cols), cols) });
      expect(distance(other.u, first.u)).toBeLessThan(1e-13);
      expect(distance(other.v, first.v)).toBeLessThan(1e-13);
    }
  });

  it('makes the result of the solver unique', async () => {
    // Σ over an orthogonal matrix: every singular value is 1, the solver may return anything.
    const n = 8;
    const q = orthonormalRows(n, 10);
    const a = clusterTriples(await singularValues(q, n, n, inlineContext()));
    expect(distance(a.s, new Array(n).fill(1))).toBeLessThan(1e-14);
    expect(distance(a.u, identity(n))).toBeLessThan(1e-13);
    expect(distance(a.v, q)).toBeLessThan(1e-13);
  });
});

it('a solver that returns another basis of a level gives the same clustered basis', () => {
  // The real symmetric matrix through the complex solver, whose Householder phases differ.
  const n = 20;
  const vectors = orthonormalRows(n, 11);
  const values = Float64Array.from({ length: n }, (_, i) => Math.floor(i / 4));
  const a = weighted(values, vectors, n);
  const b = a.map((x, i) => (x + a[(i % n) * n + Math.floor(i / n)]) / 2);
  const direct = symmetricEigen(b, n);
  const flipped = symmetricEigen(Float64Array.from(b).reverse(), n);
  const back = flipped.vectors.map((_, i) => flipped.vectors[Math.floor(i / n) * n + (n - 1 - (i % n))]);
  const [x, y] = [direct.vectors, back].map((rows) => clusterBasis(direct.values, rows, n));
  expect(distance(direct.vectors, back)).toBeGreaterThan(0.1);
  expect(distance(x.vectors, y.vectors)).toBeLessThan(1e-12);
  expect(
    distance(hermitianEigen({ n, re: b, im: new Float64Array(n * n) }).values, direct.values),
  ).toBeLessThan(1e-13);
});

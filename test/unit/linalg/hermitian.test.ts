import { describe, expect, it } from 'vitest';
import { inlineContext } from '../../../core/job';
import {
  type ComplexMatrix,
  hermitianEigen,
  hermitianEigenAsync,
  hermitianEigenvalues,
  hermitianEigenvaluesAsync,
  hermitianEigenvaluesBatch,
  hermitianNuclearNorm,
  symmetricEigenvalues,
} from '../../../core/linalg';
import { distance, hermitianResiduals, randomHermitian, randomNumbers } from './support';

function check(h: ComplexMatrix, tolerance = 1e-13): Float64Array {
  const x = hermitianEigen(h);
  const scale = Math.max(1, Math.abs(x.values[0] ?? 0), Math.abs(x.values.at(-1) ?? 0));
  const { residual, overlap } = hermitianResiduals(h, x);
  expect(residual).toBeLessThan(tolerance * scale);
  expect(overlap).toBeLessThan(tolerance);
  expect(distance(hermitianEigenvalues(h), x.values)).toBeLessThan(tolerance * scale);
  return x.values;
}

/** S_y of a spin j = (n − 1)/2 in the basis m = j … −j: purely imaginary, values −j … j. */
function spinY(n: number): ComplexMatrix {
  const h = { n, re: new Float64Array(n * n), im: new Float64Array(n * n) };
  const j = (n - 1) / 2;
  for (let k = 0; k + 1 < n; k++) {
    const m = j - k - 1;
    const step = Math.sqrt(j * (j + 1) - m * (m + 1)) / 2;
    h.im[k * n + k + 1] = -step;
    h.im[(k + 1) * n + k] = step;
  }
  return h;
}

/** [[A, B], [−B*, A*]], A Hermitian, B antisymmetric: commutes with the time reversal iσ_y K, so levels come twice. */
function kramers(m: number, seed: number): ComplexMatrix {
  const a = randomHermitian(m, seed);
  const [br, bi] = [randomNumbers(m * m, seed + 1), randomNumbers(m * m, seed + 2)];
  const n = 2 * m;
  const h = { n, re: new Float64Array(n * n), im: new Float64Array(n * n) };
  const set = (p: number, q: number, re: number, im: number) => {
    h.re[p * n + q] = re;
    h.im[p * n + q] = im;
  };
  for (let p = 0; p < m; p++) {
    for (let q = 0; q < m; q++) {
      set(p, q, a.re[p * m + q], a.im[p * m + q]);
      set(m + p, m + q, a.re[p * m + q], -a.im[p * m + q]);
      const re = br[p * m + q] - br[q * m + p];
      const im = bi[p * m + q] - bi[q * m + p];
      set(p, m + q, re, im);
      set(m + q, p, re, -im);
    }
  }
  return h;
}

/** The real symmetric matrix [[Re, −Im], [Im, Re]], whose spectrum is the Hermitian one twice. */
function realForm({ n, re, im }: ComplexMatrix): Float64Array {
  const a = new Float64Array(4 * n * n);
  for (let p = 0; p < n; p++) {
    for (let q = 0; q < n; q++) {
      a[p * 2 * n + q] = a[(n + p) * 2 * n + n + q] = re[p * n + q];
      a[(n + p) * 2 * n + q] = im[p * n + q];
      a[p * 2 * n + n + q] = -im[p * n + q];
    }
  }
  return a;
}

describe('known spectra', () => {
  it('spin matrices: m = −j … j', () => {
    for (const n of [1, 2, 3, 8, 51, 130]) {
      const exact = Float64Array.from({ length: n }, (_, k) => k - (n - 1) / 2);
      expect(distance(check(spinY(n)), exact)).toBeLessThan(1e-13 * n);
    }
    expect(hermitianNuclearNorm(spinY(5))).toBeCloseTo(6, 12);
  });

  it('[[1, 2i], [−2i, 3]]: 2 ± √5', () => {
    const h = { n: 2, re: Float64Array.of(1, 0, 0, 3), im: Float64Array.of(0, 2, -2, 0) };
    expect(distance(check(h), [2 - Math.sqrt(5), 2 + Math.sqrt(5)])).toBeLessThan(1e-15);
    expect(hermitianNuclearNorm(h)).toBeCloseTo(2 * Math.sqrt(5), 14);
  });

  it('Kramers pairs: equal values, orthonormal vectors', () => {
    for (const m of [1, 2, 10, 75]) {
      const values = check(kramers(m, 20 + m));
      for (let i = 0; i < m; i++) expect(values[2 * i + 1] - values[2 * i]).toBeLessThan(1e-12);
    }
  });

  it('a projector: only zeros and ones', () => {
    const n = 40;
    const x = hermitianEigen(randomHermitian(n, 3));
    const p = { n, re: new Float64Array(n * n), im: new Float64Array(n * n) };
    for (let v = 0; v < 13; v++) {
      for (let i = 0; i < n * n; i++) {
        const [r, c] = [v * n + Math.floor(i / n), v * n + (i % n)];
        p.re[i] += x.re[r] * x.re[c] + x.im[r] * x.im[c];
        p.im[i] += x.im[r] * x.re[c] - x.re[r] * x.im[c];
      }
    }
    const exact = Float64Array.from({ length: n }, (_, i) => (i < n - 13 ? 0 : 1));
    expect(distance(check(p), exact)).toBeLessThan(1e-13);
  });
});

describe('random matrices', () => {
  for (const n of [1, 2, 3, 7, 50, 119, 121, 150, 217]) {
    it(`order ${n}: twice the spectrum of the real form`, () => {
      const h = randomHermitian(n, n);
      const values = check(h);
      const twice = symmetricEigenvalues(realForm(h), 2 * n);
      expect(
        distance(
          twice,
          Float64Array.from({ length: 2 * n }, (_, i) => values[i >> 1]),
        ),
      ).toBeLessThan(1e-12);
    });
  }

  it('read the lower triangle only and take the diagonal as real', () => {
    for (const n of [9, 150]) {
      const h = randomHermitian(n, 4);
      const spoil = (plane: Float64Array) =>
        plane.map((x, i) => (i % n > Math.floor(i / n) ? Number.NaN : x));
      const im = spoil(h.im);
      for (let i = 0; i < n; i++) im[i * n + i] = 5;
      const spoiled = hermitianEigen({ n, re: spoil(h.re), im });
      expect(distance(spoiled.values, hermitianEigen(h).values)).toBe(0);
    }
  });

  it('are real symmetric ones where Im = 0', () => {
    const n = 40;
    const { re } = randomHermitian(n, 5);
    const h = { n, re, im: new Float64Array(n * n) };
    expect(distance(hermitianEigenvalues(h), symmetricEigenvalues(re, n))).toBeLessThan(1e-13);
  });
});

it('batches equal one by one', () => {
  const [n, count] = [50, 104];
  const all = Array.from({ length: count }, (_, i) => randomHermitian(n, i + 1));
  const join = (planes: Float64Array[]) => Float64Array.from(planes.flatMap((plane) => Array.from(plane)));
  const values = hermitianEigenvaluesBatch(join(all.map((h) => h.re)), join(all.map((h) => h.im)), count, n);
  for (const i of [0, 99, 100, 103]) {
    expect(distance(values.slice(i * n, (i + 1) * n), hermitianEigen(all[i]).values)).toBeLessThan(1e-12);
  }
});

it('as a job it gives the same numbers', async () => {
  const h = randomHermitian(140, 6);
  expect(await hermitianEigenAsync(h, inlineContext())).toEqual(hermitianEigen(h));
  expect(await hermitianEigenvaluesAsync(h, inlineContext())).toEqual(hermitianEigenvalues(h));
});

it('refuses planes that are too short', () => {
  expect(() => hermitianEigen({ n: 2, re: new Float64Array(4), im: new Float64Array(3) })).toThrow(
    /got 4 and 3/,
  );
});

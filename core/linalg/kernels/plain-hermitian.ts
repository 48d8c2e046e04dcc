import type { Kernels } from './kernels';
import { plainTriangle, TINY } from './plain-triangle';

type HermitianKernels = Pick<Kernels, 'hermitianTimes' | 'reduceHermitian' | 'hermitianValuesOfMany'>;

/** Complex Hermitian reductions on two planes. */
export function plainHermitian(memory: () => Float64Array): HermitianKernels {
  const { qlValues } = plainTriangle(memory);
  const kernels: HermitianKernels = {
    hermitianTimes(ar, ai, ld, n, xr, xi, yr, yi) {
      const m = memory();
      m.fill(0, yr, yr + n);
      m.fill(0, yi, yi + n);
      for (let j = 0; j < n; j++) {
        const r = ar + j * ld;
        const q = ai + j * ld;
        const xjr = m[xr + j];
        const xji = m[xi + j];
        let sr = m[r + j] * xjr;
        let si = m[r + j] * xji;
        for (let k = 0; k < j; k++) {
          const a = m[r + k];
          const b = m[q + k];
          sr += a * m[xr + k] - b * m[xi + k];
          si += a * m[xi + k] + b * m[xr + k];
          m[yr + k] += a * xjr + b * xji;
          m[yi + k] += a * xji - b * xjr;
        }
        m[yr + j] += sr;
        m[yi + j] += si;
      }
    },

    reduceHermitian(ar, ai, ld, n, d, tr, ti, h, w) {
      const m = memory();
      for (let i = n - 1; i > 0; i--) {
        const u = ar + i * ld;
        const v = ai + i * ld;
        // The column above the diagonal is the conjugate of the row.
        for (let k = 0; k < i; k++) m[v + k] = -m[v + k];
        const { re, im, norm } = complexReflectorInPlace(m, u, v, i);
        m[tr + i] = re;
        m[ti + i] = -im;
        m[h + i] = norm;
        if (norm === 0) continue;
        kernels.hermitianTimes(ar, ai, ld, i, u, v, w, w + n);
        let overlap = 0;
        for (let k = 0; k < i; k++) overlap += m[u + k] * m[w + k] + m[v + k] * m[w + n + k];
        const shift = overlap / (norm + norm);
        for (let k = 0; k < i; k++) {
          m[w + k] = (m[w + k] - shift * m[u + k]) / norm;
          m[w + n + k] = (m[w + n + k] - shift * m[v + k]) / norm;
        }
        rankTwo(m, ar, ai, ld, i, u, v, w, w + n);
      }
      for (let i = 0; i < n; i++) m[d + i] = m[ar + i * ld + i];
    },

    hermitianValuesOfMany(ar, ai, ld, n, count, values, room) {
      const m = memory();
      let failed = 0;
      for (let i = 0; i < count; i++) {
        const d = values + i * n;
        const from = i * ld * n;
        kernels.reduceHermitian(ar + from, ai + from, ld, n, d, room, room + n, room + 2 * n, room + 3 * n);
        for (let k = 1; k < n; k++) m[room + k - 1] = Math.hypot(m[room + k], m[room + n + k]);
        failed += qlValues(d, room, n);
      }
      return failed;
    },
  };
  return kernels;
}

/** As the real reflector: (1 − u u†/norm) x = (re + i·im)·e_{i−1}. */
export function complexReflectorInPlace(m: Float64Array, u: number, v: number, i: number) {
  let scale = 0;
  for (let k = 0; k < i - 1; k++) scale += Math.abs(m[u + k]) + Math.abs(m[v + k]);
  const p = u + i - 1;
  const q = v + i - 1;
  if (scale < TINY) return { re: m[p], im: m[q], norm: 0 };
  scale += Math.abs(m[p]) + Math.abs(m[q]);
  let sum = 0;
  for (let k = 0; k < i; k++) {
    m[u + k] /= scale;
    m[v + k] /= scale;
    sum += m[u + k] * m[u + k] + m[v + k] * m[v + k];
  }
  const root = Math.sqrt(sum);
  const modulus = Math.hypot(m[p], m[q]);
  // A phase from numbers that all but underflow would not have modulus 1; none is needed then.
  const none = modulus < 1e-150;
  const pr = none ? 1 : m[p] / modulus;
  const pi = none ? 0 : m[q] / modulus;
  m[p] += root * pr;
  m[q] += root * pi;
  return { re: -scale * root * pr, im: -scale * root * pi, norm: sum + root * modulus };
}

/** A_jk −= x_j y_k* + y_j x_k* for k ≤ j < n. */
function rankTwo(
  m: Float64Array,
  ar: number,
  ai: number,
  ld: number,
  n: number,
  xr: number,
  xi: number,
  yr: number,
  yi: number,
): void {
  for (let j = 0; j < n; j++) {
    const r = ar + j * ld;
    const q = ai + j * ld;
    const xjr = m[xr + j];
    const xji = m[xi + j];
    const yjr = m[yr + j];
    const yji = m[yi + j];
    for (let k = 0; k <= j; k++) {
      m[r + k] -= xjr * m[yr + k] + xji * m[yi + k] + yjr * m[xr + k] + yji * m[xi + k];
      m[q + k] -= xji * m[yr + k] - xjr * m[yi + k] + yji * m[xr + k] - yjr * m[xi + k];
    }
  }
}

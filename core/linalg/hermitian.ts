import { ascending, qlInPlace } from './tridiagonal';
import type { ComplexMatrix, HermitianEigen } from './types';

/**
 * Eigenvalues (ascending) and eigenvectors (rows) of a complex Hermitian matrix. Only the lower triangle is
 * read, and the imaginary part of the diagonal is taken as zero. Complex Householder reduction to a real
 * tridiagonal matrix, then implicit QL, so degenerate (Kramers) levels get orthonormal vectors like any other.
 */
export function hermitianEigen(matrix: ComplexMatrix): HermitianEigen {
  const { n } = matrix;
  const t = reduce(matrix);
  const zr = new Float64Array(n * n);
  const zi = new Float64Array(n * n);
  for (let i = 0; i < n; i++) zr[i * n + i] = 1;
  qlInPlace(t.d, t.e, n, [zr], n);
  // Rows of z are vectors in the tridiagonal basis: x = H_1 H_2 … D z with unit phases D.
  for (let r = 0; r < n; r++) {
    const row = r * n;
    for (let k = 0; k < n; k++) {
      zi[row + k] = zr[row + k] * t.phaseIm[k];
      zr[row + k] *= t.phaseRe[k];
    }
    for (let j = 1; j < n; j++) {
      if (t.h[j] === 0) continue;
      const rj = j * n;
      let sr = 0;
      let si = 0;
      for (let k = 0; k < j; k++) {
        const ur = t.re[rj + k];
        const ui = t.im[rj + k];
        sr += ur * zr[row + k] + ui * zi[row + k];
        si += ur * zi[row + k] - ui * zr[row + k];
      }
      sr /= t.h[j];
      si /= t.h[j];
      for (let k = 0; k < j; k++) {
        const ur = t.re[rj + k];
        const ui = t.im[rj + k];
        zr[row + k] -= sr * ur - si * ui;
        zi[row + k] -= sr * ui + si * ur;
      }
    }
  }
  const order = ascending(t.d);
  const values = new Float64Array(n);
  const re = new Float64Array(n * n);
  const im = new Float64Array(n * n);
  order.forEach((from, to) => {
    values[to] = t.d[from];
    re.set(zr.subarray(from * n, from * n + n), to * n);
    im.set(zi.subarray(from * n, from * n + n), to * n);
  });
  return { n, values, re, im };
}

/** Eigenvalues only, ascending. */
export function hermitianEigenvalues(matrix: ComplexMatrix): Float64Array {
  const t = reduce(matrix);
  qlInPlace(t.d, t.e, matrix.n, [], 0);
  return t.d.sort();
}

/** Eigenvalues (ascending, n per matrix) of `count` Hermitian n×n matrices stored one after another. */
export function hermitianEigenvaluesBatch(
  re: Float64Array,
  im: Float64Array,
  count: number,
  n: number,
): Float64Array {
  const values = new Float64Array(count * n);
  for (let i = 0; i < count; i++) {
    const from = i * n * n;
    const matrix = { n, re: re.subarray(from, from + n * n), im: im.subarray(from, from + n * n) };
    values.set(hermitianEigenvalues(matrix), i * n);
  }
  return values;
}

function reduce(matrix: ComplexMatrix) {
  const { n } = matrix;
  const re = Float64Array.from(matrix.re.subarray(0, n * n));
  const im = Float64Array.from(matrix.im.subarray(0, n * n));
  const d = new Float64Array(n);
  const e = new Float64Array(n);
  const h = new Float64Array(n);
  const wr = new Float64Array(n);
  const wi = new Float64Array(n);
  // Off-diagonal elements T_{i,i-1} before the phases are removed.
  const tr = new Float64Array(n);
  const ti = new Float64Array(n);
  for (let i = n - 1; i > 0; i--) {
    const ri = i * n;
    // The column above the diagonal: x_k = A_ki = conj(A_ik). The reflector maps x to a multiple of e_{i-1}.
    for (let k = 0; k < i; k++) im[ri + k] = -im[ri + k];
    let scale = 0;
    for (let k = 0; k < i - 1; k++) scale += Math.abs(re[ri + k]) + Math.abs(im[ri + k]);
    const last = ri + i - 1;
    if (scale === 0) {
      tr[i] = re[last];
      ti[i] = -im[last];
      continue;
    }
    scale += Math.abs(re[last]) + Math.abs(im[last]);
    let norm = 0;
    for (let k = 0; k < i; k++) {
      re[ri + k] /= scale;
      im[ri + k] /= scale;
      norm += re[ri + k] * re[ri + k] + im[ri + k] * im[ri + k];
    }
    const root = Math.sqrt(norm);
    const size = Math.hypot(re[last], im[last]);
    const pr = size === 0 ? 1 : re[last] / size;
    const pi = size === 0 ? 0 : im[last] / size;
    // x -> -phase·‖x‖ e_{i-1}, u = x + phase·‖x‖ e_{i-1}, H = 1 - u u†/h, h = ‖u‖²/2.
    tr[i] = -scale * root * pr;
    ti[i] = scale * root * pi;
    re[last] += root * pr;
    im[last] += root * pi;
    const hi = norm + root * size;
    h[i] = hi;
    wr.fill(0, 0, i);
    wi.fill(0, 0, i);
    for (let j = 0; j < i; j++) {
      const rj = j * n;
      const ujr = re[ri + j];
      const uji = im[ri + j];
      let sr = re[rj + j] * ujr;
      let si = re[rj + j] * uji;
      for (let k = 0; k < j; k++) {
        const xr = re[rj + k];
        const xi = im[rj + k];
        const ukr = re[ri + k];
        const uki = im[ri + k];
        sr += xr * ukr - xi * uki;
        si += xr * uki + xi * ukr;
        wr[k] += xr * ujr + xi * uji;
        wi[k] += xr * uji - xi * ujr;
      }
      wr[j] += sr;
      wi[j] += si;
    }
    let uw = 0;
    for (let j = 0; j < i; j++) {
      wr[j] /= hi;
      wi[j] /= hi;
      uw += re[ri + j] * wr[j] + im[ri + j] * wi[j];
    }
    const half = uw / (hi + hi);
    for (let j = 0; j < i; j++) {
      wr[j] -= half * re[ri + j];
      wi[j] -= half * im[ri + j];
    }
    for (let j = 0; j < i; j++) {
      const rj = j * n;
      const ujr = re[ri + j];
      const uji = im[ri + j];
      const wjr = wr[j];
      const wji = wi[j];
      for (let k = 0; k <= j; k++) {
        const ukr = re[ri + k];
        const uki = im[ri + k];
        re[rj + k] -= ujr * wr[k] + uji * wi[k] + wjr * ukr + wji * uki;
        im[rj + k] -= uji * wr[k] - ujr * wi[k] + wji * ukr - wjr * uki;
      }
    }
  }
  for (let i = 0; i < n; i++) d[i] = re[i * n + i];
  // T = D |T| D†: D_0 = 1, D_i = D_{i-1}·phase(T_{i,i-1}).
  const phaseRe = new Float64Array(n).fill(1);
  const phaseIm = new Float64Array(n);
  for (let i = 1; i < n; i++) {
    const size = Math.hypot(tr[i], ti[i]);
    e[i - 1] = size;
    const pr = size === 0 ? 1 : tr[i] / size;
    const pi = size === 0 ? 0 : ti[i] / size;
    phaseRe[i] = phaseRe[i - 1] * pr - phaseIm[i - 1] * pi;
    phaseIm[i] = phaseRe[i - 1] * pi + phaseIm[i - 1] * pr;
  }
  return { re, im, d, e, h, phaseRe, phaseIm };
}

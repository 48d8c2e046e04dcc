import type { JobContext } from '../job';
import { ascending, qlInPlace } from './tridiagonal';
import type { SymmetricEigen } from './types';

/**
 * Eigenvalues (ascending) and eigenvectors (rows) of a real symmetric n×n matrix. Only the lower triangle is
 * read. Householder reduction to tridiagonal form, then implicit QL.
 */
export function symmetricEigen(a: Float64Array, n: number): SymmetricEigen {
  const work = Float64Array.from(a.subarray(0, n * n));
  const { d, e, h } = tridiagonaliseInPlace(work, n);
  const z = new Float64Array(n * n);
  if (n > 0) z[0] = 1;
  for (let i = 1; i < n; i++) {
    const ri = i * n;
    if (h[i] !== 0) {
      for (let r = 0; r < i; r++) {
        const rr = r * n;
        let s = 0;
        for (let k = 0; k < i; k++) s += z[rr + k] * work[ri + k];
        s /= h[i];
        for (let k = 0; k < i; k++) z[rr + k] -= s * work[ri + k];
      }
    }
    z[ri + i] = 1;
  }
  qlInPlace(d, e, n, [z], n);
  const order = ascending(d);
  const values = new Float64Array(n);
  const vectors = new Float64Array(n * n);
  order.forEach((from, to) => {
    values[to] = d[from];
    vectors.set(z.subarray(from * n, from * n + n), to * n);
  });
  return { n, values, vectors };
}

/** Eigenvalues only, ascending. */
export function symmetricEigenvalues(a: Float64Array, n: number): Float64Array {
  const { d, e } = tridiagonaliseInPlace(Float64Array.from(a.subarray(0, n * n)), n);
  qlInPlace(d, e, n, [], 0);
  return d.sort();
}

/** Eigenvalues (ascending, n per matrix) of `count` symmetric n×n matrices stored one after another. */
export function symmetricEigenvaluesBatch(matrices: Float64Array, count: number, n: number): Float64Array {
  const values = new Float64Array(count * n);
  for (let i = 0; i < count; i++) {
    values.set(symmetricEigenvalues(matrices.subarray(i * n * n, (i + 1) * n * n), n), i * n);
  }
  return values;
}

/** {@link symmetricEigen} for large n: reports progress and can be stopped. */
export async function symmetricEigenAsync(
  a: Float64Array,
  n: number,
  context: JobContext,
): Promise<SymmetricEigen> {
  await context.checkpoint();
  return symmetricEigen(a, n);
}

function tridiagonaliseInPlace(a: Float64Array, n: number) {
  const d = new Float64Array(n);
  const e = new Float64Array(n);
  const h = new Float64Array(n);
  const w = new Float64Array(n);
  for (let i = n - 1; i > 0; i--) {
    const ri = i * n;
    let scale = 0;
    for (let k = 0; k < i - 1; k++) scale += Math.abs(a[ri + k]);
    if (scale === 0) {
      e[i - 1] = a[ri + i - 1];
      continue;
    }
    scale += Math.abs(a[ri + i - 1]);
    let norm = 0;
    for (let k = 0; k < i; k++) {
      a[ri + k] /= scale;
      norm += a[ri + k] * a[ri + k];
    }
    const f = a[ri + i - 1];
    const g = f >= 0 ? -Math.sqrt(norm) : Math.sqrt(norm);
    e[i - 1] = scale * g;
    norm -= f * g;
    a[ri + i - 1] = f - g;
    w.fill(0, 0, i);
    for (let j = 0; j < i; j++) {
      const rj = j * n;
      const uj = a[ri + j];
      let s = a[rj + j] * uj;
      for (let k = 0; k < j; k++) {
        const x = a[rj + k];
        s += x * a[ri + k];
        w[k] += x * uj;
      }
      w[j] += s;
    }
    let uw = 0;
    for (let j = 0; j < i; j++) {
      w[j] /= norm;
      uw += w[j] * a[ri + j];
    }
    const half = uw / (norm + norm);
    for (let j = 0; j < i; j++) w[j] -= half * a[ri + j];
    for (let j = 0; j < i; j++) {
      const rj = j * n;
      const uj = a[ri + j];
      const wj = w[j];
      for (let k = 0; k <= j; k++) a[rj + k] -= uj * w[k] + wj * a[ri + k];
    }
    h[i] = norm;
  }
  for (let i = 0; i < n; i++) d[i] = a[i * n + i];
  return { d, e, h };
}

import { ascending, qlInPlace } from './tridiagonal';
import type { AntisymmetricPairs } from './types';

export interface PairOptions {
  /** Pairs with a_j ≤ tolerance · max a are dropped as zero modes. @defaultValue 1e-12 */
  readonly tolerance?: number;
}

/**
 * Real canonical form A = Σ_j a_j (u_j v_jᵀ − v_j u_jᵀ) of a real antisymmetric n×n matrix. The strict lower
 * triangle is read.
 *
 * @remarks
 * Householder reflections make A antisymmetric tridiagonal; sorting even before odd positions turns that into
 * [[0, B], [−Bᵀ, 0]] with B bidiagonal. The singular triples of B are the pairs. A is never squared, so a small a_j is as
 * accurate as a large one relative to ‖A‖, and all u, v are orthonormal also for equal or tiny a_j.
 */
export function antisymmetricPairs(
  a: Float64Array,
  n: number,
  options: PairOptions = {},
): AntisymmetricPairs {
  const tolerance = options.tolerance ?? 1e-12;
  const { work, t, h } = reduce(a, n);
  const half = n >> 1;
  const rest = n - half;
  // Rows j of `left`: column j of B over the even positions; B = [T_{2i,2j+1}].
  const left = new Float64Array(half * rest);
  for (let j = 0; j < half; j++) {
    left[j * rest + j] = -t[2 * j + 1];
    if (2 * j + 2 < n) left[j * rest + j + 1] = t[2 * j + 2];
  }
  const right = new Float64Array(half * half);
  for (let j = 0; j < half; j++) right[j * half + j] = 1;
  jacobiInPlace(left, right, half, rest);
  const size = new Float64Array(half);
  for (let j = 0; j < half; j++) {
    let s = 0;
    for (let k = 0; k < rest; k++) s += left[j * rest + k] ** 2;
    size[j] = Math.sqrt(s);
  }
  const order = ascending(size).reverse();
  const max = half > 0 ? size[order[0]] : 0;
  const kept = order.filter((j) => size[j] > tolerance * max);
  const count = kept.length;
  const u = new Float64Array(count * n);
  const v = new Float64Array(count * n);
  const norms = new Float64Array(count);
  kept.forEach((j, to) => {
    norms[to] = size[j];
    for (let k = 0; k < rest; k++) u[to * n + 2 * k] = left[j * rest + k] / size[j];
    for (let k = 0; k < half; k++) v[to * n + 2 * k + 1] = right[j * half + k];
  });
  for (const rows of [u, v]) {
    for (let r = 0; r < count; r++) {
      for (let i = 1; i < n; i++) {
        if (h[i] === 0) continue;
        let s = 0;
        for (let k = 0; k < i; k++) s += rows[r * n + k] * work[i * n + k];
        s /= h[i];
        for (let k = 0; k < i; k++) rows[r * n + k] -= s * work[i * n + k];
      }
    }
  }
  return { n, count, a: norms, u, v };
}

/** The a_j of `count` antisymmetric matrices: ⌊n/2⌋ per matrix, descending, zeros included. */
export function antisymmetricNormsBatch(matrices: Float64Array, count: number, n: number): Float64Array {
  const half = n >> 1;
  const norms = new Float64Array(count * half);
  for (let i = 0; i < count; i++) {
    // iA is Hermitian; in the tridiagonal basis it is the real symmetric matrix with zero diagonal and |t| beside it.
    const { t } = reduce(matrices.subarray(i * n * n, (i + 1) * n * n), n);
    const d = new Float64Array(n);
    const e = new Float64Array(n);
    for (let k = 1; k < n; k++) e[k - 1] = Math.abs(t[k]);
    qlInPlace(d, e, n, [], 0);
    d.sort();
    for (let j = 0; j < half; j++) norms[i * half + j] = Math.max(0, d[n - 1 - j]);
  }
  return norms;
}

/** t[i] = T_{i,i−1}; the reflector of step i stays in row i of `work`, h[i] = ‖u‖²/2 or 0. */
function reduce(a: Float64Array, n: number) {
  const work = Float64Array.from(a.subarray(0, n * n));
  const t = new Float64Array(n);
  const h = new Float64Array(n);
  const w = new Float64Array(n);
  for (let i = n - 1; i > 0; i--) {
    const ri = i * n;
    let scale = 0;
    for (let k = 0; k < i - 1; k++) scale += Math.abs(work[ri + k]);
    if (scale === 0) {
      t[i] = work[ri + i - 1];
      continue;
    }
    scale += Math.abs(work[ri + i - 1]);
    let norm = 0;
    for (let k = 0; k < i; k++) {
      work[ri + k] /= scale;
      norm += work[ri + k] * work[ri + k];
    }
    const f = work[ri + i - 1];
    const g = f >= 0 ? -Math.sqrt(norm) : Math.sqrt(norm);
    t[i] = scale * g;
    norm -= f * g;
    work[ri + i - 1] = f - g;
    h[i] = norm;
    // w = A u / h; u·w = 0, so A ← A − w uᵀ + u wᵀ needs no second term.
    w.fill(0, 0, i);
    for (let j = 0; j < i; j++) {
      const rj = j * n;
      const uj = work[ri + j];
      let s = 0;
      for (let k = 0; k < j; k++) {
        const x = work[rj + k];
        s += x * work[ri + k];
        w[k] -= x * uj;
      }
      w[j] += s;
    }
    for (let j = 0; j < i; j++) w[j] /= norm;
    for (let j = 0; j < i; j++) {
      const rj = j * n;
      const uj = work[ri + j];
      const wj = w[j];
      for (let k = 0; k < j; k++) work[rj + k] += uj * w[k] - wj * work[ri + k];
    }
  }
  return { work, t, h };
}

/** One-sided Jacobi: rotates the rows of `x` (count rows of width) until orthogonal; the same rotations go to `y`. */
export function jacobiInPlace(x: Float64Array, y: Float64Array, count: number, width: number): void {
  for (let sweep = 0; sweep < 60; sweep++) {
    let rotated = false;
    for (let p = 0; p < count; p++) {
      for (let q = p + 1; q < count; q++) {
        const rp = p * width;
        const rq = q * width;
        let pp = 0;
        let qq = 0;
        let pq = 0;
        for (let k = 0; k < width; k++) {
          pp += x[rp + k] * x[rp + k];
          qq += x[rq + k] * x[rq + k];
          pq += x[rp + k] * x[rq + k];
        }
        if (pq === 0 || Math.abs(pq) <= 4 * Number.EPSILON * Math.sqrt(pp * qq)) continue;
        rotated = true;
        const z = (qq - pp) / (2 * pq);
        const t = (z >= 0 ? 1 : -1) / (Math.abs(z) + Math.hypot(1, z));
        const c = 1 / Math.hypot(1, t);
        rotate(x, rp, rq, width, c, c * t);
        rotate(y, p * count, q * count, count, c, c * t);
      }
    }
    if (!rotated) return;
  }
}

function rotate(x: Float64Array, p: number, q: number, width: number, c: number, s: number): void {
  for (let k = 0; k < width; k++) {
    const a = x[p + k];
    const b = x[q + k];
    x[p + k] = c * a - s * b;
    x[q + k] = s * a + c * b;
  }
}

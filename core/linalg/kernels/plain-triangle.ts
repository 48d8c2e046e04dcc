import type { Kernels } from './kernels';

type TriangleKernels = Pick<
  Kernels,
  'triangleTimes' | 'triangleRankTwo' | 'reduceTriangle' | 'eigenvaluesOfMany' | 'qlSteps' | 'qlValues'
>;

/** Less than this is no content, and its reciprocal would overflow. */
export const TINY = 1e-290;

/** Real symmetric and antisymmetric reductions and the QL iteration. */
export function plainTriangle(memory: () => Float64Array): TriangleKernels {
  const kernels: TriangleKernels = {
    triangleTimes(a, ld, n, sign, x, y) {
      const m = memory();
      m.fill(0, y, y + n);
      for (let j = 0, row = a; j < n; j++, row += ld) {
        const xj = m[x + j];
        const back = sign * xj;
        let s = sign > 0 ? m[row + j] * xj : 0;
        for (let k = 0; k < j; k++) {
          const v = m[row + k];
          s += v * m[x + k];
          m[y + k] += v * back;
        }
        m[y + j] = s;
      }
    },

    triangleRankTwo(a, ld, n, x, y, f, g) {
      const m = memory();
      for (let j = 0, row = a; j < n; j++, row += ld) {
        const fx = f * m[x + j];
        const gy = g * m[y + j];
        for (let k = 0; k <= j; k++) m[row + k] += fx * m[y + k] + gy * m[x + k];
      }
    },

    reduceTriangle(a, ld, n, sign, d, e, h, w) {
      const m = memory();
      for (let i = n - 1; i > 0; i--) {
        const row = a + i * ld;
        const { beta, norm } = reflectorInPlace(m, row, i);
        m[e + i - 1] = beta;
        m[h + i] = norm;
        if (norm === 0) continue;
        kernels.triangleTimes(a, ld, i, sign, row, w);
        let overlap = 0;
        for (let k = 0; k < i; k++) overlap += m[w + k] * m[row + k];
        const shift = sign > 0 ? overlap / (norm + norm) : 0;
        for (let k = 0; k < i; k++) m[w + k] = (m[w + k] - shift * m[row + k]) / norm;
        kernels.triangleRankTwo(a, ld, i, row, w, -sign, -1);
      }
      for (let i = 0; i < n; i++) m[d + i] = sign > 0 ? m[a + i * ld + i] : 0;
    },

    eigenvaluesOfMany(a, ld, n, count, sign, values, room) {
      let failed = 0;
      for (let i = 0; i < count; i++) {
        const d = values + i * n;
        kernels.reduceTriangle(a + i * ld * n, ld, n, sign, d, room, room + n, room + 2 * n);
        failed += kernels.qlValues(d, room, n);
      }
      return failed;
    },

    qlSteps(d, e, n, z, ld, width) {
      const m = memory();
      if (n > 0) m[e + n - 1] = 0;
      let scale = 0;
      for (let i = 0; i < n; i++) scale = Math.max(scale, Math.abs(m[d + i]), Math.abs(m[e + i]));
      if (scale < TINY) return 0;
      for (let l = 0; l < n; l++) {
        for (let step = 0; ; step++) {
          let end = l;
          for (; end < n - 1; end++) {
            const size = Math.abs(m[d + end]) + Math.abs(m[d + end + 1]) + scale / 16;
            if (Math.abs(m[e + end]) <= Number.EPSILON * size) break;
          }
          if (end === l) break;
          if (step > 80) return 1;
          qlStep(m, d, e, l, end, z, ld, width);
        }
      }
      return 0;
    },

    // The oracle need not be fast: the same steps without rows to rotate.
    qlValues: (d, e, n) => kernels.qlSteps(d, e, n, 0, 0, 0),
  };
  return kernels;
}

/**
 * Replaces row x (i numbers) by u with (1 − u uᵀ/norm) x = beta·e_{i−1}, norm = ‖u‖²/2; norm 0 where x is
 * such a multiple already. u is scaled, which the reflector does not feel.
 */
export function reflectorInPlace(m: Float64Array, row: number, i: number): { beta: number; norm: number } {
  const last = row + i - 1;
  let scale = 0;
  for (let p = row; p < last; p++) scale += Math.abs(m[p]);
  if (scale < TINY) return { beta: m[last], norm: 0 };
  scale += Math.abs(m[last]);
  let sum = 0;
  for (let p = row; p <= last; p++) {
    m[p] /= scale;
    sum += m[p] * m[p];
  }
  const f = m[last];
  const g = f >= 0 ? -Math.sqrt(sum) : Math.sqrt(sum);
  m[last] = f - g;
  return { beta: scale * g, norm: sum - f * g };
}

/** One implicit QL step with Wilkinson's shift on rows l…end. */
function qlStep(
  m: Float64Array,
  d: number,
  e: number,
  l: number,
  end: number,
  z: number,
  ld: number,
  width: number,
): void {
  let g = (m[d + l + 1] - m[d + l]) / (2 * m[e + l]);
  let r = Math.hypot(g, 1);
  g = m[d + end] - m[d + l] + m[e + l] / (g + (g >= 0 ? r : -r));
  let s = 1;
  let c = 1;
  let p = 0;
  for (let i = end - 1; i >= l; i--) {
    const f = s * m[e + i];
    const b = c * m[e + i];
    r = Math.hypot(f, g);
    m[e + i + 1] = r;
    if (r === 0) {
      // The matrix fell apart in the middle of the step.
      m[d + i + 1] -= p;
      m[e + end] = 0;
      return;
    }
    s = f / r;
    c = g / r;
    g = m[d + i + 1] - p;
    const t = (m[d + i] - g) * s + 2 * c * b;
    p = s * t;
    m[d + i + 1] = g + p;
    g = c * t - b;
    for (let k = 0, x = z + i * ld, y = x + ld; k < width; k++, x++, y++) {
      const u = m[x];
      const v = m[y];
      m[y] = s * u + c * v;
      m[x] = c * u - s * v;
    }
  }
  m[d + l] -= p;
  m[e + l] = g;
  m[e + end] = 0;
}

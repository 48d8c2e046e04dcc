import type { Kernels } from './kernels';
import { plainHermitian } from './plain-hermitian';
import { plainTriangle } from './plain-triangle';

/** The kernels in plain TypeScript on a memory that may be replaced by a larger one between calls. */
export function plainKernels(memory: () => Float64Array): Kernels {
  return {
    ...plainTriangle(memory),
    ...plainHermitian(memory),

    gemm(m, n, k, alpha, a, ars, acs, b, brs, bcs, c, ldc) {
      const x = memory();
      // Along the rows of C and B where B has rows, so that the inner loop runs through memory; else by dot products.
      for (let i = 0; i < m; i++) {
        const ci = c + i * ldc;
        const ai = a + i * ars;
        if (bcs === 1) {
          for (let p = 0; p < k; p++) {
            const f = alpha * x[ai + p * acs];
            const bp = b + p * brs;
            for (let j = 0; j < n; j++) x[ci + j] += f * x[bp + j];
          }
        } else {
          for (let j = 0; j < n; j++) {
            const bj = b + j * bcs;
            let s = 0;
            for (let p = 0; p < k; p++) s += x[ai + p * acs] * x[bj + p * brs];
            x[ci + j] += alpha * s;
          }
        }
      }
    },

    rowDots(rows, ld, count, x, length, out) {
      const a = memory();
      for (let r = 0, row = rows; r < count; r++, row += ld) {
        let s = 0;
        for (let k = 0; k < length; k++) s += a[row + k] * a[x + k];
        a[out + r] = s;
      }
    },

    addRows(rows, ld, count, f, step, y, length) {
      const a = memory();
      for (let r = 0, row = rows; r < count; r++, row += ld) {
        const factor = a[f + r * step];
        for (let k = 0; k < length; k++) a[y + k] += factor * a[row + k];
      }
    },
  };
}

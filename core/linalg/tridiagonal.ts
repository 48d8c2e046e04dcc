/**
 * Implicit QL on a symmetric tridiagonal matrix: `d` (n) diagonal, `e` (n) with e[i] between i and i+1 and
 * e[n−1] unused. On return `d` holds the eigenvalues, unordered; `e` is destroyed. Rotations go to the rows of
 * each matrix in `rows` (n rows of `width`), so that rows which start as Qᵀ end as eigenvectors.
 */
export function qlInPlace(
  d: Float64Array,
  e: Float64Array,
  n: number,
  rows: readonly Float64Array[],
  width: number,
): void {
  if (n > 0) e[n - 1] = 0;
  for (let l = 0; l < n; l++) {
    for (let iteration = 0; ; iteration++) {
      let m = l;
      for (; m < n - 1; m++) {
        if (Math.abs(e[m]) <= Number.EPSILON * (Math.abs(d[m]) + Math.abs(d[m + 1]))) break;
      }
      if (m === l) break;
      if (iteration > 80) throw new Error(`tridiagonal QL: no convergence at eigenvalue ${l} of ${n}`);
      let g = (d[l + 1] - d[l]) / (2 * e[l]);
      let r = Math.hypot(g, 1);
      g = d[m] - d[l] + e[l] / (g + (g >= 0 ? r : -r));
      let s = 1;
      let c = 1;
      let p = 0;
      let i = m - 1;
      for (; i >= l; i--) {
        const f = s * e[i];
        const b = c * e[i];
        r = Math.hypot(f, g);
        e[i + 1] = r;
        if (r === 0) {
          d[i + 1] -= p;
          e[m] = 0;
          break;
        }
        s = f / r;
        c = g / r;
        g = d[i + 1] - p;
        r = (d[i] - g) * s + 2 * c * b;
        p = s * r;
        d[i + 1] = g + p;
        g = c * r - b;
        for (const z of rows) {
          for (let k = 0, u = i * width, v = u + width; k < width; k++, u++, v++) {
            const x = z[v];
            const y = z[u];
            z[v] = s * y + c * x;
            z[u] = c * y - s * x;
          }
        }
      }
      if (r === 0 && i >= l) continue;
      d[l] -= p;
      e[l] = g;
      e[m] = 0;
    }
  }
}

/** Positions that put `d` in ascending order. */
export function ascending(d: Float64Array): number[] {
  return Array.from(d.keys()).sort((x, y) => d[x] - d[y] || x - y);
}

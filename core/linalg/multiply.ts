export interface MultiplyOptions {
  /** `a` is stored k×m and used transposed. @defaultValue false */
  readonly transposeA?: boolean;
  /** `b` is stored n×k and used transposed. @defaultValue false */
  readonly transposeB?: boolean;
}

/** C = op(A) op(B), op(A) of m×k, op(B) of k×n, all row-major; the result is m×n. */
export function multiply(
  a: Float64Array,
  b: Float64Array,
  m: number,
  k: number,
  n: number,
  options: MultiplyOptions = {},
): Float64Array {
  const at = options.transposeA ? transpose(a, k, m) : a;
  const bt = options.transposeB ? transpose(b, n, k) : b;
  const c = new Float64Array(m * n);
  for (let i = 0; i < m; i++) {
    for (let p = 0; p < k; p++) {
      const x = at[i * k + p];
      if (x === 0) continue;
      for (let j = 0, cj = i * n, bj = p * n; j < n; j++) c[cj++] += x * bt[bj++];
    }
  }
  return c;
}

/** The cols×rows transpose of a rows×cols matrix. */
export function transpose(a: Float64Array, rows: number, cols: number): Float64Array {
  const t = new Float64Array(rows * cols);
  for (let i = 0; i < rows; i++) for (let j = 0; j < cols; j++) t[j * rows + i] = a[i * cols + j];
  return t;
}

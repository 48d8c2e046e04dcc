import { numSymmetricPairs } from '../../integrals/integral-set';

/** Pair coordinates of a symmetric n×n matrix: √2 off the diagonal. */
export function pairsOf(matrix: Float64Array, n: number): Float64Array {
  const pairs = new Float64Array(numSymmetricPairs(n));
  for (let p = 0, i = 0; p < n; p++) {
    for (let q = 0; q < p; q++) pairs[i++] = Math.SQRT2 * matrix[p * n + q]!;
    pairs[i++] = matrix[p * n + p]!;
  }
  return pairs;
}

/** M × npair rows S_m: u_m u_mᵀ in pair coordinates; unit vectors for unit u. */
export function pairRows(vectors: Float64Array, count: number, n: number): Float64Array {
  const rows = new Float64Array(count * numSymmetricPairs(n));
  let i = 0;
  for (let m = 0; m < count; m++) {
    const at = m * n;
    for (let p = 0; p < n; p++) {
      const x = Math.SQRT2 * vectors[at + p]!;
      for (let q = 0; q < p; q++) rows[i++] = x * vectors[at + q]!;
      rows[i++] = vectors[at + p]! * vectors[at + p]!;
    }
  }
  return rows;
}

/** w_p w_q for each symmetric pair. */
export function pairWeights(weights: Float64Array): Float64Array {
  const n = weights.length;
  const out = new Float64Array(numSymmetricPairs(n));
  for (let p = 0, i = 0; p < n; p++) for (let q = 0; q <= p; q++) out[i++] = weights[p]! * weights[q]!;
  return out;
}

/** a_i·b_i for `rows` rows of `length` numbers. */
export function rowDots(a: Float64Array, b: Float64Array, rows: number, length: number): Float64Array {
  const out = new Float64Array(rows);
  for (let i = 0, at = 0; i < rows; i++) {
    let sum = 0;
    for (let r = 0; r < length; r++, at++) sum += a[at]! * b[at]!;
    out[i] = sum;
  }
  return out;
}

/** Rows of `length` numbers, row i times factors[i]. */
export function scaleRows(a: Float64Array, factors: Float64Array, length: number): Float64Array {
  const out = new Float64Array(a.length);
  for (let i = 0, at = 0; i < factors.length; i++) {
    const f = factors[i]!;
    for (let r = 0; r < length; r++, at++) out[at] = f * a[at]!;
  }
  return out;
}

/** Rows of as many numbers as there are factors, column j times factors[j]. */
export function scaleColumns(a: Float64Array, factors: ArrayLike<number>): Float64Array {
  const width = factors.length;
  const out = new Float64Array(a.length);
  for (let at = 0; at < a.length; at += width) {
    for (let j = 0; j < width; j++) out[at + j] = factors[j]! * a[at + j]!;
  }
  return out;
}

/** Element by element. */
export function hadamard(a: Float64Array, b: Float64Array): Float64Array {
  const out = new Float64Array(a.length);
  for (let i = 0; i < a.length; i++) out[i] = a[i]! * b[i]!;
  return out;
}

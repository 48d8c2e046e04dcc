import { multiply } from '../../linalg';

/** Terms of the power series at norm ≤ ½: the last is below 1e-21. */
const TERMS = 18;

/**
 * exp(scale·A), count×count. The power series is taken at norm ≤ ½ and squared back: for antisymmetric A orthogonal to
 * rounding, and made of matrix products only, which the kernels are good at.
 */
export function exponential(a: Float64Array, count: number, scale: number): Float64Array {
  let square = 0;
  for (let i = 0; i < count * count; i++) square += a[i]! * a[i]!;
  const norm = Math.abs(scale) * Math.sqrt(square);
  const squarings = norm > 0 ? Math.max(0, Math.ceil(Math.log2(2 * norm))) : 0;
  const small = new Float64Array(count * count);
  for (let i = 0; i < small.length; i++) small[i] = (a[i]! * scale) / 2 ** squarings;
  let term: Float64Array = small;
  let sum: Float64Array = Float64Array.from(small);
  for (let i = 0; i < count; i++) sum[i * count + i]! += 1;
  for (let k = 2; k <= TERMS; k++) {
    term = multiply(small, term, count, count, count);
    let largest = 0;
    for (let i = 0; i < term.length; i++) {
      term[i]! /= k;
      sum[i]! += term[i]!;
      largest = Math.max(largest, Math.abs(term[i]!));
    }
    if (largest < 1e-17) break;
  }
  for (let i = 0; i < squarings; i++) sum = multiply(sum, sum, count, count, count);
  return sum;
}

/** Uniform numbers from −½ to ½ of a seed. */
export function uniformNumbers(seed: number): () => number {
  let state = seed | 0;
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let x = Math.imul(state ^ (state >>> 15), 1 | state);
    x = (x + Math.imul(x ^ (x >>> 7), 61 | x)) ^ x;
    return ((x ^ (x >>> 14)) >>> 0) / 4294967296 - 0.5;
  };
}

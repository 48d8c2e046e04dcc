import { multiply } from './multiply';

/**
 * exp(X) of a real antisymmetric n×n matrix, row-major: orthogonal to rounding. Power series at norm ≤ ½, squared back;
 * matrix products only.
 */
export function antisymmetricExponential(x: Float64Array, n: number): Float64Array {
  let square = 0;
  for (let i = 0; i < n * n; i++) square += x[i]! * x[i]!;
  // The Frobenius norm over √2 bounds the largest |eigenvalue|, since they come in ± pairs.
  const norm = Math.sqrt(square / 2);
  let exponential: Float64Array = new Float64Array(n * n);
  for (let i = 0; i < n; i++) exponential[i * n + i] = 1;
  if (norm === 0) return exponential;
  const squarings = Math.max(0, Math.ceil(Math.log2(2 * norm)));
  const small = x.map((value) => value / 2 ** squarings);
  let term: Float64Array = small;
  for (let i = 0; i < n * n; i++) exponential[i]! += small[i]!;
  for (let k = 2; k <= 18; k++) {
    term = multiply(small, term, n, n, n).map((value) => value / k);
    for (let i = 0; i < n * n; i++) exponential[i]! += term[i]!;
  }
  for (let i = 0; i < squarings; i++) exponential = multiply(exponential, exponential, n, n, n);
  return exponential;
}

/**
 * The orthogonal matrix next to one that rounding has moved a little: Newton–Schulz steps U(3 − UᵀU)/2, which square the
 * deviation each.
 */
export function polished(u: Float64Array, n: number): Float64Array {
  let out = u;
  for (let step = 0; step < 2; step++) {
    const gram = multiply(out, out, n, n, n, { transposeA: true });
    for (let i = 0; i < n * n; i++) gram[i] = (i % (n + 1) === 0 ? 1.5 : 0) - 0.5 * gram[i]!;
    out = multiply(out, gram, n, n, n);
  }
  return out;
}

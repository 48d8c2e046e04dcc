import { multiply } from './multiply';

/** Powers of the matrix that are formed: the series is summed as a polynomial in the highest of them. */
const POWERS = 4;
/** 1/k! up to the degree 15, whose remainder at norm ≤ ½ is below 1e-18. */
const COEFFICIENTS = Array.from({ length: POWERS * POWERS }, (_, k) => {
  let factorial = 1;
  for (let i = 2; i <= k; i++) factorial *= i;
  return 1 / factorial;
});

/**
 * exp(scale·A) of a real n×n matrix, row-major: for antisymmetric A orthogonal to rounding.
 *
 * The power series is taken at norm ≤ ½ (M. S. Paterson and L. J. Stockmeyer, SIAM J. Comput. 2, 60 (1973): six products
 * for sixteen terms) and squared back.
 */
export function matrixExponential(a: Float64Array, n: number, scale = 1): Float64Array {
  let square = 0;
  for (const x of a) square += x * x;
  const norm = Math.abs(scale) * Math.sqrt(square);
  const squarings = norm > 0 ? Math.max(0, Math.ceil(Math.log2(2 * norm))) : 0;
  const powers: Float64Array[] = [a.map((x) => (x * scale) / 2 ** squarings)];
  while (powers.length < POWERS) powers.push(multiply(powers[0]!, powers.at(-1)!, n, n, n));
  let sum = new Float64Array(n * n);
  for (let from = POWERS * (POWERS - 1); from >= 0; from -= POWERS) {
    if (from < POWERS * (POWERS - 1)) {
      sum = Float64Array.from(multiply(powers[POWERS - 1]!, sum, n, n, n));
    }
    for (let i = 0; i < n; i++) sum[i * n + i]! += COEFFICIENTS[from]!;
    for (let k = 1; k < POWERS; k++) {
      const c = COEFFICIENTS[from + k]!;
      const power = powers[k - 1]!;
      for (let i = 0; i < sum.length; i++) sum[i]! += c * power[i]!;
    }
  }
  let result: Float64Array = sum;
  for (let i = 0; i < squarings; i++) result = multiply(result, result, n, n, n);
  return result;
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

import { multiply } from '../../linalg';

/** Powers of the matrix that are formed: the series is summed as a polynomial in the highest of them. */
const POWERS = 4;
/** 1/k! up to the degree 15, whose remainder at norm ≤ ½ is below 1e-18. */
const COEFFICIENTS = Array.from({ length: POWERS * POWERS }, (_, k) => {
  let factorial = 1;
  for (let i = 2; i <= k; i++) factorial *= i;
  return 1 / factorial;
});

/**
 * exp(scale·A), count×count, A without elements between members of different classes; neither has the result any.
 *
 * The power series is taken at norm ≤ ½ (M. S. Paterson and L. J. Stockmeyer, SIAM J. Comput. 2, 60 (1973): six products
 * for sixteen terms) and squared back: for antisymmetric A orthogonal to rounding.
 */
export function exponential(
  a: Float64Array,
  count: number,
  scale: number,
  classes: ArrayLike<number>,
): Float64Array {
  const out = new Float64Array(count * count);
  const members = new Map<number, number[]>();
  for (let t = 0; t < count; t++) {
    const own = members.get(classes[t]!);
    if (own) own.push(t);
    else members.set(classes[t]!, [t]);
  }
  for (const own of members.values()) {
    const size = own.length;
    const block = new Float64Array(size * size);
    own.forEach((s, i) => {
      own.forEach((t, j) => {
        block[i * size + j] = a[s * count + t]!;
      });
    });
    const found = blockExponential(block, size, scale);
    own.forEach((s, i) => {
      own.forEach((t, j) => {
        out[s * count + t] = found[i * size + j]!;
      });
    });
  }
  return out;
}

function blockExponential(a: Float64Array, size: number, scale: number): Float64Array {
  let square = 0;
  for (const x of a) square += x * x;
  const norm = Math.abs(scale) * Math.sqrt(square);
  const squarings = norm > 0 ? Math.max(0, Math.ceil(Math.log2(2 * norm))) : 0;
  const powers: Float64Array[] = [a.map((x) => (x * scale) / 2 ** squarings)];
  while (powers.length < POWERS) powers.push(multiply(powers[0]!, powers.at(-1)!, size, size, size));
  let sum = new Float64Array(size * size);
  for (let from = POWERS * (POWERS - 1); from >= 0; from -= POWERS) {
    if (from < POWERS * (POWERS - 1)) {
      sum = Float64Array.from(multiply(powers[POWERS - 1]!, sum, size, size, size));
    }
    for (let i = 0; i < size; i++) sum[i * size + i]! += COEFFICIENTS[from]!;
    for (let k = 1; k < POWERS; k++) {
      const c = COEFFICIENTS[from + k]!;
      const power = powers[k - 1]!;
      for (let i = 0; i < sum.length; i++) sum[i]! += c * power[i]!;
    }
  }
  let result: Float64Array = sum;
  for (let i = 0; i < squarings; i++) result = multiply(result, result, size, size, size);
  return result;
}

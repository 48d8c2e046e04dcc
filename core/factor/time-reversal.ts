import { numAntisymmetricPairs, numSymmetricPairs } from '../integrals/integral-set';

/**
 * Time reversal on Hermitian matrices over M spinors in Kramers pairs (2m, 2m+1), Θψ_2m = ψ_2m+1 and
 * Θψ_2m+1 = −ψ_2m: X → σ_y X* σ_y on the pair index. In the orthonormal Hermitian basis (symmetric pairs, then
 * antisymmetric pairs) it is a permutation with signs, so even and odd combinations have at most two elements.
 */
export interface ReversalBasis {
  /** Rows: orthonormal combinations [first, coefficient, second, coefficient]; second = −1 where there is one only. */
  readonly even: readonly Combination[];
  readonly odd: readonly Combination[];
}

export interface Combination {
  readonly first: number;
  readonly second: number;
  readonly a: number;
  readonly b: number;
}

export function reversalBasis(spinors: number): ReversalBasis {
  const symmetric = numSymmetricPairs(spinors);
  const dim = symmetric + numAntisymmetricPairs(spinors);
  const image = new Int32Array(dim);
  const sign = new Int8Array(dim);
  for (let p = 0; p < spinors; p++) {
    for (let q = 0; q <= p; q++) {
      const s = (p & 1) === (q & 1) ? 1 : -1;
      const [a, b] = [p ^ 1, q ^ 1];
      const [high, low] = a >= b ? [a, b] : [b, a];
      const from = (p * (p + 1)) / 2 + q;
      image[from] = (high * (high + 1)) / 2 + low;
      sign[from] = s;
      if (p === q) continue;
      const anti = symmetric + (p * (p - 1)) / 2 + q;
      image[anti] = symmetric + (high * (high - 1)) / 2 + low;
      // A is imaginary (−1 from the conjugation) and changes sign when its pair is turned round.
      sign[anti] = (a > b ? -s : s) as 1 | -1;
    }
  }
  const even: Combination[] = [];
  const odd: Combination[] = [];
  for (let i = 0; i < dim; i++) {
    const j = image[i]!;
    if (j === i) {
      (sign[i] === 1 ? even : odd).push({ first: i, second: -1, a: 1, b: 0 });
    } else if (i < j) {
      const b = Math.SQRT1_2 * sign[i]!;
      even.push({ first: i, second: j, a: Math.SQRT1_2, b });
      odd.push({ first: i, second: j, a: Math.SQRT1_2, b: -b });
    }
  }
  return { even, odd };
}

/** Rows · G · columnsᵀ for two lists of combinations. */
export function project(
  g: Float64Array,
  dim: number,
  rows: readonly Combination[],
  columns: readonly Combination[],
): Float64Array {
  const out = new Float64Array(rows.length * columns.length);
  let at = 0;
  for (const r of rows) {
    for (const c of columns) {
      let x = r.a * c.a * g[r.first * dim + c.first]!;
      if (c.second >= 0) x += r.a * c.b * g[r.first * dim + c.second]!;
      if (r.second >= 0) x += r.b * c.a * g[r.second * dim + c.first]!;
      if (r.second >= 0 && c.second >= 0) x += r.b * c.b * g[r.second * dim + c.second]!;
      out[at++] = x;
    }
  }
  return out;
}

/** Rows over combinations back to rows over all elements. */
export function expand(
  vectors: Float64Array,
  count: number,
  basis: readonly Combination[],
  dim: number,
): Float64Array {
  const out = new Float64Array(count * dim);
  for (let t = 0; t < count; t++) {
    basis.forEach(({ first, second, a, b }, i) => {
      const x = vectors[t * basis.length + i]!;
      out[t * dim + first]! += a * x;
      if (second >= 0) out[t * dim + second]! += b * x;
    });
  }
  return out;
}

import { numSymmetricPairs } from '../../integrals/integral-set';
import type { JobContext } from '../../job';
import { multiply, pivotedCholeskyAsync, symmetricEigen } from '../../linalg';
import { planeInto } from '../elements';
import { smoothMedian } from '../smooth-norms';
import { pairRows, pairsOf, pairWeights, scaleColumns } from './arrays';
import type { HypercontractionPoint } from './block';
import type { FitProblem } from './problem';

/** Candidates among which the starting vectors are chosen, for each vector asked for. */
const CANDIDATES = 24;
/** Directions of Q = (u·u′)² below this part of the largest eigenvalue are left out of the first ζ. */
const FLAT = 1e-2;

/**
 * Starting point without a fit: the eigenvectors u of all columns V_l, weighted with the size of their eigenvalue, are
 * thinned out by pivoted Cholesky on the Gram matrix w w′ (u·u′)² of their products, and ζ is the least-squares one.
 * With a shift, each column first loses its median c_l, σ(V − c)⊗(V − c), that is ξ = Σ_l σ_l (½ c_l² 1 − c_l V_l).
 */
export async function startingPoint(
  problem: FitProblem,
  rank: number,
  shifted: boolean,
  ctx: JobContext,
): Promise<HypercontractionPoint> {
  const { n, count, signs } = problem;
  const columns = plainColumns(problem);
  const npair = numSymmetricPairs(n);
  const plane = new Float64Array(n * n);
  const shift = shifted ? new Float64Array(n * n) : null;
  const weights = new Float64Array(count * n);
  const all = new Float64Array(count * n * n);
  for (let l = 0; l < count; l++) {
    await ctx.checkpoint();
    planeInto(plane, 0, columns, l * npair, n, true);
    const { values, vectors } = symmetricEigen(plane, n);
    const c = shifted ? smoothMedian(values, 0) : 0;
    for (let i = 0; i < n; i++) weights[l * n + i] = Math.abs(values[i]! - c);
    all.set(vectors, l * n * n);
    if (!shift) continue;
    for (let i = 0; i < n * n; i++) shift[i]! -= signs[l]! * c * plane[i]!;
    for (let p = 0; p < n; p++) shift[p * n + p]! += 0.5 * signs[l]! * c * c;
  }
  const order = Array.from(weights.keys()).sort((a, b) => weights[b]! - weights[a]! || a - b);
  const chosen = order.slice(0, Math.min(order.length, CANDIDATES * rank));
  const pool = new Float64Array(chosen.length * n);
  chosen.forEach((from, to) => {
    pool.set(all.subarray(from * n, (from + 1) * n), to * n);
  });
  const size = chosen.map((i) => weights[i]!);
  const { pivots } = await pivotedCholeskyAsync(
    {
      n: chosen.length,
      diagonal: Float64Array.from(size, (w) => w * w),
      rowInto(out, i) {
        const row = multiply(pool, pool.subarray(i * n, (i + 1) * n), chosen.length, n, 1);
        for (let j = 0; j < row.length; j++) out[j] = size[i]! * size[j]! * row[j]! * row[j]!;
      },
    },
    { maxRank: rank },
    ctx,
  );
  const vectors = new Float64Array(pivots.length * n);
  pivots.forEach((from, to) => {
    vectors.set(pool.subarray(from * n, (from + 1) * n), to * n);
  });
  const zeta = leastSquaresZeta(problem, vectors, pivots.length, shift);
  return { count: pivots.length, vectors, zeta, shift };
}

/** ζ = Q⁺ (S G′ Sᵀ) Q⁺ for given vectors, with the flat directions of Q left out. */
function leastSquaresZeta(
  problem: FitProblem,
  vectors: Float64Array,
  m: number,
  shift: Float64Array | null,
): Float64Array {
  const { n, count: l, signs } = problem;
  const npair = numSymmetricPairs(n);
  const columns = plainColumns(problem);
  const s = pairRows(vectors, m, n);
  const p = multiply(s, columns, m, npair, l, { transposeB: true });
  const signed = scaleColumns(p, signs);
  const c = multiply(signed, p, m, l, m, { transposeB: true });
  if (shift) {
    const a = multiply(s, pairsOf(shift, n), m, npair, 1);
    for (let i = 0; i < m; i++) for (let j = 0; j < m; j++) c[i * m + j]! += a[i]! + a[j]!;
  }
  const q = multiply(s, s, m, npair, m, { transposeB: true });
  const { values, vectors: rows } = symmetricEigen(q, m);
  const scaled = Float64Array.from(rows);
  for (let i = 0; i < m; i++) {
    const inverse = values[i]! > FLAT * values[m - 1]! ? 1 / values[i]! : 0;
    for (let j = 0; j < m; j++) scaled[i * m + j]! *= inverse;
  }
  const inverse = multiply(rows, scaled, m, m, m, { transposeA: true });
  const zeta = multiply(inverse, multiply(c, inverse, m, m, m), m, m, m);
  for (let i = 0; i < m; i++) {
    for (let j = 0; j < i; j++) {
      const mean = 0.5 * (zeta[i * m + j]! + zeta[j * m + i]!);
      zeta[i * m + j] = mean;
      zeta[j * m + i] = mean;
    }
  }
  return zeta;
}

/** The columns without the weights of the problem. */
function plainColumns({ columns, weights }: FitProblem): Float64Array {
  return scaleColumns(
    columns,
    pairWeights(weights).map((w) => 1 / w),
  );
}

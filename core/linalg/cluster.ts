import { pivotedCholesky, type RowSource } from './cholesky';
import type { SingularValues } from './types';

/** Vectors that do not depend on the basis the solver chose; row i of `vectors` belongs to `weights[i]`. */
export interface ClusteredBasis {
  readonly n: number;
  readonly count: number;
  readonly weights: Float64Array;
  readonly vectors: Float64Array;
}

/**
 * The degenerate-cluster rule: eigenvalues closer than `relative` · max |value| form a cluster, its weight is
 * their mean, and its vectors are replaced by the pivoted Cholesky columns c_j of the projector P = Σ v vᵀ
 * (pivot = largest diagonal element, within 1e-6 the lowest index).
 *
 * @param values - eigenvalues, ascending or descending.
 * @param vectors - one orthonormal row of length n for each value.
 *
 * @remarks Guaranteed: Σ_j c_j c_jᵀ = P. The c_j are in fact orthonormal too: P c = c for every column, so with C of full
 * rank r, C Cᵀ C = C gives CᵀC = 1.
 */
export function clusterBasis(
  values: Float64Array,
  vectors: Float64Array,
  n: number,
  relative = 1e-8,
): ClusteredBasis {
  const count = values.length;
  const weights = Float64Array.from(values);
  const out = Float64Array.from(vectors.subarray(0, count * n));
  for (const [from, to] of clusters(values, relative)) {
    weights.fill(mean(values, from, to), from, to);
    out.set(projectorColumns(vectors, from, to, n), from * n);
  }
  return { n, count, weights, vectors: out };
}

/**
 * The same rule for singular triples. A cluster contributes s·Q, Q = Σ u vᵀ, and only Q is unique. The left
 * vectors become the pivoted Cholesky columns of QQᵀ = Σ u uᵀ, which are orthonormal, and the right ones follow
 * as v_j = Qᵀu_j, so that s Σ u_j v_jᵀ is unchanged.
 */
export function clusterTriples(triples: SingularValues, relative = 1e-8): SingularValues {
  const { rows, cols, rank } = triples;
  const s = Float64Array.from(triples.s);
  const u = Float64Array.from(triples.u);
  const v = Float64Array.from(triples.v);
  for (const [from, to] of clusters(triples.s, relative)) {
    s.fill(mean(triples.s, from, to), from, to);
    const columns = projectorColumns(triples.u, from, to, rows);
    u.set(columns, from * rows);
    for (let j = from; j < to; j++) {
      const target = v.subarray(j * cols, (j + 1) * cols).fill(0);
      for (let i = from; i < to; i++) {
        let overlap = 0;
        for (let k = 0; k < rows; k++) overlap += triples.u[i * rows + k] * u[j * rows + k];
        for (let k = 0; k < cols; k++) target[k] += overlap * triples.v[i * cols + k];
      }
    }
  }
  return { rows, cols, rank, s, u, v };
}

/** Half-open ranges of neighbours that chain within relative · max |value|; single values are clusters of one. */
function clusters(values: Float64Array, relative: number): [number, number][] {
  let scale = 0;
  for (const x of values) scale = Math.max(scale, Math.abs(x));
  const ranges: [number, number][] = [];
  let from = 0;
  for (let i = 1; i <= values.length; i++) {
    if (i < values.length && Math.abs(values[i] - values[i - 1]) <= relative * scale) continue;
    ranges.push([from, i]);
    from = i;
  }
  return ranges;
}

function mean(values: Float64Array, from: number, to: number): number {
  let sum = 0;
  for (let i = from; i < to; i++) sum += values[i];
  return sum / (to - from);
}

/** Pivoted Cholesky columns, as rows, of Σ v vᵀ over the vectors from…to. */
function projectorColumns(vectors: Float64Array, from: number, to: number, n: number): Float64Array {
  const rank = to - from;
  const diagonal = new Float64Array(n);
  for (let i = from; i < to; i++) {
    for (let k = 0; k < n; k++) diagonal[k] += vectors[i * n + k] * vectors[i * n + k];
  }
  const projector: RowSource = {
    n,
    diagonal,
    rowInto(out, p) {
      out.fill(0);
      for (let i = from; i < to; i++) {
        const x = vectors[i * n + p];
        for (let k = 0; k < n; k++) out[k] += x * vectors[i * n + k];
      }
    },
  };
  const columns = pivotedCholesky(projector, { maxRank: rank });
  if (columns.rank < rank) throw new Error('cluster vectors are not orthonormal: their projector lacks rank');
  return columns.vectors;
}

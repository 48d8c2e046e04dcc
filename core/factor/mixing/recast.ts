import type { JobContext } from '../../job';
import { pivotedCholeskyAsync, type RowSource } from '../../linalg';

/** Part of the trace that the decomposition may leave: rounding. */
const ROUNDING = 1e-12;

/**
 * The same Σ σ v vᵀ from pivoted-Cholesky columns, sign by sign: an orthogonal mixing of the factors of one sign, that mostly
 * has smaller nuclear norms than eigenvectors have, because a column is centred on a pair of orbitals.
 *
 * @param columns - signs.length × dim; not modified
 * @returns as many columns in the places of their sign, empty ones where the rank is smaller; null where rounding would show
 */
export async function recast(
  columns: Float64Array,
  signs: Int8Array,
  dim: number,
  ctx: JobContext,
): Promise<Float64Array | null> {
  const out = new Float64Array(columns.length);
  for (const sign of [-1, 1]) {
    const members = [...signs.keys()].filter((t) => signs[t] === sign);
    if (members.length === 0) continue;
    const source = gramOf(columns, members, dim);
    const trace = source.diagonal.reduce((sum, x) => sum + x, 0);
    const { rank, vectors, residualTrace } = await pivotedCholeskyAsync(
      source,
      { maxRank: members.length },
      ctx,
    );
    if (!(Math.abs(residualTrace) <= ROUNDING * trace)) return null;
    for (let i = 0; i < rank; i++) {
      out.set(vectors.subarray(i * dim, (i + 1) * dim), members[i]! * dim);
    }
  }
  return out;
}

function gramOf(columns: Float64Array, members: readonly number[], dim: number): RowSource {
  const diagonal = new Float64Array(dim);
  for (const t of members) {
    for (let i = 0, at = t * dim; i < dim; i++, at++) diagonal[i]! += columns[at]! ** 2;
  }
  return {
    n: dim,
    diagonal,
    rowInto(out, i) {
      out.fill(0, 0, dim);
      for (const t of members) {
        const x = columns[t * dim + i]!;
        if (x === 0) continue;
        for (let j = 0, at = t * dim; j < dim; j++, at++) out[j]! += x * columns[at]!;
      }
    },
  };
}

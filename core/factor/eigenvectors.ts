import type { JobContext, Task } from '../job';
import { householderQr, multiply, symmetricEigenAsync } from '../linalg';
import { canonicalVectors } from './clusters';
import { matrixBlocks, submatrix, symmetricBlocks } from './components';

/** Weights below this are zero whatever the threshold, hartree. */
export const ZERO_WEIGHT = 1e-13;

/** Weights with one unit row each. */
export interface WeightedVectors {
  readonly weights: Float64Array;
  readonly vectors: Float64Array;
}

/**
 * A symmetric eigenproblem [[D, Bᵀ],[B, 0]], D short × short and B long × short; long = 0 where there is no border.
 * Coordinates: the short side, then the long one.
 */
interface Bordered {
  readonly d: Float64Array;
  readonly b: Float64Array;
  readonly short: number;
  readonly long: number;
}

/** Eigenvalues above {@link ZERO_WEIGHT} in size, and their vectors over short + long coordinates. */
export const eigenTask: Task<Bordered, WeightedVectors> = {
  name: 'factor.eigen',
  async run({ d, b, short, long }, ctx) {
    // With B = QR the problem shrinks to [[D, Rᵀ],[R, 0]], whose rank is that of the whole.
    const qr = long > short ? await householderQr(b, long, short, ctx) : null;
    const inner = qr ? qr.r : b;
    const size = qr ? short : long;
    const dim = short + size;
    const matrix = new Float64Array(dim * dim);
    for (let i = 0; i < short; i++) matrix.set(d.subarray(i * short, (i + 1) * short), i * dim);
    for (let i = 0; i < size; i++) {
      for (let j = 0; j < short; j++) {
        matrix[(short + i) * dim + j] = inner[i * short + j]!;
        matrix[j * dim + short + i] = inner[i * short + j]!;
      }
    }
    const eigen = await symmetricEigenAsync(matrix, dim, ctx);
    const kept: number[] = [];
    for (let i = 0; i < dim; i++) if (Math.abs(eigen.values[i]!) > ZERO_WEIGHT) kept.push(i);
    const weights = Float64Array.from(kept, (i) => eigen.values[i]!);
    const solved = new Float64Array(kept.length * dim);
    kept.forEach((from, to) => {
      solved.set(eigen.vectors.subarray(from * dim, (from + 1) * dim), to * dim);
    });
    return { weights, vectors: qr ? lift(solved, kept.length, short, qr.q, size, long) : solved };
  },
};

/** (x, y) → (x, Q y). */
function lift(
  vectors: Float64Array,
  count: number,
  short: number,
  q: Float64Array,
  size: number,
  long: number,
): Float64Array {
  const dim = short + size;
  const tails = new Float64Array(count * size);
  for (let t = 0; t < count; t++) tails.set(vectors.subarray(t * dim + short, (t + 1) * dim), t * size);
  const lifted = multiply(tails, q, count, size, long, { transposeB: true });
  const full = short + long;
  const out = new Float64Array(count * full);
  for (let t = 0; t < count; t++) {
    out.set(vectors.subarray(t * dim, t * dim + short), t * full);
    out.set(lifted.subarray(t * long, (t + 1) * long), t * full + short);
  }
  return out;
}

/**
 * Eigenvectors of a dense symmetric matrix, block by block where exact zeros separate it, degenerate levels by the
 * cluster rule. Ascending weights.
 */
export async function eigenvectors(
  matrix: Float64Array,
  dim: number,
  ctx: JobContext,
): Promise<WeightedVectors> {
  const blocks = symmetricBlocks(matrix, dim);
  const inputs = blocks.map(
    (block): Bordered => ({
      d: submatrix(matrix, dim, block),
      b: new Float64Array(0),
      short: block.rows.length,
      long: 0,
    }),
  );
  return solve(
    inputs,
    blocks.map((block) => block.rows),
    dim,
    ctx,
  );
}

/** Eigenvectors of [[D, Bᵀ],[B, 0]]; the long side never enters the dense problem. */
export async function borderedEigenvectors(
  { d, b, short, long }: Bordered,
  ctx: JobContext,
): Promise<WeightedVectors> {
  // D with a full diagonal above B: the rows of D then belong with their own columns.
  const stacked = new Float64Array((short + long) * short);
  stacked.set(d);
  stacked.set(b, short * short);
  for (let i = 0; i < short; i++) stacked[i * short + i] = 1;
  const inputs: Bordered[] = [];
  const places: Int32Array[] = [];
  for (const block of matrixBlocks(stacked, short + long, short)) {
    const rows = block.rows.filter((i) => i >= short);
    const cols = block.cols;
    inputs.push({
      d: submatrix(d, short, { rows: cols, cols }),
      b: submatrix(b, short, { rows: rows.map((i) => i - short), cols }),
      short: cols.length,
      long: rows.length,
    });
    places.push(Int32Array.from([...cols, ...rows]));
  }
  return solve(inputs, places, short + long, ctx);
}

/** Solves all blocks, merges them in ascending order and applies the cluster rule across all of them. */
async function solve(
  inputs: readonly Bordered[],
  places: readonly Int32Array[],
  dim: number,
  ctx: JobContext,
): Promise<WeightedVectors> {
  ctx.report('eigenvectors', 0, inputs.length);
  const solved = await ctx.map(eigenTask, inputs);
  ctx.report('eigenvectors', inputs.length, inputs.length);
  const all = solved.flatMap(({ weights }, block) => Array.from(weights, (w, i) => ({ w, i, block })));
  // Stable: equal values stay in block order.
  all.sort((x, y) => x.w - y.w);
  const vectors = new Float64Array(all.length * dim);
  all.forEach(({ i, block }, t) => {
    const place = places[block]!;
    const row = solved[block]!.vectors.subarray(i * place.length, (i + 1) * place.length);
    place.forEach((at, j) => {
      vectors[t * dim + at] = row[j]!;
    });
  });
  return canonicalVectors(
    Float64Array.from(all, ({ w }) => w),
    vectors,
    dim,
  );
}

import type { Mu, Sector } from '../hamiltonian/operators';
import type { JobContext } from '../job';
import { symmetricEigenAsync } from '../linalg';
import { canonicalVectors } from './clusters';
import { sectorLayout } from './elements';
import type { BlockPart, SquareFactors } from './factors';
import { planeSpectra } from './spectra';

/** Weights below this are zero whatever the threshold, hartree. */
export const ZERO_WEIGHT = 1e-13;

/** Weighted vectors before their spectra are known. */
export interface WeightedVectors {
  readonly weights: Float64Array;
  /** One unit row a weight. */
  readonly vectors: Float64Array;
}

/**
 * Eigenvectors of a dense symmetric block of the super-matrix, degenerate levels by the cluster rule.
 *
 * @param lift - maps the solved coordinates to those of the sector, where the block was reduced first.
 */
export async function eigenvectors(
  matrix: Float64Array,
  dim: number,
  ctx: JobContext,
  lift: (vectors: Float64Array, count: number) => { vectors: Float64Array; dim: number } = (vectors) => ({
    vectors,
    dim,
  }),
): Promise<WeightedVectors> {
  const eigen = await symmetricEigenAsync(matrix, dim, ctx);
  const kept: number[] = [];
  for (let i = 0; i < dim; i++) if (Math.abs(eigen.values[i]!) > ZERO_WEIGHT) kept.push(i);
  const values = Float64Array.from(kept, (i) => eigen.values[i]!);
  const solved = new Float64Array(kept.length * dim);
  kept.forEach((from, to) => {
    solved.set(eigen.vectors.subarray(from * dim, (from + 1) * dim), to * dim);
  });
  const lifted = lift(solved, kept.length);
  // After the lift: the pivots of the rule are elements of the sector, not of the reduction.
  return canonicalVectors(values, lifted.vectors, lifted.dim);
}

/** Scales rows to unit norm and moves the squared norm into the weight. */
export function normalised(columns: Float64Array, count: number, dim: number): WeightedVectors {
  const weights = new Float64Array(count);
  const vectors = Float64Array.from(columns.subarray(0, count * dim));
  for (let t = 0; t < count; t++) {
    let sum = 0;
    for (let i = t * dim; i < (t + 1) * dim; i++) sum += vectors[i]! * vectors[i]!;
    weights[t] = sum;
    const scale = sum > 0 ? 1 / Math.sqrt(sum) : 0;
    for (let i = t * dim; i < (t + 1) * dim; i++) vectors[i]! *= scale;
  }
  return { weights, vectors };
}

/** A block of factors with the spectra of its planes. */
export async function squareFactors(
  part: BlockPart,
  sector: Sector,
  planes: readonly Mu[],
  n: number,
  { weights, vectors }: WeightedVectors,
  ctx: JobContext,
): Promise<SquareFactors> {
  const { dim } = sectorLayout(sector, planes, n);
  const count = weights.length;
  const spectra = await planeSpectra(sector, planes, n, vectors, count, ctx);
  return { kind: 'squares', part, sector, n, planes, dim, count, weights, vectors, spectra };
}

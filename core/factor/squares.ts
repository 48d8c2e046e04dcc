import type { Mu, Sector } from '../hamiltonian';
import type { JobContext } from '../job';
import type { WeightedVectors } from './eigenvectors';
import { sectorLayout } from './elements';
import type { BlockPart, SquareFactors } from './factors';
import { planeSpectra } from './spectra';

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

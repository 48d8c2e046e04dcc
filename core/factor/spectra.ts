import type { Mu, Sector } from '../hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs } from '../integrals/integral-set';
import type { JobContext, Task } from '../job';
import { antisymmetricNormsBatch, symmetricEigenvaluesBatch } from '../linalg';
import { planeInto, sectorLayout } from './elements';

/** Factors in one piece of parallel work: large enough to amortise the copy, small enough to be stopped. */
const CHUNK = 64;

interface SpectraInput {
  readonly n: number;
  readonly symmetric: boolean;
  readonly count: number;
  /** count rows of pair coordinates. */
  readonly vectors: Float64Array;
}

/** Eigenvalues of a batch of symmetric planes, or a_j of antisymmetric ones. */
export const spectraTask: Task<SpectraInput, Float64Array> = {
  name: 'factor.spectra',
  async run({ n, symmetric, count, vectors }, ctx) {
    await ctx.checkpoint();
    const length = symmetric ? numSymmetricPairs(n) : numAntisymmetricPairs(n);
    const matrices = new Float64Array(count * n * n);
    for (let t = 0; t < count; t++) planeInto(matrices, t * n * n, vectors, t * length, n, symmetric);
    return symmetric
      ? symmetricEigenvaluesBatch(matrices, count, n)
      : antisymmetricNormsBatch(matrices, count, n);
  },
};

/** Spectra of `count` planes given as rows of pair coordinates; width n or ⌊n/2⌋. */
export async function pairSpectra(
  n: number,
  symmetric: boolean,
  vectors: Float64Array,
  count: number,
  ctx: JobContext,
): Promise<Float64Array> {
  const length = symmetric ? numSymmetricPairs(n) : numAntisymmetricPairs(n);
  const inputs: SpectraInput[] = [];
  for (let from = 0; from < count; from += CHUNK) {
    const to = Math.min(count, from + CHUNK);
    const rows = vectors.slice(from * length, to * length);
    inputs.push({ n, symmetric, count: to - from, vectors: rows });
  }
  const width = symmetric ? n : n >> 1;
  const out = new Float64Array(count * width);
  let at = 0;
  for (const values of await ctx.map(spectraTask, inputs)) {
    out.set(values, at);
    at += values.length;
  }
  return out;
}

/** Spectra of all planes of square factors, in the layout of `SquareFactors.spectra`. */
export async function planeSpectra(
  sector: Sector,
  planes: readonly Mu[],
  n: number,
  vectors: Float64Array,
  count: number,
  ctx: JobContext,
): Promise<Float64Array> {
  const layout = sectorLayout(sector, planes, n);
  const out = new Float64Array(count * layout.spectrumWidth);
  for (const slot of layout.slots) {
    const rows = new Float64Array(count * slot.length);
    for (let t = 0; t < count; t++) {
      const from = t * layout.dim + slot.offset;
      rows.set(vectors.subarray(from, from + slot.length), t * slot.length);
    }
    const values = await pairSpectra(n, slot.symmetric, rows, count, ctx);
    for (let t = 0; t < count; t++) {
      const row = values.subarray(t * slot.spectrumLength, (t + 1) * slot.spectrumLength);
      out.set(row, t * layout.spectrumWidth + slot.spectrumOffset);
    }
  }
  return out;
}

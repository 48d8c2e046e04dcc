import type { SpinorHamiltonian } from '../hamiltonian';
import type { JobContext, Task } from '../job';
import { hermitianEigenvaluesBatch, multiply } from '../linalg';
import { choleskyFactors } from './coulomb';
import { eigenvectors, type WeightedVectors } from './eigenvectors';
import type { Factorisation, Grouping, SpinorFactors } from './factors';
import { kramersPhases, tensorInGauge, vectorsFromGauge } from './kramers-phases';
import { lcuNorms, spinorOneNorms } from './one-norms';
import { selectFactors } from './select';
import { hermitianInto, spinorSuperMatrix } from './spinor-elements';
import { type Combination, expand, project, reversalBasis } from './time-reversal';
import { chooseKept } from './truncate';

/** Coupling of the two sectors up to this part of the largest element is loss of digits in the file. */
const DECOUPLED = 1e-7;
/** Remainder accepted from Cholesky, relative to the trace: files of other programs leave small integrals out. */
const FILE_NOISE = 1e-8;

/**
 * Factors of a complex spinor Hamiltonian: the Hermitian super-matrix over pairs PQ in an orthonormal Hermitian
 * basis, split by time reversal where the file's spinors are Kramers pairs.
 *
 * `joint`: eigenvectors of each sector. `separate`: raw pivoted-Cholesky columns of each sector, or its eigenvectors
 * where it is indefinite (Breit interaction); a spinor file has no physical parts to keep apart.
 */
export async function spinorFactorisation(
  h: SpinorHamiltonian,
  grouping: Grouping,
  threshold: number,
  ctx: JobContext,
): Promise<Factorisation> {
  const m = h.spinors;
  const dim = m * m;
  const phases = m % 2 === 0 ? kramersPhases(h) : new Float64Array(m);
  const { matrix, defect } = spinorSuperMatrix(tensorInGauge(h, phases));
  const notes: string[] = [];
  let largest = 0;
  for (const x of matrix) largest = Math.max(largest, Math.abs(x));
  const basis = m % 2 === 0 ? reversalBasis(m) : null;
  const coupling = basis ? project(matrix, dim, basis.even, basis.odd) : null;
  let worst = 0;
  let square = 0;
  for (const x of coupling ?? []) {
    worst = Math.max(worst, Math.abs(x));
    square += x * x;
  }
  const decoupled = coupling !== null && worst <= DECOUPLED * largest;
  if (!decoupled) notes.push('time reversal could not be used: factors mix even and odd parts');
  const everything = Array.from(
    { length: dim },
    (_, i): Combination => ({ first: i, second: -1, a: 1, b: 0 }),
  );
  const sectors: [SpinorFactors['part'], readonly Combination[]][] =
    basis && decoupled
      ? [
          ['even', basis.even],
          ['odd', basis.odd],
        ]
      : [['mixed', everything]];
  const blocks: SpinorFactors[] = [];
  const left = Math.sqrt((decoupled ? 2 * square : 0) + (defect * dim) ** 2);
  for (const [part, combinations] of sectors) {
    const size = combinations.length;
    const sector = project(matrix, dim, combinations, combinations);
    const found = await sectorFactors(sector, size, grouping, ctx);
    const noise = found.weights.every((w) => Math.abs(w) <= DECOUPLED * largest);
    if (grouping === 'separate' && !found.semidefinite && !noise) {
      notes.push(
        `the ${part} part of the two-electron tensor is indefinite: eigenvectors instead of Cholesky columns`,
      );
    }
    const count = found.weights.length;
    const vectors = vectorsFromGauge(expand(found.vectors, count, combinations, dim), count, m, phases);
    blocks.push(await withSpectra(part, m, { weights: found.weights, vectors }, ctx));
  }
  return { grouping, notes, ...truncateSpinor(blocks, m, threshold, left) };
}

async function sectorFactors(
  sector: Float64Array,
  size: number,
  grouping: Grouping,
  ctx: JobContext,
): Promise<WeightedVectors & { readonly semidefinite: boolean }> {
  if (grouping === 'separate') {
    let trace = 0;
    for (let i = 0; i < size; i++) trace += sector[i * size + i]!;
    // Below the noise pivots are meaningless and would amplify it: what is left then takes its eigenvectors.
    const columns = await choleskyFactors(sector, size, FILE_NOISE * trace, FILE_NOISE, ctx);
    if (columns) {
      const { raw, weights, vectors } = columns;
      const sum = multiply(raw, raw, size, weights.length, size, { transposeA: true });
      const rest = await eigenvectors(
        sector.map((x, i) => x - sum[i]!),
        size,
        ctx,
      );
      return {
        weights: Float64Array.of(...weights, ...rest.weights),
        vectors: Float64Array.from([...vectors, ...rest.vectors]),
        semidefinite: true,
      };
    }
  }
  return { ...(await eigenvectors(sector, size, ctx)), semidefinite: false };
}

interface HermitianInput {
  readonly m: number;
  readonly count: number;
  readonly vectors: Float64Array;
}

/** Eigenvalues of Hermitian matrices given by their coordinates. */
export const hermitianSpectraTask: Task<HermitianInput, Float64Array> = {
  name: 'factor.hermitian-spectra',
  async run({ m, count, vectors }, ctx) {
    await ctx.checkpoint();
    const re = new Float64Array(count * m * m);
    const im = new Float64Array(count * m * m);
    for (let t = 0; t < count; t++) hermitianInto(re, im, t * m * m, vectors, t * m * m, m);
    return hermitianEigenvaluesBatch(re, im, count, m);
  },
};

async function withSpectra(
  part: SpinorFactors['part'],
  m: number,
  { weights, vectors }: WeightedVectors,
  ctx: JobContext,
): Promise<SpinorFactors> {
  const count = weights.length;
  const inputs: HermitianInput[] = [];
  for (let from = 0; from < count; from += 32) {
    const to = Math.min(count, from + 32);
    inputs.push({ m, count: to - from, vectors: vectors.slice(from * m * m, to * m * m) });
  }
  const spectra = new Float64Array(count * m);
  let at = 0;
  for (const values of await ctx.map(hermitianSpectraTask, inputs)) {
    spectra.set(values, at);
    at += values.length;
  }
  return { kind: 'spinor-squares', part, spinors: m, count, weights, vectors, spectra };
}

/** As truncate.ts: the unitaries go, the one-body part wτL (M = L − τ, τ = ½ tr L) and the constant stay. */
function truncateSpinor(
  blocks: readonly SpinorFactors[],
  m: number,
  threshold: number,
  left: number,
): Pick<Factorisation, 'blocks' | 'residual' | 'foldedMeanField' | 'foldedConstant'> {
  const sizes = blocks.map((block) => block.weights.map(Math.abs));
  const { kept, dropped, sum } = chooseKept(blocks.map(lcuNorms), sizes, threshold);
  const re = new Float64Array(m * m);
  const im = new Float64Array(m * m);
  const lRe = new Float64Array(m * m);
  const lIm = new Float64Array(m * m);
  let constant = 0;
  let count = 0;
  let square = 0;
  blocks.forEach((block, b) => {
    const lambdas = spinorOneNorms(block);
    for (const t of dropped[b]!) {
      hermitianInto(lRe, lIm, 0, block.vectors, t * m * m, m);
      let tau = 0;
      for (let p = 0; p < m; p++) tau += lRe[p * m + p]! / 2;
      const w = block.weights[t]!;
      for (let i = 0; i < m * m; i++) {
        re[i]! += w * tau * lRe[i]!;
        im[i]! += w * tau * lIm[i]!;
      }
      constant += w * (0.25 * lambdas[t]! ** 2 - 0.5 * tau ** 2);
      // Triangle inequality: raw Cholesky columns are not orthogonal.
      square += Math.abs(w);
      count++;
    }
  });
  return {
    blocks: blocks.map((block, b) => selectFactors(block, kept[b]!)),
    // What the sector split left out has one-norm ≤ (m/4)·√rank·Frobenius, rank ≤ m².
    residual: {
      frobenius: square + left,
      oneNormBound: sum + 0.25 * m * m * left,
      dropped: count,
    },
    foldedMeanField: count > 0 ? { n: m, re, im } : null,
    foldedConstant: constant,
  };
}

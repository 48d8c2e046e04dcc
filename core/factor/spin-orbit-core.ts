import { otherOrbitBlock, type SpatialHamiltonian, sameOrbitBlock } from '../hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs } from '../integrals/integral-set';
import type { JobContext } from '../job';
import { householderQr, multiplyAsync, randomSource, transpose } from '../linalg';
import type { TripleFactors } from './factors';
import { pairSpectra } from './spectra';
import { svdTask } from './triples';

/**
 * The two-electron spin–orbit part in few common directions: w^k ≈ A C^k Bᵀ, A and B orthonormal and shared by the three
 * components, which stay so under every rotation of the spin axes. A stand-in for sets too large to be decomposed anew for
 * each rotation that is tried.
 */
export interface SpinOrbitCore {
  readonly n: number;
  readonly rank: number;
  readonly sameScale: number;
  readonly otherScale: number;
  /** rank × nanti and rank × npair, orthonormal rows. */
  readonly left: Float64Array;
  readonly right: Float64Array;
  /** 3 × rank × rank, hartree. */
  readonly cores: Float64Array;
  /** Part of Σ_k ‖w^k‖² that the directions hold. */
  readonly share: number;
}

/** Cores of the arrays that {@link spinOrbitTriples} decomposes. Randomised range finder with one power step. */
export async function spinOrbitCores(
  h: SpatialHamiltonian,
  rank: number,
  ctx: JobContext,
): Promise<SpinOrbitCore[]> {
  const spinOrbit = h.g.spinOrbit;
  if (!spinOrbit) return [];
  const same = (k: 1 | 2 | 3) => sameOrbitBlock(h.orbitals, h.g, k);
  if (!(spinOrbit.other instanceof Float64Array)) {
    return [await coreOf(h.orbitals, same, 1, spinOrbit.other.timesSame, rank, ctx)];
  }
  const other = (k: 1 | 2 | 3) => otherOrbitBlock(h.orbitals, h.g, k);
  return [await coreOf(h.orbitals, same, 1, 0, rank, ctx), await coreOf(h.orbitals, other, 0, 1, rank, ctx)];
}

async function coreOf(
  n: number,
  blockOf: (k: 1 | 2 | 3) => Float64Array,
  sameScale: number,
  otherScale: number,
  asked: number,
  ctx: JobContext,
): Promise<SpinOrbitCore> {
  const nanti = numAntisymmetricPairs(n);
  const npair = numSymmetricPairs(n);
  const rank = Math.min(asked, nanti);
  const planes = ([1, 2, 3] as const).map(blockOf);
  const flipped = planes.map((w) => transpose(w, nanti, npair));
  const right = await leading(planes, nanti, npair, rank, ctx);
  const left = await leading(flipped, npair, nanti, rank, ctx);
  const cores = new Float64Array(3 * rank * rank);
  let square = 0;
  for (const [k, w] of planes.entries()) {
    const half = await multiplyAsync(left, w, rank, nanti, npair, {}, ctx);
    cores.set(
      await multiplyAsync(half, right, rank, npair, rank, { transposeB: true }, ctx),
      k * rank * rank,
    );
    square += sumOfSquares(w);
  }
  return { n, rank, sameScale, otherScale, left, right, cores, share: sumOfSquares(cores) / square };
}

/** rank orthonormal rows of length cols that hold most of the stacked rows × cols planes. */
async function leading(
  planes: readonly Float64Array[],
  rows: number,
  cols: number,
  rank: number,
  ctx: JobContext,
): Promise<Float64Array> {
  const random = randomSource(1);
  let basis: Float64Array = Float64Array.from({ length: cols * rank }, random);
  for (let power = 0; power < 2; power++) {
    const sum = new Float64Array(cols * rank);
    for (const w of planes) {
      const half = await multiplyAsync(w, basis, rows, cols, rank, {}, ctx);
      const whole = await multiplyAsync(w, half, cols, rows, rank, { transposeA: true }, ctx);
      for (let i = 0; i < sum.length; i++) sum[i]! += whole[i]!;
    }
    basis = (await householderQr(sum, cols, rank, ctx)).q;
  }
  return transpose(basis, cols, rank);
}

/** Triples of the core seen with turned spin axes, C'^l = Σ_k R_kl C^k. */
export async function triplesOfCore(
  core: SpinOrbitCore,
  rotation: ArrayLike<number>,
  ctx: JobContext,
): Promise<TripleFactors> {
  const { n, rank, sameScale, otherScale, left, right } = core;
  const nanti = numAntisymmetricPairs(n);
  const npair = numSymmetricPairs(n);
  const size = rank * rank;
  const inputs = [0, 1, 2].map((l) => {
    const a = new Float64Array(size);
    for (let k = 0; k < 3; k++) {
      for (let i = 0; i < size; i++) a[i]! += rotation[3 * k + l]! * core.cores[k * size + i]!;
    }
    return { rows: rank, cols: rank, a };
  });
  const solved = await ctx.map(svdTask, inputs);
  const count = solved.reduce((sum, svd) => sum + svd.rank, 0);
  const component = new Uint8Array(count);
  const strengths = new Float64Array(count);
  const antisymmetric = new Float64Array(count * nanti);
  const symmetric = new Float64Array(count * npair);
  let at = 0;
  for (const [k, svd] of solved.entries()) {
    component.fill(k + 1, at, at + svd.rank);
    strengths.set(svd.s.subarray(0, svd.rank), at);
    antisymmetric.set(await multiplyAsync(svd.u, left, svd.rank, rank, nanti, {}, ctx), at * nanti);
    symmetric.set(await multiplyAsync(svd.v, right, svd.rank, rank, npair, {}, ctx), at * npair);
    at += svd.rank;
  }
  return {
    kind: 'triples',
    part: 'spin-orbit',
    n,
    count,
    component,
    strengths,
    sameScale,
    otherScale,
    antisymmetric,
    symmetric,
    antisymmetricNorms: await pairSpectra(n, false, antisymmetric, count, ctx),
    symmetricValues: await pairSpectra(n, true, symmetric, count, ctx),
  };
}

function sumOfSquares(values: Float64Array): number {
  let sum = 0;
  for (const x of values) sum += x * x;
  return sum;
}

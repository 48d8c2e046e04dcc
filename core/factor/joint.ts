import {
  coulombBlock,
  type Mu,
  otherOrbitBlock,
  type SpatialHamiltonian,
  sameOrbitBlock,
  sectorDimension,
  sectorMatrix,
} from '../hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs } from '../integrals/integral-set';
import { InputError, type JobContext } from '../job';
import { householderQr, multiply, transpose } from '../linalg';
import type { SquareFactors } from './factors';
import { eigenvectors, squareFactors } from './squares';

/** Largest dense eigenproblem of the joint grouping. */
export const MAX_SECTOR = 3000;

const ALL: readonly Mu[] = [0, 1, 2, 3];

/** Dimensions of the dense eigenproblems that joint factors take, after the reduction. 0 = nothing to solve. */
export function jointDimensions(h: SpatialHamiltonian): { readonly even: number; readonly odd: number } {
  const n = h.orbitals;
  const npair = numSymmetricPairs(n);
  const nanti = numAntisymmetricPairs(n);
  const { charge, spinOrbit, spinSpin } = h.g;
  const even = spinOrbit ? npair + Math.min(npair, 3 * nanti) : charge ? npair : 0;
  const odd = spinSpin ? 3 * npair + (spinOrbit ? nanti : 0) : spinOrbit ? 2 * nanti : 0;
  return { even, odd };
}

/** Why the joint grouping is left out for this Hamiltonian, or null where it can be had. */
export function jointRefusal(h: SpatialHamiltonian): string | null {
  const { even, odd } = jointDimensions(h);
  const worst = Math.max(even, odd);
  if (worst <= MAX_SECTOR) return null;
  const sector = odd > even ? 'odd' : 'even';
  const cause = sector === 'odd' && h.g.spinSpin ? ' with spin–spin terms' : '';
  return `the ${sector} sector of ${h.orbitals} orbitals${cause} has dimension ${worst}, above ${MAX_SECTOR}`;
}

/**
 * Joint factors: eigenvectors of the even and of the odd time-reversal sector of the super-matrix.
 *
 * Without spin–spin the sectors are [[C, W],[Wᵀ, 0]] and [[0, X],[Xᵀ, 0]]; their rank is at most twice the short side,
 * so a QR of the long side comes first and the vectors are lifted back.
 *
 * @throws InputError `sector-too-large`
 */
export async function jointFactors(h: SpatialHamiltonian, ctx: JobContext): Promise<SquareFactors[]> {
  const refusal = jointRefusal(h);
  if (refusal) {
    throw new InputError({
      code: 'sector-too-large',
      where: 'grouping "joint"',
      found: refusal,
      expected: `sectors of dimension ≤ ${MAX_SECTOR} after reduction`,
      mend: 'Use the separate grouping, fewer orbitals, or leave out the spin–spin terms.',
    });
  }
  const blocks: SquareFactors[] = [];
  const { charge, spinOrbit, spinSpin } = h.g;
  if (charge || spinOrbit) blocks.push(await evenFactors(h, ctx));
  if (spinOrbit || spinSpin) blocks.push(await oddFactors(h, ctx));
  return blocks;
}

async function evenFactors(h: SpatialHamiltonian, ctx: JobContext): Promise<SquareFactors> {
  const n = h.orbitals;
  const npair = numSymmetricPairs(n);
  const c = coulombBlock(n, h.g);
  if (!h.g.spinOrbit) {
    return squareFactors('even', 'even', [0], n, await eigenvectors(c, npair, ctx), ctx);
  }
  const size = numAntisymmetricPairs(n) * npair;
  const w = new Float64Array(3 * size);
  for (const k of [1, 2, 3] as const) w.set(sameOrbitBlock(n, h.g, k), (k - 1) * size);
  const solved = await offDiagonalEigenvectors(c, w, npair, 3 * numAntisymmetricPairs(n), ctx);
  return squareFactors('even', 'even', ALL, n, solved, ctx);
}

async function oddFactors(h: SpatialHamiltonian, ctx: JobContext): Promise<SquareFactors> {
  const n = h.orbitals;
  const { spinOrbit, spinSpin } = h.g;
  if (spinSpin) {
    const planes = spinOrbit ? ALL : ([1, 2, 3] as const);
    const matrix = sectorMatrix(n, h.g, 'odd', planes);
    const solved = await eigenvectors(matrix, sectorDimension(n, 'odd', planes), ctx);
    return squareFactors('odd', 'odd', planes, n, solved, ctx);
  }
  const nanti = numAntisymmetricPairs(n);
  const npair = numSymmetricPairs(n);
  const size = nanti * npair;
  const x = new Float64Array(3 * size);
  for (const k of [1, 2, 3] as const)
    x.set(transpose(otherOrbitBlock(n, h.g, k), nanti, npair), (k - 1) * size);
  const zero = new Float64Array(nanti * nanti);
  return squareFactors(
    'odd',
    'odd',
    ALL,
    n,
    await offDiagonalEigenvectors(zero, x, nanti, 3 * npair, ctx),
    ctx,
  );
}

/**
 * Eigenvectors of [[D, Bᵀ],[B, 0]], D short×short and B long×short, in the coordinates (short, long). With
 * B = QR the problem shrinks to [[D, Rᵀ],[R, 0]] where long > short.
 */
async function offDiagonalEigenvectors(
  d: Float64Array,
  b: Float64Array,
  short: number,
  long: number,
  ctx: JobContext,
) {
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
  return eigenvectors(matrix, dim, ctx, (vectors, count) => {
    if (!qr) return { vectors, dim };
    const tails = new Float64Array(count * size);
    for (let t = 0; t < count; t++) {
      tails.set(vectors.subarray(t * dim + short, (t + 1) * dim), t * size);
    }
    const lifted = multiply(tails, qr.q, count, size, long, { transposeB: true });
    const full = short + long;
    const out = new Float64Array(count * full);
    for (let t = 0; t < count; t++) {
      out.set(vectors.subarray(t * dim, t * dim + short), t * full);
      out.set(lifted.subarray(t * long, (t + 1) * long), t * full + short);
    }
    return { vectors: out, dim: full };
  });
}

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
import { transpose } from '../linalg';
import { borderedEigenvectors, eigenvectors } from './eigenvectors';
import type { SquareFactors } from './factors';
import { squareFactors } from './squares';

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
  const solved = await borderedEigenvectors(
    { d: c, b: w, short: npair, long: 3 * numAntisymmetricPairs(n) },
    ctx,
  );
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
  const d = new Float64Array(nanti * nanti);
  const solved = await borderedEigenvectors({ d, b: x, short: nanti, long: 3 * npair }, ctx);
  return squareFactors('odd', 'odd', ALL, n, solved, ctx);
}

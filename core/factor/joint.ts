import type { SpatialHamiltonian } from '../hamiltonian/hamiltonian';
import type { Mu } from '../hamiltonian/operators';
import { numAntisymmetricPairs, numSymmetricPairs } from '../integrals/integral-set';
import { InputError, type JobContext } from '../job';
import { householderQr, multiply, transpose } from '../linalg';
import type { SquareFactors } from './factors';
import { eigenvectors, squareFactors } from './squares';
import { chargeMatrix, otherOrbit, spinOrbitMatrix, spinSpinMatrix } from './super-matrix';

/** Largest dense eigenproblem of the joint grouping. */
export const MAX_SECTOR = 3000;

const EVEN: readonly Mu[] = [0, 1, 2, 3];

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
  const c = h.g.charge ? chargeMatrix(n, h.g.charge) : new Float64Array(npair * npair);
  if (!h.g.spinOrbit) {
    return squareFactors('even', 'even', [0], n, await eigenvectors(c, npair, ctx), ctx);
  }
  // Rows: the three antisymmetric planes; columns: symmetric pairs.
  const long = 3 * numAntisymmetricPairs(n);
  const w = stacked(h, h.g.spinOrbit.same, 1);
  const solved = await offDiagonalEigenvectors(c, w, npair, long, ctx);
  return squareFactors('even', 'even', EVEN, n, solved, ctx);
}

async function oddFactors(h: SpatialHamiltonian, ctx: JobContext): Promise<SquareFactors> {
  const n = h.orbitals;
  const nanti = numAntisymmetricPairs(n);
  const long = 3 * numSymmetricPairs(n);
  const { spinOrbit, spinSpin } = h.g;
  if (!spinSpin) {
    const x = oddCoupling(h);
    const zero = new Float64Array(nanti * nanti);
    return squareFactors(
      'odd',
      'odd',
      EVEN,
      n,
      await offDiagonalEigenvectors(zero, x, nanti, long, ctx),
      ctx,
    );
  }
  const ss = spinSpinMatrix(n, spinSpin);
  if (!spinOrbit) {
    return squareFactors('odd', 'odd', [1, 2, 3], n, await eigenvectors(ss, long, ctx), ctx);
  }
  const x = oddCoupling(h);
  const dim = nanti + long;
  const full = new Float64Array(dim * dim);
  for (let i = 0; i < long; i++) {
    full.set(ss.subarray(i * long, (i + 1) * long), (nanti + i) * dim + nanti);
    for (let j = 0; j < nanti; j++) {
      full[(nanti + i) * dim + j] = x[i * nanti + j]!;
      full[j * dim + nanti + i] = x[i * nanti + j]!;
    }
  }
  return squareFactors('odd', 'odd', EVEN, n, await eigenvectors(full, dim, ctx), ctx);
}

/** Three components of a spin–orbit array one below the other: 3nanti × npair. */
function stacked(h: SpatialHamiltonian, w: Float64Array, scale: number): Float64Array {
  const size = numAntisymmetricPairs(h.orbitals) * numSymmetricPairs(h.orbitals);
  const out = new Float64Array(3 * size);
  for (let k = 0; k < 3; k++) out.set(spinOrbitMatrix(h.orbitals, w, k), k * size);
  if (scale !== 1) for (let i = 0; i < out.length; i++) out[i]! *= scale;
  return out;
}

/** Rows: the symmetric pairs of x, y, z; columns: antisymmetric pairs. 3npair × nanti. */
function oddCoupling(h: SpatialHamiltonian): Float64Array {
  const n = h.orbitals;
  const nanti = numAntisymmetricPairs(n);
  const npair = numSymmetricPairs(n);
  const { w, scale } = otherOrbit(h.g.spinOrbit!);
  const rows = stacked(h, w, scale);
  const out = new Float64Array(rows.length);
  for (let k = 0; k < 3; k++) {
    const from = k * nanti * npair;
    out.set(transpose(rows.subarray(from, from + nanti * npair), nanti, npair), from);
  }
  return out;
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

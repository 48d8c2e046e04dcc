import {
  coulombBlock,
  type SpatialHamiltonian,
  type SpinHamiltonian,
  sectorDimension,
  sectorMatrix,
} from '../hamiltonian';
import { numSymmetricPairs } from '../integrals/integral-set';
import { InputError, type JobContext } from '../job';
import { chargeFactors } from './coulomb';
import { eigenvectors } from './eigenvectors';
import type { Factorisation, Grouping, SquareFactors, TripleFactors } from './factors';
import { jointFactors } from './joint';
import { spinorFactorisation } from './spinor';
import { squareFactors } from './squares';
import { spinOrbitTriples } from './triples';
import { type Remainder, truncate } from './truncate';

export interface FactoriseOptions {
  readonly grouping: Grouping;
  /** Largest sum of LCU norms that may be dropped, hartree, ≥ 0. @defaultValue 0 = keep all above 1e-13 Eh */
  readonly threshold?: number;
  /**
   * n numbers 0…2: the spin-averaged reference whose mean field replaces dropped spin–orbit factors.
   * @defaultValue 1 everywhere, the reference of the Majorana form
   */
  readonly occupations?: ArrayLike<number>;
  /** Separate grouping: spin–orbit triples and spin–spin factors are all kept, for {@link lightParts}. @defaultValue false */
  readonly keepSpinParts?: boolean;
  /**
   * Separate grouping: what truncation drops is chosen with the Coulomb factors, but these are left out of blocks, residual
   * and mean field, because something else stands for them. @defaultValue false
   */
  readonly withoutCoulomb?: boolean;
  /**
   * Separate grouping: eigenvectors of the charge part instead of Cholesky columns. They need fewer factors for the same
   * residual, the fewest in the Frobenius norm (Eckart and Young), but have larger nuclear norms: a start for mixing.
   * @defaultValue false
   */
  readonly principal?: boolean;
  /** Most factors of each block, whatever the threshold; null: no limit. @defaultValue null */
  readonly most?: number | null;
}

/** Cholesky may leave this part of the threshold; the rest is for whole factors. */
const CHOLESKY_SHARE = 0.01;

/**
 * Factors of the two-electron part: ½ Σ g T T = ½ Σ_t w_t (L^t)² (+ triples), in product form.
 *
 * `joint`: eigenvectors of each time-reversal sector. `separate`: raw pivoted-Cholesky columns of the charge part,
 * one SVD per Cartesian component of the two-electron spin–orbit part, eigenvectors of the spin–spin part. With `most` the
 * residual may exceed the threshold; it says by how much.
 *
 * @throws InputError `sector-too-large`, `bad-threshold`, `bad-occupations`.
 */
export async function factorise(
  hamiltonian: SpinHamiltonian,
  options: FactoriseOptions,
  ctx: JobContext,
): Promise<Factorisation> {
  const { grouping, threshold = 0 } = options;
  if (!(threshold >= 0 && Number.isFinite(threshold))) {
    throw new InputError({
      code: 'bad-threshold',
      where: '--threshold',
      found: `${threshold}`,
      expected: 'a number ≥ 0 in hartree',
      mend: 'Give 0 to keep everything.',
    });
  }
  if (hamiltonian.kind === 'spinor') return spinorFactorisation(hamiltonian, grouping, threshold, ctx);
  const occupations = checkOccupations(hamiltonian, options.occupations);
  const { blocks, notes, remainder } =
    grouping === 'joint'
      ? { blocks: await jointFactors(hamiltonian, ctx), notes: [], remainder: null }
      : await separateFactors(hamiltonian, threshold, options.principal ?? false, ctx);
  await ctx.checkpoint();
  const { keepSpinParts = false, withoutCoulomb = false, most = null } = options;
  const kept = await truncate(
    blocks,
    { n: hamiltonian.orbitals, threshold, occupations, remainder, keepSpinParts, withoutCoulomb, most },
    ctx,
  );
  const { oneNormBound } = kept.residual;
  const limited =
    most !== null && oneNormBound > threshold
      ? [
          `at most ${most} factors a block: what is left out is bounded by ${oneNormBound.toPrecision(3)} Eh, above the threshold`,
        ]
      : [];
  return { grouping, notes: [...notes, ...limited], ...kept };
}

async function separateFactors(
  h: SpatialHamiltonian,
  threshold: number,
  principal: boolean,
  ctx: JobContext,
) {
  const n = h.orbitals;
  const blocks: (SquareFactors | TripleFactors)[] = [];
  const notes: string[] = [];
  let remainder: Remainder | null = null;
  const { charge, spinSpin } = h.g;
  if (charge && principal) {
    const vectors = await eigenvectors(coulombBlock(n, h.g), numSymmetricPairs(n), ctx);
    blocks.push(await squareFactors('coulomb', 'even', [0], n, vectors, ctx));
  } else if (charge) {
    const factors = await chargeFactors(n, h.g, (4 * CHOLESKY_SHARE * threshold) / n, ctx);
    remainder = factors.remainder;
    if (!factors.semidefinite) {
      notes.push(
        'the charge part is indefinite (scalar relativistic terms subtract a contact interaction): eigenvectors instead of Cholesky columns',
      );
    }
    blocks.push(await squareFactors('coulomb', 'even', [0], n, factors, ctx));
  }
  blocks.push(...(await spinOrbitTriples(h, ctx)));
  if (spinSpin) {
    const planes = [1, 2, 3] as const;
    const matrix = sectorMatrix(n, h.g, 'odd', planes);
    const vectors = await eigenvectors(matrix, sectorDimension(n, 'odd', planes), ctx);
    blocks.push(await squareFactors('spin-spin', 'odd', planes, n, vectors, ctx));
  }
  return { blocks, notes, remainder };
}

function checkOccupations(h: SpatialHamiltonian, occupations?: ArrayLike<number>): ArrayLike<number> {
  if (!occupations) return new Float64Array(h.orbitals).fill(1);
  const list = Array.from(occupations);
  if (list.length === h.orbitals && list.every((x) => x >= 0 && x <= 2)) return occupations;
  throw new InputError({
    code: 'bad-occupations',
    where: 'reference occupations',
    found: `${list.length} numbers from ${Math.min(...list)} to ${Math.max(...list)}`,
    expected: `${h.orbitals} numbers 0…2`,
    mend: 'Give one occupation per orbital.',
  });
}

import type { SpatialHamiltonian } from '../../hamiltonian';
import { numSymmetricPairs } from '../../integrals/integral-set';
import { InputError, type JobContext } from '../../job';
import type {
  HypercontractedFactors,
  Hypercontraction,
  HypercontractionOptions,
  HypercontractionPoint,
} from './block';
import { fitTensor } from './fit';
import { hypercontractedLambda } from './one-body';
import { fitProblem } from './problem';
import { fitResidual } from './residual';
import { startingPoint } from './start';

/** Vectors for each orbital where the rank is chosen: from 5N to 6N λ falls by 2 % (20 orbitals) while tables grow by 44 %. */
const AUTO_RANK = 5;
/** Part of the residual target that the columns of the problem may leave out. */
const LEFT_OUT = 0.1;
/** Smallest residual target as a part of ‖g‖: below it the objective is rounding. */
const LEAST_TARGET = 1e-6;

/**
 * Fits the charge part of `h` by a tensor hypercontraction of the least λ within the residual target, together with a
 * symmetry shift ξ if asked for. What the fit leaves out becomes a mean field over the reference occupations.
 *
 * @remarks Depends on no other block: spin-dependent parts of h are neither read nor changed. For 50 orbitals at M = 6N
 *   about 50 ms a step and 300 MB. Nothing is drawn at random: the same input gives the same result.
 * @throws InputError `no-charge-part`, `bad-rank`, `bad-residual-target`, `bad-emphasis`, `bad-occupations`, `bad-start`.
 */
export async function hypercontract(
  h: SpatialHamiltonian,
  options: HypercontractionOptions,
  ctx: JobContext,
): Promise<Hypercontraction> {
  const n = h.orbitals;
  const { shift = true, emphasis = 0.5, residualTarget = 0.001 * n, start } = options;
  const rank = checkedRank(options.rank ?? 'auto', n);
  const occupations = options.occupations ?? new Float64Array(n).fill(h.electrons / n);
  check(h, occupations, residualTarget, emphasis, start, shift);
  const problem = await fitProblem(h, occupations, { emphasis, leftOut: LEFT_OUT * residualTarget }, ctx);
  const target = Math.max(residualTarget, LEAST_TARGET * Math.sqrt(problem.square));
  const first = start ?? (await startingPoint(problem, rank, shift, ctx));
  const found = await fitTensor(problem, first, target, options, ctx);
  const { vectors, zeta, count } = found.point;
  const block: HypercontractedFactors = {
    kind: 'hypercontracted',
    part: 'coulomb',
    n,
    count,
    vectors,
    zeta,
    shift: found.point.shift,
  };
  const left = await fitResidual(h, block, problem, ctx);
  const notes: string[] = [];
  if (!found.reached) {
    notes.push(
      `the fit with ${count} vectors left a residual of ${found.residual.toPrecision(2)} Eh instead of ${target.toPrecision(2)} Eh: more vectors or steps would help`,
    );
  }
  return {
    block,
    ...left,
    lambda: hypercontractedLambda(h, block, left),
    steps: found.steps,
    notes,
  };
}

function checkedRank(rank: number | 'auto', n: number): number {
  const most = numSymmetricPairs(n);
  if (rank === 'auto') return Math.min(most, AUTO_RANK * n);
  if (Number.isInteger(rank) && rank >= 1 && rank <= most) return rank;
  throw new InputError({
    code: 'bad-rank',
    where: 'rank of the hypercontraction',
    found: `${rank}`,
    expected: `a whole number 1…${most}, the orbital pairs`,
    mend: 'Some five vectors for each orbital are usual.',
  });
}

function check(
  h: SpatialHamiltonian,
  occupations: ArrayLike<number>,
  target: number,
  emphasis: number,
  start: HypercontractionPoint | undefined,
  shift: boolean,
): void {
  const n = h.orbitals;
  const refuse = (code: string, where: string, found: string, expected: string, mend: string): never => {
    throw new InputError({ code, where, found, expected, mend });
  };
  if (!h.g.charge) {
    const terms = h.terms.join(', ');
    refuse(
      'no-charge-part',
      'two-electron part',
      `terms ${terms}`,
      'a charge part',
      'Choose sf among the terms.',
    );
  }
  if (!(target > 0 && Number.isFinite(target))) {
    refuse(
      'bad-residual-target',
      'residual target',
      `${target}`,
      'a number > 0 in hartree',
      'Give e.g. 0.05.',
    );
  }
  if (!(emphasis >= 0 && emphasis <= 2)) {
    refuse('bad-emphasis', 'emphasis', `${emphasis}`, 'a number 0…2', 'Give 0 to count all orbitals alike.');
  }
  const list = Array.from(occupations);
  if (list.length !== n || !list.every((x) => x >= 0 && x <= 2)) {
    const found = `${list.length} numbers from ${Math.min(...list)} to ${Math.max(...list)}`;
    refuse(
      'bad-occupations',
      'reference occupations',
      found,
      `${n} numbers 0…2`,
      'Give one for each orbital.',
    );
  }
  if (!start) return;
  const { count, vectors, zeta, shift: xi } = start;
  const fits =
    vectors.length === count * n && zeta.length === count * count && (xi ? xi.length === n * n : true);
  if (!fits || (xi !== null) !== shift) {
    const found = `${count} vectors ${xi ? 'with' : 'without'} a shift`;
    refuse(
      'bad-start',
      'starting point',
      found,
      `${shift ? 'a' : 'no'} shift over ${n} orbitals`,
      'Start anew.',
    );
  }
}

import type { SpinHamiltonian } from '../../hamiltonian';
import type { JobContext } from '../../job';
import { minimiseSmooth } from '../../linalg';
import type { FactorBlock, Factorisation } from '../factors';
import { forEachFactor, ShiftObjective } from './objective';
import { type ShiftForm, type ShiftProblem, shiftProblems } from './problem';

export interface ShiftOptions {
  /** The form whose λ is to be least. @defaultValue 'triplet' */
  readonly form?: ShiftForm;
  /** Steps at each smoothing width. @defaultValue 150 */
  readonly steps?: number;
  /** Ends where λ is proved to be within this part of its least value. @defaultValue 1e-5 */
  readonly gap?: number;
}

/** A factorisation with optimised shifts, and what is known about them. Hartree. */
export interface OptimisedShifts {
  readonly factorisation: Factorisation;
  /** λ of everything that the shifts act on, in the form asked for. */
  readonly lambda: number;
  /** The same with medians. */
  readonly medianLambda: number;
  /** Proved lower bound of λ over all shifts of these factors. */
  readonly lowerBound: number;
}

/** A shift that equals an eigenvalue saves a row. How far one may move to the next, in sizes of a spectrum, and what that may cost. */
const REACHES = [Number.POSITIVE_INFINITY, 0.1, 0.03, 0.01, 3e-3, 1e-3, 3e-4, 1e-4];
const FLAT = 1e-6;
const ROUNDING = 1e-14;
/** Each width starts where the one before ended. */
const WIDTHS = [0.3, 0.1, 0.03, 0.01, 3e-3, 1e-3, 3e-4, 1e-4];

/**
 * Shifts of all factors that have a charge side, chosen together so that λ of the triplet form is least:
 *
 *     ¼ Σ |w| (Λ_t(c_t))² + Σ |sameScale| s Λ_X Λ_Y(c_t) + ‖κ⁰(c) − c₁‖_* + Σ_k ‖κ^k(c)‖_*,
 *
 * a convex function, because κ is linear in c. It is smoothed by √(x² + δ²) for |x| and δ lowered step by step. The start
 * is the medians (or the shifts that the factors carry, where they are better), so the result is never worse. The
 * derivative of the smoothed nuclear norms is a feasible point of the dual problem, which proves how much is left to win.
 *
 * For η = N electrons in N orbitals κ does not depend on the shifts and medians are best. Last, shifts move to
 * eigenvalues next to them where that costs no λ: an eigenvalue that becomes zero takes no row.
 */
export async function optimiseShifts(
  h: SpinHamiltonian,
  given: Factorisation,
  options: ShiftOptions,
  ctx: JobContext,
): Promise<OptimisedShifts> {
  const problems = await shiftProblems(h, given, options.form ?? 'triplet', ctx);
  const shifts = given.blocks.map((block) => new Float64Array(block.count));
  const sum = { lambda: 0, medianLambda: 0, lowerBound: 0 };
  for (const [i, problem] of problems.entries()) {
    const found = await solve(problem, carried(problem, given.blocks), options, ctx, (done) =>
      ctx.report('optimising shifts', i * WIDTHS.length + done, problems.length * WIDTHS.length),
    );
    forEachFactor(problem, (group, item, at) => {
      shifts[group.block]![group.items[item]!] = found.shifts[at]!;
    });
    sum.lambda += found.lambda;
    sum.medianLambda += found.medianLambda;
    sum.lowerBound += found.lowerBound;
  }
  const touched = new Set(problems.flatMap(({ groups }) => groups.map(({ block }) => block)));
  const blocks = given.blocks.map((block, b) => (touched.has(b) ? { ...block, shifts: shifts[b]! } : block));
  return { factorisation: { ...given, blocks }, ...sum };
}

/** Shifts that the factors carry already, or null. */
function carried(problem: ShiftProblem, blocks: readonly FactorBlock[]): Float64Array | null {
  const found = Float64Array.from(
    problem.groups.flatMap(({ block, items }) => {
      const own = blocks[block]!;
      const shifts = 'shifts' in own ? own.shifts : undefined;
      return items.map((t) => shifts?.[t] ?? Number.NaN);
    }),
  );
  return found.some(Number.isNaN) ? null : found;
}

async function solve(
  problem: ShiftProblem,
  start: Float64Array | null,
  { steps = 150, gap = 1e-5 }: ShiftOptions,
  ctx: JobContext,
  report: (done: number) => void,
) {
  const objective = new ShiftObjective(problem);
  const first = objective.at(objective.medians, WIDTHS.at(-1)!);
  let best = { shifts: objective.medians, lambda: first.exact };
  let { lowerBound } = first;
  const keep = (shifts: Float64Array, width: number) => {
    const found = objective.at(shifts, width);
    if (found.exact < best.lambda) best = { shifts: shifts.slice(), lambda: found.exact };
    lowerBound = Math.max(lowerBound, found.lowerBound);
  };
  if (start) keep(start, WIDTHS.at(-1)!);
  for (const [stage, width] of WIDTHS.entries()) {
    report(stage);
    if (best.lambda - lowerBound <= gap * best.lambda) break;
    const stiffness = objective.stiffness(best.shifts, width);
    const scaled = best.shifts.map((c, i) => c * stiffness[i]!);
    const found = await minimiseSmooth(
      (y) => {
        const { value, gradient } = objective.at(
          y.map((c, i) => c / stiffness[i]!),
          width,
        );
        return { value, gradient: gradient.map((x, i) => x / stiffness[i]!) };
      },
      scaled,
      { steps, settled: 0.01 * width * width, checkpoint: () => ctx.checkpoint() },
    );
    keep(
      found.x.map((c, i) => c / stiffness[i]!),
      width,
    );
  }
  for (const reach of REACHES) {
    const shifts = objective.snapped(best.shifts, reach);
    const { exact } = objective.at(shifts, WIDTHS.at(-1)!);
    if (exact > best.lambda * (1 + FLAT) || exact > first.exact * (1 + ROUNDING)) continue;
    best = { shifts, lambda: exact };
    break;
  }
  report(WIDTHS.length);
  return { ...best, medianLambda: first.exact, lowerBound };
}

import type { JobContext } from '../../job';
import { minimiseSmooth } from '../../linalg';
import type { HypercontractionOptions, HypercontractionPoint } from './block';
import { squaredDifference } from './least-squares';
import { smoothOneNorm } from './one-norm';
import type { FitProblem } from './problem';
import { combine, pack, unpack } from './variables';

/** Smoothing widths of ζ in hartree, each stage starting from the last; eigenvalues of κ⁰ have ten times these. */
const WIDTHS = [3e-3, 1e-3, 3e-4, 1e-4, 3e-5, 1e-5];
const KAPPA_WIDTH = 10;
/** Of these, the first ones are passed over where a fit goes on from an earlier one. */
const KNOWN = 2;
/** The weight of the residual is set so that it comes out at this part of the target. */
const AIM = 0.97;
/** λ falls like a power of the residual, from which the first weight is guessed: λ ∝ residual^−FLATNESS. */
const FLATNESS = 0.05;
/** Stages after the last width that may be needed to bring the residual below its target, and their length. */
const SETTLING = 8;
const SETTLING_STEPS = 40;
/** How a stage descends: evaluations are dear, and no stage need settle further than the next width asks. */
const DESCENT = { memory: 20, settled: 1e-5, search: 'backtracking', firstLength: 0.01 } as const;
/** Steps between two looks at λ as it is without smoothing. */
const LOOK = 20;

export interface Fit {
  readonly point: HypercontractionPoint;
  /** λ of the charge part and κ⁰, and the residual of the columns, hartree. */
  readonly lambda: number;
  readonly residual: number;
  readonly steps: number;
  /** False where no point within the target was found; `point` then has the least residual seen. */
  readonly reached: boolean;
}

/**
 * Least λ whose residual is at most `target`: L-BFGS over vectors, ζ and ξ together on λ_δ + weight · ½‖difference‖²,
 * with δ going down and the weight adjusted between stages. One-norm regularised fits of this kind: J. J. Goings et al., PNAS 119,
 * e2203533119 (2022), quoted from memory; schedule and common treatment of shift and mean field are our own.
 */
export async function fitTensor(
  problem: FitProblem,
  start: HypercontractionPoint,
  target: number,
  { steps = 1500, onBest, start: earlier }: Pick<HypercontractionOptions, 'steps' | 'onBest' | 'start'>,
  ctx: JobContext,
): Promise<Fit> {
  const { n } = problem;
  const { count } = start;
  const shifted = start.shift !== null;
  let x = pack(start);
  let best: Fit | null = null;
  let taken = 0;
  let counted = 0;

  const look = (point: HypercontractionPoint): Omit<Fit, 'steps'> => {
    const residual = Math.sqrt(2 * squaredDifference(problem, point).value);
    const lambda = smoothOneNorm(problem, point, { zeta: 0, kappa: 0 }).value;
    return { point, lambda, residual, reached: residual <= target };
  };
  const consider = (found: Omit<Fit, 'steps'>): void => {
    const better =
      !best ||
      (found.reached
        ? !best.reached || found.lambda < best.lambda
        : !best.reached && found.residual < best.residual);
    if (!better) return;
    best = { ...found, steps: taken };
    if (found.reached) onBest?.(found.point, found.lambda);
  };
  const stage = async (weight: number, width: number, most: number) => {
    const run = await minimiseSmooth(
      (at) => {
        const point = unpack(at, count, n, shifted);
        return combine(point, [
          { slope: squaredDifference(problem, point), scale: weight },
          { slope: smoothOneNorm(problem, point, { zeta: width, kappa: KAPPA_WIDTH * width }), scale: 1 },
        ]);
      },
      x,
      {
        ...DESCENT,
        steps: most,
        checkpoint: () => ctx.checkpoint(),
        onStep: (at, step) => {
          counted++;
          ctx.report('hypercontraction', Math.min(counted, steps), steps);
          if (step % LOOK === 0) consider(look(unpack(at, count, n, shifted)));
        },
      },
    );
    x = run.x;
    taken += run.steps;
    const found = look(unpack(x, count, n, shifted));
    consider(found);
    return found;
  };

  let found = look(start);
  consider(found);
  let weight = (FLATNESS * found.lambda) / target ** 2;
  const widths = WIDTHS.slice(earlier ? KNOWN : 0);
  const most = Math.ceil(steps / widths.length);
  for (const width of widths) {
    found = await stage(weight, width, most);
    weight *= Math.max(0.25, Math.min(4, (found.residual / (AIM * target)) ** 2));
  }
  for (let i = 0; i < SETTLING && !found.reached; i++) {
    found = await stage(weight, WIDTHS.at(-1)!, SETTLING_STEPS);
    weight *= Math.max(1, Math.min(4, (found.residual / (AIM * target)) ** 2));
  }
  ctx.report('hypercontraction', steps, steps);
  return { ...best!, steps: taken };
}

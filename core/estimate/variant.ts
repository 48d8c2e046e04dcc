import {
  bitsFor,
  type LookupPolicy,
  type Subroutine,
  sparseStep,
  sparseStepByFormula,
  spinorStep,
  spinorStepByFormula,
  tripletStep,
  tripletStepByFormula,
} from '../circuit';
import type { EncodingShape, LambdaByPart, VariantName } from '../encode';
import { InputError } from '../job';
import { type BitChoices, chooseBits } from './bits';
import type { PhysicalEstimate, StepCost, SurfaceCodeAssumptions } from './estimate';
import { type Peak, peakOf } from './lifetimes';
import { confidenceFactor, meanRuns, walkSteps } from './phase-estimation';
import { stepCost } from './step-cost';
import { surfaceCode } from './surface-code';
import { type ErrorBudget, errorBudget, type TargetRequest } from './target';

export interface EstimateOptions {
  /** ℵ. @defaultValue auto */
  readonly keepBits: number | 'auto';
  /** β. @defaultValue auto */
  readonly rotationBits: number | 'auto';
  /** k of the largest table, a power of two. @defaultValue auto: fewest Toffoli under the cap */
  readonly lookupBlock: number | 'auto';
  /** Logical qubits that look-ups may not exceed. @defaultValue null */
  readonly qubitsMax: number | null;
  /** null: no physical figures. @defaultValue null */
  readonly surfaceCode: SurfaceCodeAssumptions | null;
}

export const ESTIMATE_DEFAULTS: EstimateOptions = {
  keepBits: 'auto',
  rotationBits: 'auto',
  lookupBlock: 'auto',
  qubitsMax: null,
  surfaceCode: null,
};

/** What the costs of a variant depend on: sizes and λ, nothing else of the integrals. */
export interface EstimateInput {
  readonly shape: EncodingShape;
  readonly lambda: Pick<LambdaByPart, 'oneBody' | 'twoBody' | 'total'>;
  readonly variant: Pick<VariantName, 'spin' | 'lookup'>;
  readonly target: TargetRequest;
  readonly options?: Partial<EstimateOptions>;
}

/**
 * Everything that follows from λ and the sizes. Counts are whole numbers, exact up to 2^53 ≈ 9·10^15; products above
 * that are rounded to the nearest double.
 */
export interface CostEstimate {
  readonly budget: ErrorBudget;
  readonly bits: { readonly keep: number; readonly rotation: number };
  /** How the bits were chosen, with the rigorous and the estimated figure. */
  readonly bitChoices: BitChoices;
  readonly step: StepCost;
  readonly logicalQubits: number;
  /** The moment at which they are all alive. */
  readonly peak: Peak;
  /** True where even the smallest look-ups need more qubits than `qubitsMax`. */
  readonly overCap: boolean;
  /** Of one run at one level. */
  readonly walkSteps: number;
  /** walkSteps × step.toffoli: one run. */
  readonly totalToffoli: number;
  /** walkSteps × step.t: one run. */
  readonly totalT: number;
  /** Mean number of runs, Σ over levels of 1/overlap. */
  readonly repetitions: number;
  /** repetitions × totalToffoli, rounded to a whole number. */
  readonly campaignToffoli: number;
  /** Of one run; null where no machine was assumed. */
  readonly physical: PhysicalEstimate | null;
}

/** Costs of one variant by closed formulas: well below a millisecond, so that it follows every change of the target. */
export function estimateVariant(input: EstimateInput): CostEstimate {
  const options = checkOptions({ ...ESTIMATE_DEFAULTS, ...input.options });
  const { shape, lambda, target } = input;
  const budget = errorBudget(target, confidenceFactor(target.accuracy));
  const bitChoices = chooseBits(shape, lambda, budget, {
    keep: options.keepBits,
    rotation: options.rotationBits,
  });
  const bits = { keep: bitChoices.keep.used, rotation: bitChoices.rotation.used };
  const steps = walkSteps(lambda.total, budget.walk);
  const policy: LookupPolicy = {
    mode: input.variant.lookup,
    block: options.lookupBlock,
    qubitCap: options.qubitsMax,
  };
  const tree = recipeOf(shape, input.variant.spin, bits, bitsFor(steps + 1), policy);
  const run = runCost(tree, steps, options.surfaceCode);
  const repetitions = meanRuns(target.levels);
  return {
    budget,
    bits,
    bitChoices,
    ...run,
    overCap: options.qubitsMax !== null && run.logicalQubits > options.qubitsMax,
    repetitions,
    campaignToffoli: Math.round(repetitions * run.totalToffoli),
  };
}

/** The figures of one run, in the words of {@link CostEstimate}. */
export type RunCost = Pick<
  CostEstimate,
  'step' | 'peak' | 'logicalQubits' | 'walkSteps' | 'totalToffoli' | 'totalT' | 'physical'
>;

/** Costs of one run of `steps` walk steps of a recipe. */
export function runCost(tree: Subroutine, steps: number, machine: SurfaceCodeAssumptions | null): RunCost {
  const step = stepCost(tree);
  const peak = peakOf(tree);
  const total = { toffoli: steps * step.toffoli, t: steps * step.t };
  return {
    step,
    peak,
    logicalQubits: peak.qubits,
    walkSteps: steps,
    totalToffoli: total.toffoli,
    totalT: total.t,
    physical: machine === null ? null : surfaceCode(peak.qubits, total, machine),
  };
}

function checkOptions(options: EstimateOptions): EstimateOptions {
  const { keepBits, rotationBits, lookupBlock, qubitsMax } = options;
  const refuse = (where: string, found: unknown, expected: string) =>
    new InputError({
      code: 'estimate-option',
      where,
      found: String(found),
      expected,
      mend: 'Correct the option, or leave it to auto.',
    });
  for (const [name, bits] of [
    ['keep bits', keepBits],
    ['rotation bits', rotationBits],
  ] as const) {
    if (bits !== 'auto' && !(Number.isInteger(bits) && bits >= 4 && bits <= 60)) {
      throw refuse(name, bits, 'a whole number from 4 to 60, or auto');
    }
  }
  if (lookupBlock !== 'auto' && !(lookupBlock >= 1 && Number.isInteger(Math.log2(lookupBlock)))) {
    throw refuse('look-up block', lookupBlock, 'a power of two, or auto');
  }
  if (qubitsMax !== null && !(Number.isInteger(qubitsMax) && qubitsMax > 0)) {
    throw refuse('qubit cap', qubitsMax, 'a positive whole number, or none');
  }
  return options;
}

function recipeOf(
  shape: EncodingShape,
  spin: VariantName['spin'],
  bits: { readonly keep: number; readonly rotation: number },
  phaseBits: number,
  policy: LookupPolicy,
): Subroutine {
  const widths = { keepBits: bits.keep, rotationBits: bits.rotation, phaseBits };
  switch (shape.kind) {
    case 'triplet':
      return shape.items
        ? tripletStep(shape.items, spin, widths, policy).recipe
        : tripletStepByFormula(shape, spin, widths, policy);
    case 'spinor':
      return shape.spinors
        ? spinorStep(shape.spinors, widths, policy).recipe
        : spinorStepByFormula(shape, widths, policy);
    case 'sparse':
      return shape.terms
        ? sparseStep(shape.terms, widths, policy).recipe
        : sparseStepByFormula(
            {
              orbitals: shape.orbitals,
              coefficients: shape.rows,
              spinDependent: shape.spinDependent,
              keepBits: bits.keep,
              phaseBits,
            },
            policy,
          );
  }
}

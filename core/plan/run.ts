import {
  DEFAULT_VARIANTS,
  type Encoding,
  type EncodingShape,
  formatVariant,
  parseVariant,
  type VariantName,
} from '../encode';
import type { TargetRequest } from '../estimate';
import { heldTerms } from '../hamiltonian';
import type { IntegralSet, SelectableTerm } from '../integrals';
import { Cancelled, InputError, type JobContext, type Problem } from '../job';
import { formatSignificant, fromHartree, toHartree } from '../units';
import type { VariantEstimate } from './comparison';
import { costOf, targetOf, toleranceOf } from './costing';
import { EnergyEstimates, type TruncationEnergy } from './energy-estimate';
import { Floors } from './floors';
import { LowStateShifts } from './low-state-shifts';
import { LowStatesFinder } from './low-states';
import type { MixingStates } from './mixing-states';
import { recommend } from './recommendation';
import type { ComparisonRequest, ComparisonRun, VariantOutcome } from './request';
import { requestedEncodings } from './requested-encodings';
import { hamiltonianOf, occupationsOf } from './system';
import { termSummaries } from './term-summaries';

/** What a run tells while it goes on. */
export interface ComparisonEvents {
  readonly onStart?: (name: string) => void;
  /** The sizes of the variant's encoding: with λ all that its costs depend on, so that they can be counted anew. */
  readonly onEncoded?: (name: string, shape: EncodingShape) => void;
  readonly onOutcome?: (outcome: VariantOutcome) => void;
}

/** A floor explains λ and should not take longer than λ: sectors above this are bracketed. */
const MAX_DETERMINANTS = 13_000;

/** Complex spinors have no spin apart from space: spinor factors only. */
const SPINOR_VARIANTS: readonly VariantName[] = [
  'spinor/joint/index/median/clean',
  'spinor/separate/index/median/clean',
  'spinor/joint/index/none/clean',
].map(parseVariant);

/** The variants compared where none are named. */
export function defaultVariants(set: IntegralSet): readonly VariantName[] {
  return set.kind === 'spinor' ? SPINOR_VARIANTS : DEFAULT_VARIANTS;
}

/**
 * Compares variants on one set of integrals, one after the other in the order asked for. A variant that fails
 * carries its problem and the others go on.
 *
 * @param states - where the mixing of factors is kept, so that it can be taken up again
 * @throws InputError where the request does not fit the integrals at all; Cancelled
 */
export async function runComparison(
  set: IntegralSet,
  request: ComparisonRequest,
  context: JobContext,
  events: ComparisonEvents = {},
  states: MixingStates | null = null,
): Promise<ComparisonRun> {
  const hamiltonian = hamiltonianOf(set, request);
  const hartree = toHartree(request.target.value, request.target.unit);
  const target = targetOf(request);
  const terms = hamiltonian.kind === 'spatial' ? hamiltonian.terms : heldTerms(set);
  const occupations = occupationsOf(set, request);
  const finder = occupations ? new LowStatesFinder(occupations) : null;
  const encodings = requestedEncodings(set, hamiltonian, request, { states, finder });
  const floors = new Floors(hamiltonian, MAX_DETERMINANTS);
  const energies = new EnergyEstimates(hamiltonian, occupations);
  const lowStateShifts = new LowStateShifts(finder);

  const variants = request.variants ?? defaultVariants(set);
  const outcomes: VariantOutcome[] = [];
  for (const [index, variant] of variants.entries()) {
    const name = formatVariant(variant);
    const named = labelled(context, `${index + 1} of ${variants.length}, ${name}`);
    await named.checkpoint();
    events.onStart?.(name);
    const reason = encodings.refusal(variant);
    const outcome: VariantOutcome = reason
      ? { status: 'left-out', name, reason }
      : await attempt(name, async () => {
          const encoding = await encodings.of(variant, named);
          events.onEncoded?.(name, encoding.shape);
          const factorisation = await encodings.factorisationOf(variant, named);
          const frame = await encodings.frameOf(variant, named);
          const energy = await energies.of(encoding, factorisation, named, frame);
          const shift = await shiftOf(energy, lowStateShifts, named);
          const estimate = await estimateOf(
            encoding,
            { energy, shift },
            variant,
            terms,
            request,
            target,
            floors,
            named,
          );
          const remarks = [
            ...(typeof energy === 'string' ? [`no estimate of the energy error: ${energy}`] : []),
            ...remarkOn(variant, shift, toleranceOf(target)),
          ];
          return { estimate, notes: [...(encoding.notes ?? []), ...remarks] };
        });
    outcomes.push(outcome);
    events.onOutcome?.(outcome);
  }

  const frames = encodings.records();
  const estimates = outcomes.flatMap((outcome) => (outcome.status === 'done' ? [outcome.estimate] : []));
  return {
    comparison: {
      schema: 'spinwright-comparison/1',
      hamiltonian: {
        orbitals: hamiltonian.kind === 'spatial' ? hamiltonian.orbitals : hamiltonian.spinors / 2,
        electrons: hamiltonian.electrons,
        constant: hamiltonian.constant,
        terms: await termSummaries(set, terms, labelled(context, 'terms'), request),
      },
      target: { value: request.target.value, unit: request.target.unit, hartree },
      variants: estimates,
      ...(frames.length > 0 ? { frames } : {}),
      recommendation: recommend(estimates, request.qubitsMax),
    },
    outcomes,
  };
}

async function attempt(
  name: string,
  work: () => Promise<{ readonly estimate: VariantEstimate; readonly notes: readonly string[] }>,
): Promise<VariantOutcome> {
  try {
    return { status: 'done', name, ...(await work()) };
  } catch (error) {
    if (error instanceof Cancelled) throw error;
    // A wrong file was named: that is a fault of the request, not of the variant.
    if (error instanceof InputError && error.toProblem().code === 'other-mixing-state') throw error;
    return { status: 'failed', name, problem: problemOf(error, name) };
  }
}

function problemOf(error: unknown, where: string): Problem {
  if (error instanceof InputError) return error.toProblem();
  const found = error instanceof Error ? error.message : String(error);
  return {
    code: 'bug',
    where,
    found,
    expected: 'no error',
    mend: 'This is a fault of the program; please report it.',
  };
}

/** The same job, its stages named after what they belong to. */
function labelled(context: JobContext, label: string): JobContext {
  return {
    seed: context.seed,
    report: (stage, done, total) => context.report(`${label}: ${stage}`, done, total),
    checkpoint: () => context.checkpoint(),
    map: (task, inputs) => context.map(task, inputs),
  };
}

/** 0 where nothing was dropped. */
async function shiftOf(
  energy: TruncationEnergy | string | null,
  shifts: LowStateShifts,
  context: JobContext,
): Promise<number | null> {
  if (energy === null) return 0;
  return typeof energy === 'string' ? null : shifts.of(energy, context);
}

/** Spin-dependent parts are light: a threshold in terms of λ may drop what the question is about. */
function remarkOn(variant: VariantName, shift: number | null, tolerance: number): string[] {
  if (shift === null || shift <= tolerance) return [];
  const [found, allowed] = [shift, tolerance].map((x) => formatSignificant(fromHartree(x, 'cm-1'), 2));
  const fitted = variant.factorisation === 'hypercontracted';
  return [
    `${fitted ? 'the fit of the charge part' : 'truncation'} moves low levels against each other, or their couplings, by ${found} cm⁻¹ to first order, ${fitted ? 'where the budget has' : 'and a lower threshold mends that: the budget has'} ${allowed} cm⁻¹`,
  ];
}

async function estimateOf(
  encoding: Encoding,
  { energy, shift }: { energy: TruncationEnergy | string | null; shift: number | null },
  variant: VariantName,
  terms: readonly SelectableTerm[],
  request: ComparisonRequest,
  target: TargetRequest,
  floors: Floors,
  context: JobContext,
): Promise<VariantEstimate> {
  const { lambda, shape, residual, constant } = encoding;
  const cost = costOf(encoding, variant, target, request);
  return {
    name: formatVariant(variant),
    terms,
    factorisation: variant.factorisation,
    grouping: variant.grouping,
    spinInSelect: variant.spin,
    shift: variant.shift,
    lookup: variant.lookup,
    lambda: { oneBody: lambda.oneBody, twoBody: lambda.twoBody, total: lambda.total, parts: lambda.parts },
    spectralFloor: await floors.of(variant.shift === 'none' ? 'all' : 'eta', lambda.total, context),
    constant,
    factors: shape.factors,
    rows: shape.rows + shape.oneBodyRows,
    residual: {
      frobenius: residual.frobenius,
      oneNormBound: residual.oneNormBound,
      energyEstimate: figureOf(energy),
      lowStates: shift,
    },
    bits: cost.bits,
    step: cost.step,
    logicalQubits: cost.logicalQubits,
    walkSteps: cost.walkSteps,
    totalToffoli: cost.totalToffoli,
    repetitions: cost.repetitions,
    campaignToffoli: cost.campaignToffoli,
    physical: cost.physical,
  };
}

/** First and second order together; 0 where nothing was dropped, null where there is no estimate. */
function figureOf(energy: TruncationEnergy | string | null): number | null {
  if (energy === null) return 0;
  return typeof energy === 'string' ? null : energy.firstOrder + energy.secondOrder;
}

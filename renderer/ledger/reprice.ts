import { type EncodingShape, type FactorisationAxis, parseVariant } from '../../core/encode';
import {
  costOverTargets,
  type EstimateInput,
  estimateVariant,
  type SurfaceCodeAssumptions,
  surfaceCode,
  targetRequest,
} from '../../core/estimate';
import { InputError } from '../../core/job';
import type { VariantEstimate } from '../../core/plan/comparison';
import { GIVEN_FRAMES, judgeOf } from '../../core/plan/frame';
import { toHartree } from '../../core/units';
import type { Ask } from '../engine/protocol';

/** Cost input of a reckoned variant for a question: closed formulas only, so that it can follow every key stroke. */
function inputFor(e: VariantEstimate, shape: EncodingShape, ask: Ask): EstimateInput {
  const target = targetRequest(toHartree(ask.target.value, ask.target.unit), { meaning: ask.target.meaning });
  return {
    shape,
    lambda: e.lambda,
    variant: parseVariant(e.name),
    target: {
      ...target,
      levels: target.levels.map((level, i) => ({ ...level, overlap: ask.overlaps[i] ?? level.overlap })),
    },
    options: { keepBits: ask.bits, rotationBits: ask.bits, qubitsMax: ask.qubitsMax, surfaceCode: null },
  };
}

/** The same encoding's costs for another question. */
export function recount(e: VariantEstimate, shape: EncodingShape, ask: Ask): VariantEstimate {
  const cost = estimateVariant(inputFor(e, shape, ask));
  return {
    ...e,
    bits: cost.bits,
    step: cost.step,
    logicalQubits: cost.logicalQubits,
    walkSteps: cost.walkSteps,
    totalToffoli: cost.totalToffoli,
    repetitions: cost.repetitions,
    campaignToffoli: cost.campaignToffoli,
  };
}

/** The estimate on another assumed machine; without physical figures where the machine cannot run it. */
export function onMachine(e: VariantEstimate, machine: SurfaceCodeAssumptions): VariantEstimate {
  const work = { toffoli: e.totalToffoli, t: e.walkSteps * e.step.t };
  try {
    return { ...e, physical: surfaceCode(e.logicalQubits, work, machine) };
  } catch (error) {
    if (error instanceof InputError) return { ...e, physical: null };
    throw error;
  }
}

const THINNED: readonly FactorisationAxis[] = ['mixed', 'hypercontracted'];

/**
 * True where figures reckoned for `then` can be counted anew for `now` from the sizes alone. A target of another size
 * changes how much is left out where that is left to the budget, and with it the encoding: always of the
 * spin-dependent parts of a mixed or hypercontracted one.
 */
export function canRecount(name: string, then: Ask, now: Ask): boolean {
  const variant = parseVariant(name);
  const thinned = THINNED.includes(variant.factorisation);
  const same = (a: unknown, b: unknown) => JSON.stringify(a) === JSON.stringify(b);
  const encoding = (ask: Ask) => [
    ask.terms,
    ask.electrons,
    ask.occupations,
    ask.threshold,
    ask.seed,
    judgeOf(variant, ask.frames ?? GIVEN_FRAMES),
    ask.threshold === 'auto' || thinned ? toHartree(ask.target.value, ask.target.unit) : null,
  ];
  return same(encoding(then), encoding(now));
}

/** Toffoli of one run over other targets with the encoding as it is. About half a millisecond a target. */
export function overTargets(
  e: VariantEstimate,
  shape: EncodingShape,
  ask: Ask,
  hartrees: readonly number[],
): { readonly hartree: number; readonly toffoli: number }[] {
  return costOverTargets(inputFor(e, shape, ask), hartrees).map(({ hartree, totalToffoli }) => ({
    hartree,
    toffoli: totalToffoli,
  }));
}

import { STEP_PARTS } from '../circuit/recipe';
import type { Comparison, VariantEstimate } from './comparison';
import type { FrameRecord } from './frame';

/**
 * The comparison as `compare --json` prints it: the keys of the published schema in their order, nothing else.
 * The trees of subroutines are left out, since they are many times larger than the rest.
 */
export function comparisonDocument({
  schema,
  hamiltonian,
  target,
  variants,
  frames,
  recommendation,
}: Comparison): object {
  const { orbitals, electrons, constant, terms } = hamiltonian;
  return {
    schema,
    hamiltonian: {
      orbitals,
      electrons,
      constant,
      terms: terms.map(({ name, oneNorm, maxAbs }) => ({ name, oneNorm, maxAbs })),
    },
    target: { value: target.value, unit: target.unit, hartree: target.hartree },
    variants: variants.map(variantDocument),
    ...(frames ? { frames: frames.map(frameDocument) } : {}),
    recommendation: { variant: recommendation.variant, reasons: recommendation.reasons },
  };
}

/** A frame in the order of the schema. */
export function frameDocument(frame: FrameRecord): object {
  const { kind, variants, judgedBy, turned, rotation, lambda, rows, evaluations } = frame;
  return {
    kind,
    variants,
    judgedBy,
    turned,
    rotation,
    lambda: { before: lambda.before, after: lambda.after },
    rows: { before: rows.before, after: rows.after },
    evaluations,
  };
}

/** One variant's estimate in the order of the schema. */
export function variantDocument(v: VariantEstimate): object {
  const { oneBody, twoBody, total, parts } = v.lambda;
  const { value, kind, sector, low, high } = v.spectralFloor;
  const { frobenius, oneNormBound, energyEstimate, lowStates } = v.residual;
  return {
    name: v.name,
    terms: v.terms,
    factorisation: v.factorisation,
    grouping: v.grouping,
    spinInSelect: v.spinInSelect,
    shift: v.shift,
    lookup: v.lookup,
    lambda: { oneBody, twoBody, total, parts },
    spectralFloor: { value, kind, sector, low, high },
    constant: v.constant,
    factors: v.factors,
    rows: v.rows,
    residual: { frobenius, oneNormBound, energyEstimate, lowStates },
    bits: { keep: v.bits.keep, rotation: v.bits.rotation },
    step: {
      toffoli: v.step.toffoli,
      t: v.step.t,
      parts: Object.fromEntries(STEP_PARTS.map((part) => [part, v.step.parts[part]])),
    },
    logicalQubits: v.logicalQubits,
    walkSteps: v.walkSteps,
    totalToffoli: v.totalToffoli,
    repetitions: v.repetitions,
    campaignToffoli: v.campaignToffoli,
    physical: v.physical && {
      distance: v.physical.distance,
      qubits: v.physical.qubits,
      hours: v.physical.hours,
      assumptions: v.physical.assumptions,
    },
  };
}

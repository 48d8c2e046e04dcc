import type { Encoding, VariantName } from '../encode';
import {
  type CostEstimate,
  confidenceFactor,
  errorBudget,
  estimateVariant,
  SURFACE_CODE_DEFAULTS,
  type TargetRequest,
  targetRequest,
} from '../estimate';
import { InputError } from '../job';
import { toHartree } from '../units';
import type { ComparisonRequest } from './request';

/** The part of a request that costs depend on beside the encoding. */
export type CostRequest = Pick<ComparisonRequest, 'target' | 'overlaps' | 'threshold' | 'bits' | 'qubitsMax'>;

/** @throws InputError `overlaps` where their number does not fit what the target is of. */
export function targetOf({ target, overlaps }: CostRequest): TargetRequest {
  const bare = targetRequest(toHartree(target.value, target.unit), { meaning: target.meaning });
  if (overlaps.length !== bare.levels.length) {
    throw new InputError({
      code: 'overlaps',
      where: 'overlaps',
      found: `${overlaps.length} numbers`,
      expected: `${bare.levels.length}, one a level`,
      mend: 'Give one overlap for a level, two for a splitting.',
    });
  }
  return { ...bare, levels: bare.levels.map((level, i) => ({ ...level, overlap: overlaps[i]! })) };
}

/** What truncation may drop, hartree; `auto` is the error budget's share. */
export function thresholdOf({ threshold }: CostRequest, target: TargetRequest): number {
  return threshold === 'auto' ? toleranceOf(target) : threshold;
}

/** The error budget's share for truncation, hartree. */
export function toleranceOf(target: TargetRequest): number {
  return errorBudget(target, confidenceFactor(target.accuracy)).truncation;
}

/** The costs of an encoding under a request. */
export function costOf(
  { shape, lambda }: Pick<Encoding, 'shape' | 'lambda'>,
  variant: VariantName,
  target: TargetRequest,
  { bits, qubitsMax }: CostRequest,
): CostEstimate {
  return estimateVariant({
    shape,
    lambda,
    variant,
    target,
    options: { keepBits: bits, rotationBits: bits, qubitsMax, surfaceCode: SURFACE_CODE_DEFAULTS },
  });
}

import { formatVariant, type VariantName } from '../encode';
import type { SpinHamiltonian } from '../hamiltonian';
import type { IntegralSet } from '../integrals';
import { InputError } from '../job';
import { targetOf, thresholdOf, toleranceOf } from './costing';
import { Encodings } from './encodings';
import { FramedEncodings } from './framed-encodings';
import type { LowStatesFinder } from './low-states';
import type { MixingStates } from './mixing-states';
import type { ComparisonRequest } from './request';
import { occupationsOf } from './system';

/**
 * The encodings that a request asks for, whatever its variants.
 *
 * @param hamiltonian - of the request
 * @param shared - where the mixing of factors is kept, so that it can be taken up again; what finds low states
 */
export function requestedEncodings(
  set: IntegralSet,
  hamiltonian: SpinHamiltonian,
  request: Omit<ComparisonRequest, 'variants'>,
  shared: { readonly states?: MixingStates | null; readonly finder?: LowStatesFinder | null } = {},
): FramedEncodings {
  const target = targetOf(request);
  const threshold = thresholdOf(request, target);
  const occupations = occupationsOf(set, request);
  const { states = null, finder = null } = shared;
  const mixing = { factors: request.factors ?? 'auto', states } as const;
  return new FramedEncodings(
    hamiltonian,
    (h) => new Encodings(h, threshold, occupations, toleranceOf(target), mixing, finder),
    request.frames,
  );
}

/** @throws InputError `left-out` where the one variant that is wanted cannot be made */
export function refuseLeftOut(encodings: FramedEncodings, variant: VariantName): void {
  const reason = encodings.refusal(variant);
  if (reason === null) return;
  throw new InputError({
    code: 'left-out',
    where: `variant "${formatVariant(variant)}"`,
    found: reason,
    expected: 'an encoding that can be made',
    mend: 'Choose another grouping, e.g. separate.',
  });
}

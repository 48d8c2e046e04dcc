export {
  type BitChoice,
  type BitChoices,
  chooseBits,
  GUARD_BITS,
  type LambdaSplit,
  LEAST_BITS,
  roundingError,
} from './bits';
export type { PhysicalEstimate, StepCost, SurfaceCodeAssumptions } from './estimate';
export type { Reason, Reconciliation } from './explain';
export { type Peak, peakOf } from './lifetimes';
export {
  confidenceFactor,
  meanRuns,
  runsForConfidence,
  sineWindowConfidence,
  walkSteps,
} from './phase-estimation';
export { PUBLISHED_ROWS, PUBLISHED_TARGET, type PublishedRow, publishedRow } from './published';
export {
  blockFront,
  costOverCaps,
  costOverTargets,
  type FrontPoint,
  type TargetPoint,
} from './sensitivity';
export { stepCost } from './step-cost';
export { logicalError, patchQubits, SURFACE_CODE_DEFAULTS, surfaceCode } from './surface-code';
export {
  type Accuracy,
  DEFAULT_SPLIT,
  type ErrorBudget,
  type ErrorSplit,
  errorBudget,
  type Level,
  type TargetMeaning,
  type TargetRequest,
  targetRequest,
} from './target';
export {
  type CostEstimate,
  ESTIMATE_DEFAULTS,
  type EstimateInput,
  type EstimateOptions,
  estimateVariant,
  type RunCost,
  runCost,
} from './variant';
export { type WhatIfResult, whatif } from './whatif';
export { checkWhatIf, WHATIF_METHODS, type WhatIfMethod, type WhatIfOptions } from './whatif-options';

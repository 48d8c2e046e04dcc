export type { CircuitCount } from './circuit-count';
export {
  type CircuitRequest,
  type CircuitText,
  countCircuit,
  MOST_GATES,
  writeCircuit,
} from './circuit-run';
export type { Comparison, Target, TermSummary, VariantEstimate } from './comparison';
export { comparisonDocument, variantDocument } from './document';
export {
  checkTables,
  type EncodedTables,
  encodeTables,
  type FormProgram,
  readFrame,
  readTables,
  type StoredFrame,
  type TablesCheck,
  type TablesDocument,
  writeTables,
} from './encode-tables';
export type { Check, Evidence } from './evidence';
export { FRAME_CHOICES, type FrameChoice, type FrameRecord, type FrameRequest } from './frame';
export { type Inspection, inspectIntegrals } from './inspection';
export { type MixingOwner, type MixingRun, MixingStates } from './mixing-states';
export { recommend } from './recommendation';
export {
  type ComparisonRequest,
  type ComparisonRun,
  type FactorCount,
  MEANINGS,
  type Meaning,
  type VariantOutcome,
} from './request';
export { type ComparisonEvents, defaultVariants, runComparison } from './run';
export { hamiltonianOf, type OrbitalChoice, type SystemRequest } from './system';
export { findTask, TASK_NAMES } from './tasks';
export { termSummaries } from './term-summaries';
export { runVerification, type VerificationRequest } from './verification';
export { CIRCUIT_PARTS, type CircuitPart } from './walk-circuit';

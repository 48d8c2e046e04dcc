export { compressFactors } from './compressed';
export { type PlaneSlot, planeInto, type SectorLayout, sectorLayout, traceOfPairs } from './elements';
export { type FactoriseOptions, factorise } from './factorise';
export type {
  BlockPart,
  FactorBlock,
  Factorisation,
  Grouping,
  Residual,
  SpinorFactors,
  SquareFactors,
  TripleFactors,
} from './factors';
export { type HypercontractedOptions, hypercontractedFactorisation } from './hypercontracted';
export { approximateCharge, hypercontractedHamiltonian } from './hypercontraction/approximation';
export type {
  HypercontractedFactors,
  HypercontractedLambda,
  Hypercontraction,
  HypercontractionOptions,
  HypercontractionPoint,
} from './hypercontraction/block';
export { hypercontract } from './hypercontraction/hypercontract';
export {
  hypercontractedLambda,
  hypercontractedNorm,
  hypercontractedOneBody,
} from './hypercontraction/one-body';
export { jointDimensions, jointRefusal, MAX_SECTOR } from './joint';
export { kramersPhases } from './kramers-phases';
export { type LightParts, lightParts, type Thinned } from './light-parts';
export type { MixingState, MixingStore } from './mixing/state';
export { lcuNorms } from './one-norms';
export { type OptimisedShifts, optimiseShifts, type ShiftOptions } from './shifts/optimise';
export { type SpinOrbitCore, spinOrbitCores, triplesOfCore } from './spin-orbit-core';
export { hermitianInto } from './spinor-elements';
export { factorTasks } from './tasks';
export { spinOrbitTriples } from './triples';
export { heaviestApart, turnedFactors } from './turned';

export * from './formulas';
export { STEP_PARTS, type StepPart, type Subroutine } from './recipe';
export { type DoubleFactorised, doubleFactorisedStep } from './recipes/double-factorised';
export { type Hypercontracted, hypercontractedStep } from './recipes/hypercontracted';
export type { LookupPolicy } from './recipes/scope';
export { type SingleFactorised, singleFactorisedStep } from './recipes/single-factorised';
export { type SparseSizes, sparseStep } from './recipes/sparse';
export { spinorStep } from './recipes/spinor';
export { type FactorisedBits, tripletStep } from './recipes/triplet';

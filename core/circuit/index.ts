export * from './formulas';
export { type GateCount, GateCounter } from './gates/counter';
export { GATE_KINDS, type GateKind, type GateSink, Machine } from './gates/machine';
export { type Operation, within } from './gates/operation';
export type { Blocks } from './primitives/look-up';
export { prepareGradient } from './primitives/phase-gradient';
export { hadamards } from './primitives/reflection';
export { addressBits } from './primitives/unary-iteration';
export { type Census, takeCensus } from './qasm/census';
export { type QasmText, writeQasm } from './qasm/write';
export { STEP_PARTS, type StepPart, type Subroutine } from './recipe';
export { type DoubleFactorised, doubleFactorisedStep } from './recipes/double-factorised';
export { type Hypercontracted, hypercontractedStep } from './recipes/hypercontracted';
export type { LookupPolicy } from './recipes/scope';
export { type SingleFactorised, singleFactorisedStep } from './recipes/single-factorised';
export { type SparseSizes, sparseStep as sparseStepByFormula } from './recipes/sparse';
export { spinorStep as spinorStepByFormula } from './recipes/spinor';
export { type FactorisedBits, tripletStep as tripletStepByFormula } from './recipes/triplet';
export { SparseState } from './simulate/sparse-state';
export { type SparseBits, type SparseLayout, sparseLayout } from './sparse/layout';
export { sparseRecipe } from './sparse/recipe';
export { type SparseStep, sparseStep } from './sparse/step';
export {
  encodedProgram as encodedSparseProgram,
  type SparseTables,
  type Steering,
  sparseTables,
  steeringNumbers,
} from './sparse/tables';
export {
  preparedSize,
  sparseAncillas,
  sparseBlockEncoding,
  sparsePrepare,
  sparseWalkStep,
  sparseWires,
  withTerm,
} from './sparse/walk';
export { ANGLE_GROUPS, type AngleGroup, type SpinorLayout, spinorLayout } from './spinor/layout';
export { spinorRecipe } from './spinor/recipe';
export { roundedRow as roundedSpinorRow } from './spinor/rounded-row';
export { chooseSpinorTables, type SpinorStep, spinorStep } from './spinor/step';
export {
  encodedSpinorProgram,
  type SpinorBits,
  type SpinorTables,
  spinorSizesOf,
  spinorTables,
} from './spinor/tables';
export {
  type SpinorBlocks,
  type SpinorWires,
  spinorAncillas,
  spinorBlockEncoding,
  spinorWalkStep,
  spinorWires,
  withSpinorItem,
} from './spinor/walk';
export { type PrepareWires, prepareWires, type SquaresBlocks } from './squares/form';
export type { ItemFacts } from './squares/item-data';
export { outerBorrows, outerPrepare, outerScratch } from './squares/outer';
export { roundedVector } from './squares/rounded-vector';
export type { StepBits } from './squares/step';
export { drawing, type WeightTables } from './squares/tables';
export { chooseBlocks } from './triplet/blocks';
export type { SpinTreatment } from './triplet/product';
export { tripletRecipe } from './triplet/recipe';
export { sizesOf, type TripletLayout, tripletLayout } from './triplet/sizes';
export { type TripletStep, tripletStep } from './triplet/step';
export { encodedProgram, type TripletBits, type TripletTables, tripletTables } from './triplet/tables';
export {
  ancillaWires,
  blockEncoding as tripletBlockEncoding,
  tripletFacts,
  type WalkBlocks,
  walkStep,
  walkWires,
  withItemData,
} from './triplet/walk';

export { buildEncoding, type EncodingOptions } from './build';
export type { Encoding, EncodingShape, ItemSizes, LambdaByPart } from './encoding';
export { type OrbitalFrame, type OrbitalFrameOptions, orbitalFrame } from './frame/orbital';
export { rotationOf, type SpinFrame, spinFrame } from './frame/spin';
export type { RowFace, TripletItem, TripletProgram, TripletRow, VectorProducts } from './program';
export type { PairsKind, StringsKind, TermKind } from './sparse/kinds';
export { type SparseProgram, type TermSizes, termSizes } from './sparse/program';
export {
  type AxialParts,
  SPINOR_KINDS,
  type SpinorItem,
  type SpinorKind,
  type SpinorProgram,
  type SpinorRow,
  type SpinorSizes,
} from './spinor-program';
export { encodeTasks } from './tasks';
export {
  AXES,
  DEFAULT_VARIANTS,
  expandVariants,
  type FactorisationAxis,
  formatVariant,
  type GroupingAxis,
  type LookupAxis,
  parseVariant,
  type ShiftAxis,
  type SpinAxis,
  type VariantName,
} from './variant';

export { type PlaneSlot, planeInto, type SectorLayout, sectorLayout } from './elements';
export { type FactoriseOptions, factorise } from './factorise';
export {
  type BlockPart,
  type FactorBlock,
  type Factorisation,
  type Grouping,
  NO_RESIDUAL,
  type Residual,
  type SpinorFactors,
  type SquareFactors,
  type TripleFactors,
} from './factors';
export { jointDimensions, jointRefusal, MAX_SECTOR } from './joint';
export { lcuNorms } from './one-norms';
export { hermitianInto } from './spinor-elements';
export { factorTasks } from './tasks';

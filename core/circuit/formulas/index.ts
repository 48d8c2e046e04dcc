export { addition } from './addition';
export { type AliasTable, aliasToffoli, aliasWord } from './alias-sampling';
export { comparison } from './comparison';
export { controlledSwap } from './controlled-swap';
export { bitsFor, free, leaf, type PrimitiveCost, powerOfTwo } from './cost';
export { controlledFermionicSwaps } from './fermionic-swap';
export { logicalAnd } from './logical-and';
export { majoranaExchange } from './majorana-exchange';
export { phaseGradientRotation } from './phase-gradient-rotation';
export { reflection } from './reflection';
export {
  bestBlock,
  blockSizes,
  borrowedByLoad,
  erase,
  eraseToffoli,
  type LookupMode,
  load,
  loadToffoli,
  type Table,
} from './table-lookup';
export { unaryIteration } from './unary-iteration';
export {
  AMPLIFICATION_BITS,
  cheapestAmplificationBits,
  pairNumber,
  triangleSuperposition,
  uniformSuperposition,
  variableSuperposition,
} from './uniform-superposition';

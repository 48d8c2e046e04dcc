export { type OpenBlock, type SteeredBlock, simulatedBlock } from './block-encoding';
export { denseSector, type StateChange, type WatchedStates, watchedStates } from './couplings';
export {
  type DeterminantEnergies,
  determinantEnergies,
  extremeDeterminant,
} from './determinant-energy';
export { type DeterminantStatistics, determinantStatistics } from './determinant-statistics';
export { binomial, type SectorBasis, sectorBasis } from './determinants';
export { type RealisedRounding, realisedRounding } from './energy-error';
export { realisedSparseRounding } from './energy-error-sparse';
export { realisedSpinorRounding } from './energy-error-spinor';
export { type Form, fockMatrix, oneBodyFockMatrix, spinorFockMatrix } from './fock';
export { programOperator } from './program-operator';
export { REFERENCE_LEVELS, referenceEigenvalues } from './reference';
export { referenceDeterminant, type SecondOrder, secondOrder } from './second-order';
export { MAX_SECTOR_DIMENSION, type SectorMatrix, sectorMatrix } from './sector-matrix';
export { singleExcitations } from './single-excitations';
export { multiplySparse } from './sparse';
export { sparseBlock } from './sparse-block';
export { sparseProgramOperator } from './sparse-block-operator';
export type { SparseHermitian } from './sparse-hermitian';
export { type SpectralRange, type SpectralRangeOptions, spectralRange } from './spectral-range';
export { exactSpectrum, type Spectrum, type SpectrumOptions } from './spectrum';
export { spinorBlock } from './spinor-block';
export { spinorProgramOperator } from './spinor-block-operator';
export { tripletBlock } from './triplet-block';

export { type LevelShifts, levelShifts, windowOfProgram } from './window-levels';
export { windowOfSparseProgram } from './window-levels-sparse';
export { windowOfSpinorProgram } from './window-levels-spinor';

export { binomial, type SectorBasis, sectorBasis } from './determinants';
export { type Form, fockMatrix, oneBodyFockMatrix, spinorFockMatrix } from './fock';
export { REFERENCE_LEVELS, referenceEigenvalues } from './reference';
export { MAX_SECTOR_DIMENSION, type SectorMatrix, type SparseHermitian, sectorMatrix } from './sector-matrix';
export { multiplySparse } from './sparse';
export { exactSpectrum, type Spectrum, type SpectrumOptions } from './spectrum';

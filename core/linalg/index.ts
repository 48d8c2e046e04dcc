export { antisymmetricNormsBatch, antisymmetricPairs, type PairOptions } from './antisymmetric';
export {
  type CholeskyOptions,
  denseRows,
  type PivotedCholesky,
  pivotedCholesky,
  pivotedCholeskyAsync,
  type RowSource,
} from './cholesky';
export { type ClusteredBasis, clusterBasis, clusterTriples } from './cluster';
export { matrixExponential, polished } from './exponential';
export { GradientMemory } from './gradient-memory';
export {
  hermitianEigen,
  hermitianEigenAsync,
  hermitianEigenvalues,
  hermitianEigenvaluesAsync,
  hermitianEigenvaluesBatch,
} from './hermitian';
export type { SmoothValue } from './line-search';
export {
  extremalEigenvalues,
  type LowestEigenpairs,
  type LowestOptions,
  lowestEigenpairs,
  type Operator,
  type Planes,
} from './lowest';
export { type MultiplyOptions, multiply, multiplyAsync, transpose } from './multiply';
export { hermitianNuclearNorm, sumOfSizes, symmetricNuclearNorm } from './norms';
export { householderQr, type ThinQr } from './qr';
export { minimiseSmooth, type QuasiNewtonOptions, type QuasiNewtonResult } from './quasi-newton';
export { randomSource } from './random';
export { type SingularOptions, singularValues } from './singular';
export {
  symmetricEigen,
  symmetricEigenAsync,
  symmetricEigenvalues,
  symmetricEigenvaluesAsync,
  symmetricEigenvaluesBatch,
} from './symmetric';
export type {
  AntisymmetricPairs,
  ComplexMatrix,
  HermitianEigen,
  SingularValues,
  SymmetricEigen,
} from './types';
export { addScaledTo, concatenated, dot } from './vectors';

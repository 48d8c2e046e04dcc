import { hermitianEigenvalues } from './hermitian';
import { symmetricEigenvalues } from './symmetric';
import type { ComplexMatrix } from './types';

/** Nuclear norm Σ|ε| of a real symmetric n×n matrix. */
export function symmetricNuclearNorm(a: Float64Array, n: number): number {
  return sumOfSizes(symmetricEigenvalues(a, n));
}

/** Nuclear norm Σ|ε| of a complex Hermitian matrix. */
export function hermitianNuclearNorm(matrix: ComplexMatrix): number {
  return sumOfSizes(hermitianEigenvalues(matrix));
}

/** Σ|x|, the nuclear norm when x are eigenvalues. */
export function sumOfSizes(values: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < values.length; i++) sum += Math.abs(values[i]);
  return sum;
}

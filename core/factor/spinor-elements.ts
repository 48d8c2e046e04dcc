import type { SpinorHamiltonian } from '../hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs } from '../integrals/integral-set';

/** Writes the Hermitian M×M matrix with the given coordinates (symmetric pairs, then antisymmetric ones). */
export function hermitianInto(
  re: Float64Array,
  im: Float64Array,
  at: number,
  vector: Float64Array,
  from: number,
  m: number,
): void {
  const half = Math.SQRT1_2;
  let s = from;
  let a = from + numSymmetricPairs(m);
  for (let p = 0; p < m; p++) {
    for (let q = 0; q < p; q++) {
      const x = half * vector[s++]!;
      const y = half * vector[a++]!;
      re[at + p * m + q] = x;
      re[at + q * m + p] = x;
      im[at + p * m + q] = y;
      im[at + q * m + p] = -y;
    }
    re[at + p * m + p] = vector[s++]!;
    im[at + p * m + p] = 0;
  }
}

/**
 * G_IJ = Σ g_PQRS (B_I)*_PQ (B_J)*_RS, real symmetric M²×M², of the complex tensor. The imaginary part is zero where
 * g is Hermitian in each pair.
 *
 * @returns the matrix and the largest element that is not real or not symmetric, hartree.
 */
export function spinorSuperMatrix(h: SpinorHamiltonian): { matrix: Float64Array; defect: number } {
  const m = h.spinors;
  const dim = m * m;
  const symmetric = numSymmetricPairs(m);
  const anti = numAntisymmetricPairs(m);
  if (symmetric + anti !== dim) throw new RangeError('element count');
  let { re, im } = h.g;
  // Twice: transform the left pair, then transpose, so that the right pair becomes the left one.
  for (let turn = 0; turn < 2; turn++) {
    const outRe = new Float64Array(dim * dim);
    const outIm = new Float64Array(dim * dim);
    const half = Math.SQRT1_2;
    for (let p = 0, s = 0, a = symmetric; p < m; p++) {
      for (let q = 0; q <= p; q++, s++) {
        const pq = (p * m + q) * dim;
        const qp = (q * m + p) * dim;
        for (let c = 0; c < dim; c++) {
          if (p === q) {
            outRe[c * dim + s] = re[pq + c]!;
            outIm[c * dim + s] = im[pq + c]!;
            continue;
          }
          outRe[c * dim + s] = half * (re[pq + c]! + re[qp + c]!);
          outIm[c * dim + s] = half * (im[pq + c]! + im[qp + c]!);
          // −i(X_pq − X_qp)/√2
          outRe[c * dim + a] = half * (im[pq + c]! - im[qp + c]!);
          outIm[c * dim + a] = -half * (re[pq + c]! - re[qp + c]!);
        }
        if (p !== q) a++;
      }
    }
    re = outRe;
    im = outIm;
  }
  let defect = 0;
  const matrix = new Float64Array(dim * dim);
  for (let i = 0; i < dim; i++) {
    for (let j = 0; j < dim; j++) {
      const x = re[i * dim + j]!;
      const y = re[j * dim + i]!;
      matrix[i * dim + j] = (x + y) / 2;
      defect = Math.max(defect, Math.abs(x - y) / 2, Math.abs(im[i * dim + j]!));
    }
  }
  return { matrix, defect };
}

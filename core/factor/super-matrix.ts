import type { TwoElectronTensor } from '../hamiltonian/hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs } from '../integrals/integral-set';

/**
 * The two-electron tensor as blocks of the real symmetric super-matrix G over orthonormal Hermitian elements, so
 * that ½ Σ g T T = ½ Σ_IJ G_IJ B_I B_J. An off-diagonal pair carries √2 because E_pq + E_qp = √2 S_pq and
 * i(E_pq − E_qp) = √2 A_pq.
 */

/** √2 for p > q and 1 for p = q, over symmetric pairs. */
export function pairScales(n: number): Float64Array {
  const scales = new Float64Array(numSymmetricPairs(n)).fill(Math.SQRT2);
  for (let p = 0, i = 0; p < n; p++, i += p + 1) scales[i] = 1;
  return scales;
}

/** G over (μ,S)×(ν,S) from a pairs-triangle, written into a larger dense matrix at (row, column) and transposed. */
function triangleInto(
  out: Float64Array,
  width: number,
  row: number,
  column: number,
  triangle: Float64Array,
  from: number,
  scales: Float64Array,
): void {
  const npair = scales.length;
  for (let p = 0, i = from; p < npair; p++) {
    for (let r = 0; r <= p; r++) {
      const x = triangle[i++]! * scales[p]! * scales[r]!;
      out[(row + p) * width + column + r] = x;
      out[(row + r) * width + column + p] = x;
      out[(column + r) * width + row + p] = x;
      out[(column + p) * width + row + r] = x;
    }
  }
}

/** C: G over (0,S), npair × npair. Hartree. */
export function chargeMatrix(n: number, charge: Float64Array): Float64Array {
  const npair = numSymmetricPairs(n);
  const out = new Float64Array(npair * npair);
  triangleInto(out, npair, 0, 0, charge, 0, pairScales(n));
  return out;
}

/** G over (x,S) ⊕ (y,S) ⊕ (z,S), 3npair square, from the six components xx,xy,xz,yy,yz,zz. Hartree. */
export function spinSpinMatrix(n: number, spinSpin: Float64Array): Float64Array {
  const npair = numSymmetricPairs(n);
  const width = 3 * npair;
  const out = new Float64Array(width * width);
  const scales = pairScales(n);
  const length = spinSpin.length / 6;
  let component = 0;
  for (let k = 0; k < 3; k++) {
    for (let l = k; l < 3; l++) {
      triangleInto(out, width, k * npair, l * npair, spinSpin, component++ * length, scales);
    }
  }
  return out;
}

/** G between one antisymmetric and one symmetric plane for component k (0…2): nanti × npair. Hartree. */
export function spinOrbitMatrix(n: number, w: Float64Array, k: number): Float64Array {
  const nanti = numAntisymmetricPairs(n);
  const scales = pairScales(n);
  const npair = scales.length;
  const out = new Float64Array(nanti * npair);
  for (let a = 0, i = 0, from = k * nanti * npair; a < nanti; a++) {
    for (let s = 0; s < npair; s++, i++) out[i] = Math.SQRT2 * scales[s]! * w[from + i]!;
  }
  return out;
}

/** The spin–other-orbit array and its scale: where it is a multiple of the same-orbit one, that array itself. */
export function otherOrbit(spinOrbit: NonNullable<TwoElectronTensor['spinOrbit']>): {
  readonly w: Float64Array;
  readonly scale: number;
} {
  return spinOrbit.other instanceof Float64Array
    ? { w: spinOrbit.other, scale: 1 }
    : { w: spinOrbit.same, scale: spinOrbit.other.timesSame };
}

import { numAntisymmetricPairs, numSymmetricPairs, symmetricPair } from '../integrals/integral-set';
import { otherScale } from './contraction';
import type { TwoElectronTensor } from './hamiltonian';

/**
 * Mean field of the two-electron spin–orbit part over spin-averaged occupations: the one-body operator that
 * normal ordering with respect to the reference leaves (generalised Wick theorem with the density
 * ⟨a†_pσ a_qτ⟩ = δ_pq δ_στ n_p/2), direct and exchange,
 *
 *     A^k_pq = Σ_c n_c [ S_{pq,cc} − ½ (S_{pc,cq} + S_{cq,pc}) − ½ (O_{pc,cq} + O_{cq,pc}) ],
 *
 * the coefficient of T^k_pq being iA^k_pq. With O = 2S and n_c = 2 it is the frozen-core formula of
 * spin–orbit mean-field theory (B. A. Hess et al., Chem. Phys. Lett. 251, 365 (1996); quoted from memory).
 * The other-orbit part has no direct term (a closed shell has no spin density), and the energy constant that
 * goes with the replacement is zero because ⟨T^k⟩ = 0 in the spin-averaged reference.
 *
 * @param n - orbitals.
 * @param spinOrbit - 3 × nanti × npair arrays, hartree. Not modified.
 * @param occupations - n numbers 0…2.
 * @returns 3·n·n, real antisymmetric, hartree. Cost O(n³) from the packed arrays.
 */
export function spinOrbitMeanField(
  n: number,
  spinOrbit: NonNullable<TwoElectronTensor['spinOrbit']>,
  occupations: ArrayLike<number>,
): Float64Array {
  const planes = new Float64Array(3 * n * n);
  const scale = otherScale(spinOrbit);
  addMeanField(planes, n, spinOrbit.same, occupations, 1, scale === null ? 1 : 1 + scale);
  if (spinOrbit.other instanceof Float64Array) {
    addMeanField(planes, n, spinOrbit.other, occupations, 0, 1);
  }
  return planes;
}

/** Adds direct · Σ_c n_c w_{pq,cc} − ½ exchange · Σ_c n_c (w_{pc,cq} + w_{cq,pc}). */
function addMeanField(
  planes: Float64Array,
  n: number,
  w: Float64Array,
  occupations: ArrayLike<number>,
  direct: number,
  exchange: number,
): void {
  const nanti = numAntisymmetricPairs(n);
  const npair = numSymmetricPairs(n);
  const e = new Float64Array(n * n);
  for (let k = 0; k < 3; k++) {
    const plane = k * n * n;
    // e_pq = Σ_c n_c w_{pc,cq}; the second exchange term is w_{cq,pc} = −w_{qc,cp}, that is −e_qp.
    e.fill(0);
    for (let p = 1, row = k * nanti * npair; p < n; p++) {
      for (let q = 0; q < p; q++, row += npair) {
        let sum = 0;
        for (let c = 0; c < n; c++) {
          sum += occupations[c]! * w[row + symmetricPair(c, c)]!;
          e[p * n + c]! += occupations[q]! * w[row + symmetricPair(q, c)]!;
          e[q * n + c]! -= occupations[p]! * w[row + symmetricPair(p, c)]!;
        }
        planes[plane + p * n + q]! += direct * sum;
        planes[plane + q * n + p]! -= direct * sum;
      }
    }
    for (let p = 0; p < n; p++) {
      for (let q = 0; q < n; q++) {
        planes[plane + p * n + q]! -= 0.5 * exchange * (e[p * n + q]! - e[q * n + p]!);
      }
    }
  }
}

import type { SpatialHamiltonian, TripletOperator, TwoElectronTensor } from '../../hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs, symmetricPair } from '../../integrals/integral-set';

/** κ^μ = k^μ + Σ_r g^{μ0}_pqrr. */
export function sparseOneBody(h: SpatialHamiltonian): TripletOperator {
  const n = h.orbitals;
  const planes = Float64Array.from(h.k.planes);
  addContraction(planes, n, h.g, 1);
  return { sector: 'even', n, planes };
}

/** Adds scale · Σ_r g^{μ0}_pqrr to the four planes. */
export function addContraction(planes: Float64Array, n: number, g: TwoElectronTensor, scale: number): void {
  const npair = numSymmetricPairs(n);
  const nanti = numAntisymmetricPairs(n);
  if (g.charge) {
    for (let p = 0; p < n; p++) {
      for (let q = 0; q < n; q++) {
        const pq = symmetricPair(p, q);
        for (let r = 0; r < n; r++) {
          planes[p * n + q]! += scale * g.charge[symmetricPair(pq, symmetricPair(r, r))]!;
        }
      }
    }
  }
  if (!g.spinOrbit) return;
  for (let k = 0; k < 3; k++) {
    const plane = (k + 1) * n * n;
    for (let p = 1, row = k * nanti * npair; p < n; p++) {
      for (let q = 0; q < p; q++, row += npair) {
        let sum = 0;
        for (let r = 0; r < n; r++) sum += g.spinOrbit.same[row + symmetricPair(r, r)]!;
        planes[plane + p * n + q]! += scale * sum;
        planes[plane + q * n + p]! -= scale * sum;
      }
    }
  }
}

/** Σ_pr g^00_pprr. */
export function diagonalSum(h: SpatialHamiltonian): number {
  const { charge } = h.g;
  let sum = 0;
  if (!charge) return sum;
  for (let p = 0; p < h.orbitals; p++) {
    for (let r = 0; r < h.orbitals; r++) {
      sum += charge[symmetricPair(symmetricPair(p, p), symmetricPair(r, r))]!;
    }
  }
  return sum;
}

/**
 * Constant in the joined products of a pair with itself: ½ Σ_{p>q} G_pqpq + ¼ Σ_p G_pppp over the charge part and the
 * diagonal of the spin–spin one.
 */
export function identityOfSquares(
  { orbitals: n }: SpatialHamiltonian,
  arrays: readonly Float64Array[],
): number {
  let sum = 0;
  for (const values of arrays) {
    for (let p = 0; p < n; p++) {
      for (let q = 0; q <= p; q++) {
        const pq = symmetricPair(p, q);
        sum += (p === q ? 0.25 : 0.5) * values[symmetricPair(pq, pq)]!;
      }
    }
  }
  return sum;
}

/** xx, yy and zz of spin–spin. */
export function spinSpinDiagonal({ spinSpin }: TwoElectronTensor): Float64Array[] {
  if (!spinSpin) return [];
  const length = spinSpin.length / 6;
  return [0, 3, 5].map((component) => spinSpin.subarray(component * length, (component + 1) * length));
}

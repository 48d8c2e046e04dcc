import { numAntisymmetricPairs, numSymmetricPairs, symmetricPair } from '../integrals/integral-set';
import type { TwoElectronTensor } from './hamiltonian';
import type { TripletOperator } from './operators';
import { zeroOperator } from './operators';

/** The scale c of `other = c·same`, or null where `other` is an array of its own. */
export function otherScale(spinOrbit: NonNullable<TwoElectronTensor['spinOrbit']>): number | null {
  return spinOrbit.other instanceof Float64Array ? null : spinOrbit.other.timesSame;
}

/** Adds `scale · (pq|qs)` summed over q to plane (n×n, symmetric) for one pairs-triangle starting at `offset`. */
function addChargeContraction(
  plane: Float64Array,
  n: number,
  values: Float64Array,
  offset: number,
  scale: number,
): void {
  for (let p = 0; p < n; p++) {
    for (let s = 0; s <= p; s++) {
      let sum = 0;
      for (let q = 0; q < n; q++) {
        sum += values[offset + symmetricPair(symmetricPair(p, q), symmetricPair(q, s))]!;
      }
      plane[p * n + s]! += scale * sum;
      if (p !== s) plane[s * n + p]! += scale * sum;
    }
  }
}

/**
 * Adds `scale · (D_ps − D_sp)` with `D_ps = Σ_q w_{pq,qs}` to three n×n planes, w being 3 × nanti × npair.
 * D is not antisymmetric by itself: w_{pq,qs} has no exchange symmetry between its pairs.
 */
function addSpinOrbitContraction(planes: Float64Array, n: number, w: Float64Array, scale: number): void {
  const nanti = numAntisymmetricPairs(n);
  const npair = numSymmetricPairs(n);
  const d = new Float64Array(n * n);
  for (let k = 0; k < 3; k++) {
    d.fill(0);
    for (let p = 1, row = k * nanti * npair; p < n; p++) {
      for (let q = 0; q < p; q++, row += npair) {
        for (let s = 0; s < n; s++) {
          d[p * n + s]! += w[row + symmetricPair(q, s)]!;
          d[q * n + s]! -= w[row + symmetricPair(p, s)]!;
        }
      }
    }
    const plane = (k + 1) * n * n;
    for (let p = 0; p < n; p++) {
      for (let s = 0; s < n; s++) planes[plane + p * n + s]! += scale * (d[p * n + s]! - d[s * n + p]!);
    }
  }
}

/** Where the diagonal components xx, yy, zz stand among xx,xy,xz,yy,yz,zz. */
const DIAGONAL_COMPONENTS = [0, 3, 5] as const;

/**
 * The one-body operator between the two forms: Σ_μν Σ_q c^μν_λ g^μν_pqqs, with σ^μσ^ν = Σ_λ c^μν_λ σ^λ.
 *
 * Coulomb and the trace of the spin–spin part land on μ = 0; the off-diagonal spin–spin components cancel
 * because g^kl = g^lk meets the antisymmetric iε_klm. The spin–orbit part lands on μ = k as i·A^k,
 * A^k_ps = Σ_q [(S+O)_{pq,qs} + (S+O)_{qs,pq}].
 *
 * @param n - orbitals.
 * @param g - two-electron part, hartree; layouts in integral-set.ts. Not modified.
 * @returns even-sector operator, hartree. Cost O(n³) from the packed arrays.
 */
export function orderingOperator(n: number, g: TwoElectronTensor): TripletOperator {
  const operator = zeroOperator('even', n);
  const { planes } = operator;
  if (g.charge) addChargeContraction(planes, n, g.charge, 0, 1);
  if (g.spinSpin) {
    const length = g.spinSpin.length / 6;
    for (const component of DIAGONAL_COMPONENTS) {
      addChargeContraction(planes, n, g.spinSpin, component * length, 1);
    }
  }
  if (g.spinOrbit) {
    const scale = otherScale(g.spinOrbit);
    addSpinOrbitContraction(planes, n, g.spinOrbit.same, scale === null ? 1 : 1 + scale);
    if (g.spinOrbit.other instanceof Float64Array) {
      addSpinOrbitContraction(planes, n, g.spinOrbit.other, 1);
    }
  }
  return operator;
}

import { addScaled, fromProductForm, type SpatialHamiltonian, type TripletOperator } from '../../hamiltonian';
import { numSymmetricPairs, pairsTriangleLength } from '../../integrals/integral-set';
import { multiply } from '../../linalg';
import { pairRows } from './arrays';
import type { HypercontractedFactors } from './block';

/** The unshifted tensor that a block stands for, npair × npair: Sᵀ ζ S − ξ ⊗ 1 − 1 ⊗ ξ. Hartree. */
export function approximateCoulomb(block: HypercontractedFactors): Float64Array {
  const { n, count, vectors, zeta, shift } = block;
  const npair = numSymmetricPairs(n);
  const s = pairRows(vectors, count, n);
  const half = multiply(zeta, s, count, count, npair);
  const g = multiply(s, half, npair, count, npair, { transposeA: true });
  if (!shift) return g;
  for (let p = 0, i = 0; p < n; p++) {
    for (let q = 0; q <= p; q++, i++) {
      const x = (p === q ? 1 : Math.SQRT2) * shift[p * n + q]!;
      for (let r = 0, j = 0; r < n; r++, j += r + 1) {
        g[i * npair + j]! -= x;
        g[j * npair + i]! -= x;
      }
    }
  }
  return g;
}

/** The same as bare integrals (pq|rs), a pairs triangle as `g.charge` of a Hamiltonian. Hartree. */
export function approximateCharge(block: HypercontractedFactors): Float64Array {
  const { n } = block;
  const npair = numSymmetricPairs(n);
  const g = approximateCoulomb(block);
  const unscale = new Float64Array(npair).fill(Math.SQRT1_2);
  for (let p = 0, i = 0; p < n; p++, i += p + 1) unscale[i] = 1;
  const charge = new Float64Array(pairsTriangleLength(n));
  for (let i = 0, at = 0; i < npair; i++) {
    for (let j = 0; j <= i; j++) charge[at++] = unscale[i]! * unscale[j]! * g[i * npair + j]!;
  }
  return charge;
}

/**
 * H with its charge tensor replaced by what the block stands for, without any symmetry shift: for estimates of what the fit does
 * to energies. Every other part stays as it is.
 */
export function hypercontractedHamiltonian(
  h: SpatialHamiltonian,
  block: HypercontractedFactors,
  fold: { readonly foldedMeanField: TripletOperator | null; readonly foldedConstant: number },
): SpatialHamiltonian {
  return fromProductForm({
    orbitals: h.orbitals,
    electrons: h.electrons,
    terms: h.terms,
    constant: h.constant + fold.foldedConstant,
    k: fold.foldedMeanField ? addScaled(h.k, fold.foldedMeanField) : h.k,
    g: { ...h.g, charge: approximateCharge(block) },
  });
}

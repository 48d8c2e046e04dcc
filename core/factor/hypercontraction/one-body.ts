import { planeOf, type SpatialHamiltonian, type TripletOperator } from '../../hamiltonian';
import { symmetricEigenvalues } from '../../linalg';
import type { HypercontractedFactors, HypercontractedLambda } from './block';

/** What replaces the dropped part of the tensor. */
interface Fold {
  readonly foldedMeanField: TripletOperator | null;
  readonly foldedConstant: number;
}

const NO_FOLD: Fold = { foldedMeanField: null, foldedConstant: 0 };

/**
 * One-body part and constant that go with a hypercontracted charge part: in the η-electron sector (everywhere without ξ)
 *
 *     H ≈ constant + κ⁰·T⁰ + ½ Σ_mn ζ_mn M_m M_n + (all else),   κ⁰ = k⁰ + fold − η ξ + Σ_mn ζ_mn u_m u_mᵀ,
 *     constant = E₀ + folded constant − ½ Σ_mn ζ_mn.
 *
 * @returns κ⁰ n×n, hartree. The identities inside κ⁰·T⁰ and M_m² are still in it, as in the constants of other factors.
 */
export function hypercontractedOneBody(
  h: SpatialHamiltonian,
  block: HypercontractedFactors,
  { foldedMeanField, foldedConstant }: Fold = NO_FOLD,
): { readonly kappa: Float64Array; readonly constant: number } {
  const { n, count, vectors, zeta, shift } = block;
  const kappa = Float64Array.from(planeOf(h.k, 0));
  const fold = foldedMeanField ? planeOf(foldedMeanField, 0) : null;
  if (fold) for (let i = 0; i < n * n; i++) kappa[i]! += fold[i]!;
  if (shift) for (let i = 0; i < n * n; i++) kappa[i]! -= h.electrons * shift[i]!;
  let sum = 0;
  for (let m = 0; m < count; m++) {
    let z = 0;
    for (let k = 0; k < count; k++) z += zeta[m * count + k]!;
    sum += z;
    for (let p = 0; p < n; p++) {
      const x = z * vectors[m * n + p]!;
      for (let q = 0; q < n; q++) kappa[p * n + q]! += x * vectors[m * n + q]!;
    }
  }
  return { kappa, constant: h.constant + foldedConstant - 0.5 * sum };
}

/** ½ Σ_{m≠n} |ζ_mn| + ¼ Σ_m |ζ_mm|, hartree. */
export function hypercontractedNorm({ count, zeta }: HypercontractedFactors): number {
  let sum = 0;
  for (let i = 0; i < count * count; i++) sum += 0.5 * Math.abs(zeta[i]!);
  for (let m = 0; m < count; m++) sum -= 0.25 * Math.abs(zeta[m * count + m]!);
  return sum;
}

/** λ of κ⁰ and the charge part; κ⁰ at its median where the block holds in the sector only. */
export function hypercontractedLambda(
  h: SpatialHamiltonian,
  block: HypercontractedFactors,
  fold: Fold = NO_FOLD,
): HypercontractedLambda {
  const { kappa } = hypercontractedOneBody(h, block, fold);
  const values = symmetricEigenvalues(kappa, block.n);
  const half = values.length >> 1;
  const middle = values.length % 2 === 1 ? values[half]! : (values[half - 1]! + values[half]!) / 2;
  const c = block.shift ? middle : 0;
  const oneBody = values.reduce((sum, x) => sum + Math.abs(x - c), 0);
  const twoBody = hypercontractedNorm(block);
  return { oneBody, twoBody, total: oneBody + twoBody };
}

import { coulombBlock, type SpatialHamiltonian, type TripletOperator, zeroOperator } from '../../hamiltonian';
import { numSymmetricPairs } from '../../integrals/integral-set';
import type { JobContext } from '../../job';
import {
  sumOfSizes,
  symmetricEigenAsync,
  symmetricEigenvalues,
  symmetricEigenvaluesBatch,
} from '../../linalg';
import { planeInto, traceOfPairs } from '../elements';
import type { Residual } from '../factors';
import { approximateCoulomb } from './approximation';
import { pairWeights } from './arrays';
import type { HypercontractedFactors } from './block';
import { meanField } from './mean-field';

/** What a fit leaves out of H, and what takes its place in the one-body part. */
export interface FitResidual {
  readonly residual: Residual;
  /** Frobenius norm of w_p w_q w_r w_s D_pqrs, hartree. */
  readonly weighted: number;
  readonly foldedMeanField: TripletOperator;
  readonly foldedConstant: number;
}

/** Eigenvectors of the difference whose norms are taken between two checkpoints. */
const AT_ONCE = 256;

/**
 * Difference between H and what the block stands for, D = g − (approximate g), as the operator ½ Σ D T T of the product
 * form: k⁰ stays the exact one. Its mean field Φ goes back into the one-body part. The bound is that of what then remains:
 * with D = Σ_t w_t v_t v_tᵀ,
 * ¼ Σ |w_t| ‖L_t‖²_* + ‖Σ w_t τ_t L_t − Φ‖_* + |constant|: rigorous in the η-electron sector, everywhere without ξ.
 */
export async function fitResidual(
  h: SpatialHamiltonian,
  block: HypercontractedFactors,
  { occupations, weights }: { readonly occupations: ArrayLike<number>; readonly weights: Float64Array },
  ctx: JobContext,
): Promise<FitResidual> {
  const { n } = block;
  const npair = numSymmetricPairs(n);
  const d = coulombBlock(n, h.g);
  const approximate = approximateCoulomb(block);
  const scale = pairWeights(weights);
  let square = 0;
  let weighted = 0;
  for (let i = 0, at = 0; i < npair; i++) {
    for (let j = 0; j < npair; j++, at++) {
      d[at]! -= approximate[at]!;
      square += d[at]! ** 2;
      weighted += (scale[i]! * scale[j]! * d[at]!) ** 2;
    }
  }
  const { plane, constant } = meanField(d, n, occupations);

  const { values, vectors } = await symmetricEigenAsync(d, npair, ctx);
  let bound = 0;
  let centre = 0;
  const oneBody = new Float64Array(npair);
  const planes = new Float64Array(Math.min(AT_ONCE, npair) * n * n);
  for (let from = 0; from < npair; from += AT_ONCE) {
    await ctx.checkpoint();
    const some = Math.min(AT_ONCE, npair - from);
    for (let t = 0; t < some; t++) planeInto(planes, t * n * n, vectors, (from + t) * npair, n, true);
    const spectra = symmetricEigenvaluesBatch(planes, some, n);
    for (let t = 0; t < some; t++) {
      const w = values[from + t]!;
      const norm = sumOfSizes(spectra.subarray(t * n, (t + 1) * n));
      const tau = traceOfPairs(vectors, (from + t) * npair, n);
      bound += 0.25 * Math.abs(w) * norm * norm;
      // ½wM² runs over an interval from 0 to ½wΛ², so its middle is ¼wΛ².
      centre += w * (0.25 * norm * norm - 0.5 * tau * tau);
      for (let i = 0, at = (from + t) * npair; i < npair; i++) oneBody[i]! += w * tau * vectors[at + i]!;
    }
  }
  const left = new Float64Array(n * n);
  planeInto(left, 0, oneBody, 0, n, true);
  for (let i = 0; i < n * n; i++) left[i]! -= plane[i]!;
  for (let p = 0; p < n; p++) centre += left[p * n + p]!;
  bound += sumOfSizes(symmetricEigenvalues(left, n)) + Math.abs(centre - constant);
  const foldedMeanField = zeroOperator('even', n);
  foldedMeanField.planes.set(plane);
  return {
    residual: { frobenius: Math.sqrt(square), oneNormBound: bound, dropped: 0 },
    weighted: Math.sqrt(weighted),
    foldedMeanField,
    foldedConstant: constant,
  };
}

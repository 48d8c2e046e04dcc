import { planeOf, type SpatialHamiltonian } from '../hamiltonian';
import { numSymmetricPairs } from '../integrals/integral-set';
import type { JobContext } from '../job';
import { planeInto, traceOfPairs } from './elements';
import type { Factorisation, SquareFactors } from './factors';
import { type MixingOptions, mixFactors } from './mixing/mix';
import { normalised, squareFactors } from './squares';

/**
 * The factorisation with its Coulomb factors mixed for the least λ, and their optimised shifts. All other blocks, the
 * residual and the folded mean field are those of `given`. Where the charge part is indefinite, or absent, nothing
 * can be mixed and `given` comes back with a note.
 */
export async function compressFactors(
  h: SpatialHamiltonian,
  given: Factorisation,
  options: MixingOptions,
  ctx: JobContext,
): Promise<Factorisation> {
  const coulomb = given.blocks.find(
    (block): block is SquareFactors => block.kind === 'squares' && block.part === 'coulomb',
  );
  if (!coulomb || coulomb.weights.some((w) => w < 0)) {
    return {
      ...given,
      notes: [...given.notes, 'no factors to compress: the charge part is indefinite or absent'],
    };
  }
  const { n, count } = coulomb;
  const npair = numSymmetricPairs(n);
  const columns = new Float64Array(count * npair);
  for (let t = 0; t < count; t++) {
    const scale = Math.sqrt(coulomb.weights[t]!);
    for (let i = t * npair; i < (t + 1) * npair; i++) columns[i] = scale * coulomb.vectors[i]!;
  }
  const kappa = unshiftedKappa(h, given, coulomb);
  const mixed = await mixFactors({ n, kappa, excess: h.electrons - n }, columns, count, options, ctx);
  const unit = normalised(mixed.columns, mixed.count, npair);
  const block = await squareFactors('coulomb', 'even', [0], n, unit, ctx);
  // The weights leave the vectors, so they leave the shifts too.
  const shifts = mixed.shifts.map((c, t) => (unit.weights[t]! > 0 ? c / Math.sqrt(unit.weights[t]!) : 0));
  return {
    ...given,
    blocks: given.blocks.map((other) => (other === coulomb ? { ...block, shifts } : other)),
  };
}

/** κ⁰ = k⁰ + folded mean field + Σ_t w_t τ_t L^t, n×n: what no mixing changes. */
function unshiftedKappa(h: SpatialHamiltonian, given: Factorisation, coulomb: SquareFactors): Float64Array {
  const { n, count, weights, vectors } = coulomb;
  const npair = numSymmetricPairs(n);
  const sum = new Float64Array(npair);
  for (let t = 0; t < count; t++) {
    const scale = weights[t]! * traceOfPairs(vectors, t * npair, n);
    for (let i = 0; i < npair; i++) sum[i]! += scale * vectors[t * npair + i]!;
  }
  const kappa = new Float64Array(n * n);
  planeInto(kappa, 0, sum, 0, n, true);
  const add = (plane: Float64Array) => {
    for (let i = 0; i < n * n; i++) kappa[i]! += plane[i]!;
  };
  add(planeOf(h.k, 0));
  const folded = given.foldedMeanField;
  if (folded && 'planes' in folded) add(planeOf(folded, 0));
  return kappa;
}

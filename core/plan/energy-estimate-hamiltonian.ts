import type { Factorisation, SquareFactors, TripleFactors } from '../factor';
import { addScaled, fromProductForm, type SpatialHamiltonian } from '../hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs, pairsTriangleLength } from '../integrals/integral-set';
import type { JobContext } from '../job';
import { multiplyAsync } from '../linalg';

/** Most multiplications that an estimate beside the costs may take: about a second. */
const MOST_FLOPS = 1.5e10;

/**
 * The Hamiltonian that kept factors and the folded mean field stand for, without any symmetry shift, in packed form by
 * matrix products. A shifted encoding stands for the same operator in its sector alone, and would change orbital energies.
 *
 * @returns null where factors mix spin components (joint grouping: no packed form) or the products would take too long.
 */
export async function hamiltonianOfFactors(
  h: SpatialHamiltonian,
  { blocks, foldedMeanField, foldedConstant }: Factorisation,
  context: JobContext,
): Promise<SpatialHamiltonian | null> {
  const n = h.orbitals;
  const npair = numSymmetricPairs(n);
  const nanti = numAntisymmetricPairs(n);
  const charges = blocks.filter(isCharge);
  const triples = blocks.filter((block): block is TripleFactors => block.kind === 'triples');
  if (charges.length + triples.length < blocks.length) return null;
  const flops =
    charges.reduce((sum, { count }) => sum + 2 * npair * npair * count, 0) +
    triples.reduce((sum, { count }) => sum + 2 * nanti * npair * count, 0);
  if (flops > MOST_FLOPS) return null;
  // Orthonormal elements → coefficients of T_pq: a pair p ≠ q loses 1/√2.
  const unscale = new Float64Array(npair).fill(Math.SQRT1_2);
  for (let p = 0, i = 0; p < n; p++, i += p + 1) unscale[i] = 1;

  let charge: Float64Array | null = null;
  for (const { vectors, weights, count } of charges) {
    charge ??= new Float64Array(pairsTriangleLength(n));
    const left = vectors.map((x, i) => x * weights[Math.floor(i / npair)]!);
    const g = await multiplyAsync(left, vectors, npair, count, npair, { transposeA: true }, context);
    for (let i = 0, at = 0; i < npair; i++) {
      for (let j = 0; j <= i; j++) charge[at++]! += unscale[i]! * unscale[j]! * g[i * npair + j]!;
    }
  }

  const size = nanti * npair;
  const same = triples.length > 0 ? new Float64Array(3 * size) : null;
  const other = triples.length > 0 ? new Float64Array(3 * size) : null;
  for (const block of triples) {
    for (const k of [1, 2, 3]) {
      const own = Array.from({ length: block.count }, (_, t) => t).filter((t) => block.component[t] === k);
      if (own.length === 0) continue;
      const a = new Float64Array(own.length * nanti);
      const s = new Float64Array(own.length * npair);
      own.forEach((t, row) => {
        const strength = Math.SQRT1_2 * block.strengths[t]!;
        for (let i = 0; i < nanti; i++) a[row * nanti + i] = strength * block.antisymmetric[t * nanti + i]!;
        for (let j = 0; j < npair; j++) s[row * npair + j] = unscale[j]! * block.symmetric[t * npair + j]!;
      });
      const w = await multiplyAsync(a, s, nanti, own.length, npair, { transposeA: true }, context);
      const at = (k - 1) * size;
      for (let i = 0; i < size; i++) {
        same![at + i]! += block.sameScale * w[i]!;
        other![at + i]! += block.otherScale * w[i]!;
      }
    }
  }
  const k = foldedMeanField && 'planes' in foldedMeanField ? addScaled(h.k, foldedMeanField) : h.k;
  return fromProductForm({
    orbitals: n,
    electrons: h.electrons,
    terms: h.terms,
    constant: h.constant + foldedConstant,
    k,
    g: { charge, spinOrbit: same && other ? { same, other } : null, spinSpin: null },
  });
}

function isCharge(block: Factorisation['blocks'][number]): block is SquareFactors {
  return (
    block.kind === 'squares' && block.sector === 'even' && block.planes.length === 1 && block.planes[0] === 0
  );
}

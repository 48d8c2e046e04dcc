import {
  approximateCharge,
  type Factorisation,
  type HypercontractedFactors,
  type SquareFactors,
  sectorLayout,
  type TripleFactors,
} from '../factor';
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
  const dipolar = blocks.filter(isSpinSpin);
  const fitted = blocks.filter((block): block is HypercontractedFactors => block.kind === 'hypercontracted');
  if (charges.length + fitted.length + triples.length + dipolar.length < blocks.length) return null;
  const flops =
    dipolar.reduce((sum, { count }) => sum + 12 * npair * npair * count, 0) +
    charges.reduce((sum, { count }) => sum + 2 * npair * npair * count, 0) +
    triples.reduce((sum, { count }) => sum + 2 * nanti * npair * count, 0);
  if (flops > MOST_FLOPS) return null;
  // Orthonormal elements → coefficients of T_pq: a pair p ≠ q loses 1/√2.
  const unscale = new Float64Array(npair).fill(Math.SQRT1_2);
  for (let p = 0, i = 0; p < n; p++, i += p + 1) unscale[i] = 1;

  // The fit knows its own shift.
  let charge: Float64Array | null = fitted[0] ? approximateCharge(fitted[0]) : null;
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
  const spinSpin = await spinSpinOf(n, dipolar, unscale, context);
  const k = foldedMeanField && 'planes' in foldedMeanField ? addScaled(h.k, foldedMeanField) : h.k;
  return fromProductForm({
    orbitals: n,
    electrons: h.electrons,
    terms: h.terms,
    constant: h.constant + foldedConstant,
    k,
    g: { charge, spinOrbit: same && other ? { same, other } : null, spinSpin },
  });
}

/** Six pairs-triangles xx, xy, xz, yy, yz, zz of Σ w L ⊗ L; the sum over all factors is symmetric in the pairs. */
async function spinSpinOf(
  n: number,
  blocks: readonly SquareFactors[],
  unscale: Float64Array,
  context: JobContext,
): Promise<Float64Array | null> {
  if (blocks.length === 0) return null;
  const npair = numSymmetricPairs(n);
  const length = pairsTriangleLength(n);
  const out = new Float64Array(6 * length);
  for (const { sector, planes, count, dim, vectors, weights } of blocks) {
    const { slots } = sectorLayout(sector, planes, n);
    const columns = slots.map(({ offset }) => {
      const rows = new Float64Array(count * npair);
      for (let t = 0; t < count; t++) {
        for (let i = 0; i < npair; i++) rows[t * npair + i] = unscale[i]! * vectors[t * dim + offset + i]!;
      }
      return rows;
    });
    const weighted = columns.map((rows) => rows.map((x, i) => x * weights[Math.floor(i / npair)]!));
    let component = 0;
    for (let a = 0; a < 3; a++) {
      for (let b = a; b < 3; b++) {
        const g = await multiplyAsync(
          weighted[a]!,
          columns[b]!,
          npair,
          count,
          npair,
          { transposeA: true },
          context,
        );
        for (let i = 0, at = component * length; i < npair; i++) {
          for (let j = 0; j <= i; j++) out[at++]! += (g[i * npair + j]! + g[j * npair + i]!) / 2;
        }
        component++;
      }
    }
  }
  return out;
}

function isSpinSpin(block: Factorisation['blocks'][number]): block is SquareFactors {
  return block.kind === 'squares' && block.part === 'spin-spin';
}

function isCharge(block: Factorisation['blocks'][number]): block is SquareFactors {
  return (
    block.kind === 'squares' && block.sector === 'even' && block.planes.length === 1 && block.planes[0] === 0
  );
}

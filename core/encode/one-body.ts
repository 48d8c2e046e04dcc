import { type Factorisation, planeInto, sectorLayout } from '../factor';
import type { SpatialHamiltonian } from '../hamiltonian';
import { planeOf, type TripletOperator } from '../hamiltonian';
import { numAntisymmetricPairs } from '../integrals/integral-set';
import { antisymmetricNormsBatch, symmetricEigenvalues } from '../linalg';
import type { BlockItems } from './items';
import { identityPart } from './products';
import { countAbove, median, shiftedNorm } from './shift';

/** κ carries spin planes 1e-5 and less of its charge plane, so only rounding counts as zero here. */
export const KAPPA_ROUNDING = 1e-13;

/** The one-body item of an encoding and the constants that belong to it. */
export interface OneBody {
  /** κ after all shifts, even sector, hartree. */
  readonly kappa: TripletOperator;
  /** Shift of κ⁰ itself, hartree. */
  readonly shift: number;
  /** Eigenvalues of κ⁰, ascending. */
  readonly chargeValues: Float64Array;
  /** a_j of the three antisymmetric planes, 3·⌊n/2⌋. */
  readonly spinNorms: Float64Array;
  /** E₀ − ½ Σ w (τ + c(η − N))² + c₁η (+ folded constant): H = this + κ + ½ Σ w M². Hartree. */
  readonly constant: number;
}

/**
 * κ^μ = k^μ + Σ_t w_t [τ_t + c_t(η − N)] L^{t,μ}, and κ⁰ − c₁ with its own median c₁ where `shifted`.
 *
 * With M = L − τ = M' + c(N̂ − N) and N̂ = η: ½wL² = ½wM'² + w T L − ½wT², T = τ + c(η − N). A triple gives
 * ½s{X, Y} = ½s{X, Y' − τ'} + s T X likewise, without a constant. A hypercontracted part adds identityPart and −ηξ.
 */
export function oneBodyPart(
  h: SpatialHamiltonian,
  factorisation: Factorisation,
  blocks: readonly BlockItems[],
  shifted: boolean,
): OneBody {
  const n = h.orbitals;
  const excess = h.electrons - n;
  const planes = Float64Array.from(h.k.planes);
  const folded = factorisation.foldedMeanField;
  if (folded && 'planes' in folded) for (let i = 0; i < planes.length; i++) planes[i]! += folded.planes[i]!;
  let constant = h.constant + factorisation.foldedConstant;
  const work = new Float64Array(n * n);
  const addPlane = (mu: number, scale: number) => {
    const at = mu * n * n;
    for (let i = 0; i < n * n; i++) planes[at + i]! += scale * work[i]!;
  };
  for (const entry of blocks) {
    if (entry.kind === 'hypercontracted') {
      const { block } = entry;
      const identity = identityPart(block);
      constant += identity.constant;
      // Row-major N×N, the charge plane the first. The fit's own shift ξ(N̂ − η) takes ηξ off.
      for (const [i, x] of identity.plane.entries()) {
        planes[i]! += x - (block.shift ? h.electrons * block.shift[i]! : 0);
      }
      continue;
    }
    if (entry.kind === 'triples') {
      const { block, items } = entry;
      const nanti = numAntisymmetricPairs(n);
      items.forEach(({ trace, shift }, t) => {
        const scale = block.sameScale * block.strengths[t]! * (trace + shift * excess);
        planeInto(work, 0, block.antisymmetric, t * nanti, n, false);
        addPlane(block.component[t]!, scale);
      });
      continue;
    }
    const { block, items } = entry;
    if (block.sector === 'odd') continue; // τ = c = 0
    const { slots } = sectorLayout(block.sector, block.planes, n);
    items.forEach(({ trace, shift }, t) => {
      const total = trace + shift * excess;
      const w = block.weights[t]!;
      constant -= 0.5 * w * total * total;
      for (const slot of slots) {
        planeInto(work, 0, block.vectors, t * block.dim + slot.offset, n, slot.symmetric);
        addPlane(slot.mu, w * total);
      }
    });
  }
  const kappa: TripletOperator = { sector: 'even', n, planes };
  const chargeValues = symmetricEigenvalues(planeOf(kappa, 0), n);
  const shift = shifted ? median(chargeValues) : 0;
  if (shift !== 0) {
    for (let p = 0; p < n; p++) planes[p * n + p]! -= shift;
    for (let p = 0; p < n; p++) chargeValues[p]! -= shift;
    constant += shift * h.electrons;
  }
  const spinNorms = antisymmetricNormsBatch(planes.subarray(n * n), 3, n);
  return { kappa, shift, chargeValues, spinNorms, constant };
}

/** The same with κ⁰ shifted by c more, hartree. */
export function recentred(part: OneBody, electrons: number, c: number): OneBody {
  const { n, planes } = part.kappa;
  const moved = planes.slice();
  for (let p = 0; p < n; p++) moved[p * n + p]! -= c;
  return {
    ...part,
    kappa: { ...part.kappa, planes: moved },
    shift: part.shift + c,
    chargeValues: part.chargeValues.map((x) => x - c),
    constant: part.constant + c * electrons,
  };
}

/** One-norms and rows of the one-body item in the triplet form; eigenvectors of each plane of κ. */
export function oneBodyTriplet(part: OneBody) {
  const n = part.kappa.n;
  const charge = shiftedNorm(part.chargeValues, 0, n, 0);
  const spin = 2 * shiftedNorm(part.spinNorms, 0, part.spinNorms.length, 0);
  let largest = 0;
  for (const x of part.chargeValues) largest = Math.max(largest, Math.abs(x));
  for (const x of part.spinNorms) largest = Math.max(largest, x);
  const zero = KAPPA_ROUNDING * largest;
  const pairRows = countAbove(part.spinNorms, 0, part.spinNorms.length, 0, zero);
  const chargeRows = countAbove(part.chargeValues, 0, n, 0, zero);
  const half = n >> 1;
  // Eigenvalues ±a of each spin plane.
  const values = (k: number) => 2 * countAbove(part.spinNorms, (k - 1) * half, k * half, 0, zero);
  const planeRows = [chargeRows, values(1), values(2), values(3)] as const;
  return { charge, spin, rows: chargeRows + pairRows, pairRows, planeRows };
}

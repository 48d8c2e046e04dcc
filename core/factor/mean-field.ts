import type { TripletOperator } from '../hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs } from '../integrals/integral-set';
import { multiply } from '../linalg';
import { planeInto, sectorLayout, traceOfPairs, weightedTraceOfPairs } from './elements';
import type { SquareFactors, TripleFactors } from './factors';

/**
 * What stands in for dropped factors in the one-body part.
 *
 * μ = 0: the one-body part w τ L⁰ that the Majorana form of the factor leaves beside its square; exact.
 * μ = k: the mean field over a spin-averaged reference with density δ_pq δ_στ n_p/2 (generalised Wick theorem).
 * For a product of one-body matrices x, y over the spin orbitals, with γ = n/2,
 *
 *     X Y + Y X  →  x(1 − 2γ)y + y(1 − 2γ)x + 2 tr(γx) y + 2 tr(γy) x,
 *
 * which for n_p = 1 is again the Majorana part, and for spin–orbit blocks the mean field of
 * hamiltonian/mean-field.ts plus the ordering term.
 */
export interface FoldTarget {
  /** Even sector, hartree: what is added to k. */
  readonly folded: TripletOperator;
  /** 3·n·n: mean field minus Majorana part, planes of k = x, y, z; its one-norm is part of the bound. */
  readonly difference: Float64Array;
}

/** a·diag(d)·b for n×n matrices. */
function sandwich(a: Float64Array, d: ArrayLike<number>, b: Float64Array, n: number): Float64Array {
  const scaled = a.map((x, i) => x * d[i % n]!);
  return multiply(scaled, b, n, n, n);
}

/** target += scale · m, n×n from `at`. */
function add(target: Float64Array, at: number, m: Float64Array, scale: number): void {
  for (let i = 0; i < m.length; i++) target[at + i]! += scale * m[i]!;
}

/** Adds a spin plane that is the mean field, and records how far it is from the Majorana part. */
function addSpinPlane(target: FoldTarget, k: number, meanField: Float64Array, majorana: Float64Array): void {
  const size = meanField.length;
  add(target.folded.planes, k * size, meanField, 1);
  add(target.difference, (k - 1) * size, meanField, 1);
  add(target.difference, (k - 1) * size, majorana, -1);
}

/** Even permutations (l, m) of each component: Σ ε_lmk. */
const CYCLIC = [
  [2, 3],
  [3, 1],
  [1, 2],
] as const;

/** Folds factor t. Cost O(n³). */
export function foldSquare(
  target: FoldTarget,
  block: SquareFactors,
  t: number,
  occupations: ArrayLike<number>,
): void {
  const { n, sector } = block;
  const w = block.weights[t]!;
  const planes: (Float64Array | null)[] = [null, null, null, null];
  const layout = sectorLayout(sector, block.planes, n);
  const from = t * block.dim;
  for (const slot of layout.slots) {
    const plane = new Float64Array(n * n);
    planeInto(plane, 0, block.vectors, from + slot.offset, n, slot.symmetric);
    planes[slot.mu] = plane;
  }
  const charged = sector === 'even' && planes[0] !== null;
  const trace = charged ? traceOfPairs(block.vectors, from, n) : 0;
  const occupied = charged ? weightedTraceOfPairs(block.vectors, from, n, occupations) : 0;
  if (charged) add(target.folded.planes, 0, planes[0]!, w * trace);
  const holes = Float64Array.from({ length: n }, (_, p) => 1 - occupations[p]!);
  for (let k = 1; k <= 3; k++) {
    const meanField = new Float64Array(n * n);
    const majorana = new Float64Array(n * n);
    const own = planes[k];
    if (own && planes[0]) {
      add(meanField, 0, sandwich(planes[0], holes, own, n), w / 2);
      add(meanField, 0, sandwich(own, holes, planes[0], n), w / 2);
    }
    if (own && charged) {
      add(meanField, 0, own, w * occupied);
      add(majorana, 0, own, w * trace);
    }
    const [l, m] = CYCLIC[k - 1]!;
    const [a, b] = [planes[l], planes[m]];
    if (a && b) {
      // (iA)(iB)·iε = −i AB ε in the even sector, S S' iε in the odd one.
      const sign = sector === 'even' ? -0.5 : 0.5;
      add(meanField, 0, sandwich(a, holes, b, n), sign * w);
      add(meanField, 0, sandwich(b, holes, a, n), -sign * w);
    }
    if (own || (a && b)) addSpinPlane(target, k, meanField, majorana);
  }
}

/** Folds triple t. Cost O(n³). */
export function foldTriple(
  target: FoldTarget,
  block: TripleFactors,
  t: number,
  occupations: ArrayLike<number>,
): void {
  const { n, sameScale, otherScale } = block;
  const strength = block.strengths[t]!;
  const a = new Float64Array(n * n);
  const s = new Float64Array(n * n);
  const from = t * numSymmetricPairs(n);
  planeInto(a, 0, block.antisymmetric, t * numAntisymmetricPairs(n), n, false);
  planeInto(s, 0, block.symmetric, from, n, true);
  const holes = Float64Array.from({ length: n }, (_, p) => 1 - occupations[p]!);
  const meanField = new Float64Array(n * n);
  const majorana = new Float64Array(n * n);
  const exchange = 0.5 * strength * (sameScale + otherScale);
  add(meanField, 0, sandwich(a, holes, s, n), exchange);
  add(meanField, 0, sandwich(s, holes, a, n), exchange);
  const occupied = weightedTraceOfPairs(block.symmetric, from, n, occupations);
  add(meanField, 0, a, strength * sameScale * occupied);
  add(majorana, 0, a, strength * sameScale * traceOfPairs(block.symmetric, from, n));
  addSpinPlane(target, block.component[t]!, meanField, majorana);
}

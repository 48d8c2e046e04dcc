import { isSymmetricPlane, type Mu, type Sector } from '../hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs } from '../integrals/integral-set';

/** Where one plane of a sector stands in a factor's vector and in its spectrum. */
export interface PlaneSlot {
  readonly mu: Mu;
  readonly symmetric: boolean;
  /** First element in the vector, and how many. */
  readonly offset: number;
  readonly length: number;
  /** First number in the spectrum, and how many: n for a symmetric plane, ⌊n/2⌋ for an antisymmetric one. */
  readonly spectrumOffset: number;
  readonly spectrumLength: number;
}

/** Layout of a factor over the given planes. */
export interface SectorLayout {
  readonly n: number;
  readonly dim: number;
  readonly spectrumWidth: number;
  readonly slots: readonly PlaneSlot[];
}

export function sectorLayout(sector: Sector, planes: readonly Mu[], n: number): SectorLayout {
  let dim = 0;
  let spectrumWidth = 0;
  const slots = planes.map((mu): PlaneSlot => {
    const symmetric = isSymmetricPlane(sector, mu);
    const length = symmetric ? numSymmetricPairs(n) : numAntisymmetricPairs(n);
    const spectrumLength = symmetric ? n : n >> 1;
    const slot = { mu, symmetric, offset: dim, length, spectrumOffset: spectrumWidth, spectrumLength };
    dim += length;
    spectrumWidth += spectrumLength;
    return slot;
  });
  return { n, dim, spectrumWidth, slots };
}

/**
 * Writes the real n×n plane of one factor: symmetric, or antisymmetric (the operator being i times it).
 *
 * @param out - length ≥ n², from `at`. Overwritten.
 * @param vector - coordinates in the orthonormal Hermitian basis, from `from`.
 */
export function planeInto(
  out: Float64Array,
  at: number,
  vector: Float64Array,
  from: number,
  n: number,
  symmetric: boolean,
): void {
  const half = Math.SQRT1_2;
  const sign = symmetric ? half : -half;
  let i = from;
  for (let p = 0; p < n; p++) {
    const row = at + p * n;
    for (let q = 0, column = at + p; q < p; q++, column += n) {
      const x = vector[i++]!;
      out[row + q] = half * x;
      out[column] = sign * x;
    }
    out[row + p] = symmetric ? vector[i++]! : 0;
  }
}

/** tr of the symmetric plane that stands at `from` of a vector. */
export function traceOfPairs(vector: Float64Array, from: number, n: number): number {
  let trace = 0;
  for (let p = 0, i = from; p < n; p++, i += p + 1) trace += vector[i]!;
  return trace;
}

/** Σ_p scale_p · (diagonal element p) of the symmetric plane that stands at `from` of a vector. */
export function weightedTraceOfPairs(
  vector: Float64Array,
  from: number,
  n: number,
  scale: ArrayLike<number>,
): number {
  let trace = 0;
  for (let p = 0, i = from; p < n; p++, i += p + 1) trace += scale[p]! * vector[i]!;
  return trace;
}

import type { SmoothValue } from '../../linalg';
import type { HypercontractionPoint } from './block';
import type { Slope } from './least-squares';

/**
 * Lengths in which the minimiser measures ζ and ξ beside the components of the vectors: about the inverse root of their
 * curvature, which makes the first steps fit. Found by trial on the sets of 20 and 50 orbitals.
 */
const ZETA_SCALE = 0.25;
const SHIFT_SCALE = 0.1;

/** A point as one list of numbers: vectors of any length, the lower triangles of ζ and ξ in an orthonormal measure. */
export function pack({ count: m, vectors, zeta, shift }: HypercontractionPoint): Float64Array {
  const n = vectors.length / m;
  const x = new Float64Array(m * n + triangle(m) + (shift ? triangle(n) : 0));
  x.set(vectors);
  packSymmetric(x, m * n, zeta, m, 1 / ZETA_SCALE);
  if (shift) packSymmetric(x, m * n + triangle(m), shift, n, 1 / SHIFT_SCALE);
  return x;
}

export interface UnpackedPoint extends HypercontractionPoint {
  /** Norms that the vectors had. */
  readonly lengths: Float64Array;
}

/** The point of a list, with unit vectors. */
export function unpack(x: Float64Array, m: number, n: number, shifted: boolean): UnpackedPoint {
  const vectors = x.slice(0, m * n);
  const lengths = new Float64Array(m);
  for (let i = 0; i < m; i++) {
    let sum = 0;
    for (let r = i * n; r < (i + 1) * n; r++) sum += vectors[r]! * vectors[r]!;
    lengths[i] = Math.sqrt(sum);
    for (let r = i * n; r < (i + 1) * n; r++) vectors[r]! /= lengths[i]!;
  }
  const zeta = unpackSymmetric(x, m * n, m, ZETA_SCALE);
  const shift = shifted ? unpackSymmetric(x, m * n + triangle(m), n, SHIFT_SCALE) : null;
  return { count: m, vectors, zeta, shift, lengths };
}

/** Σ_k scales_k slopes_k and its gradient with respect to the list. */
export function combine(
  { count: m, vectors, lengths }: UnpackedPoint,
  terms: readonly { readonly slope: Slope; readonly scale: number }[],
): SmoothValue {
  const n = vectors.length / m;
  const shifted = terms.some(({ slope }) => slope.shift !== null);
  const gradient = new Float64Array(m * n + triangle(m) + (shifted ? triangle(n) : 0));
  let value = 0;
  for (const { slope, scale } of terms) {
    value += scale * slope.value;
    for (let i = 0; i < m; i++) {
      const from = i * n;
      let along = 0;
      for (let r = from; r < from + n; r++) along += slope.vectors[r]! * vectors[r]!;
      const f = scale / lengths[i]!;
      for (let r = from; r < from + n; r++) gradient[r]! += f * (slope.vectors[r]! - along * vectors[r]!);
    }
    packSymmetric(gradient, m * n, slope.zeta, m, scale * ZETA_SCALE);
    if (slope.shift) packSymmetric(gradient, m * n + triangle(m), slope.shift, n, scale * SHIFT_SCALE);
  }
  return { value, gradient };
}

const triangle = (n: number): number => (n * (n + 1)) / 2;

/** Adds the lower triangle of a symmetric matrix, √2 off the diagonal: lengths and gradients keep their meaning. */
function packSymmetric(x: Float64Array, from: number, matrix: Float64Array, n: number, scale: number): void {
  const off = Math.SQRT2 * scale;
  for (let i = 0, at = from; i < n; i++) {
    for (let j = 0; j < i; j++) x[at++]! += off * matrix[i * n + j]!;
    x[at++]! += scale * matrix[i * n + i]!;
  }
}

function unpackSymmetric(x: Float64Array, from: number, n: number, scale: number): Float64Array {
  const matrix = new Float64Array(n * n);
  const off = Math.SQRT1_2 * scale;
  for (let i = 0, at = from; i < n; i++) {
    for (let j = 0; j < i; j++, at++) {
      matrix[i * n + j] = off * x[at]!;
      matrix[j * n + i] = off * x[at]!;
    }
    matrix[i * n + i] = scale * x[at++]!;
  }
  return matrix;
}

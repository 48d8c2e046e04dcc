import type { SpinorItem, SpinorProgram, SpinorRow } from '../encode';
import type { ComplexMatrix } from '../linalg';
import { zeroMatrix } from './sector-operators';

/**
 * Σ rows weight·sign·op of an item on a face, in one of its squares: Σ_PQ matrix_PQ a†_P a_Q + scalar, scalar = −½ tr matrix.
 */
export function rowsMatrix(
  { orbitals, partners }: SpinorProgram,
  item: SpinorItem,
  face: number,
  square: number,
): { readonly matrix: ComplexMatrix; readonly scalar: number } {
  const matrix = zeroMatrix(2 * orbitals);
  let scalar = 0;
  const odd = item.faces[face]!.odd;
  for (const row of item.rows) {
    const { weight, sign } = row.faces[face]!;
    const w = overModes(item, row, square);
    const scale = weight * sign;
    addProjector(matrix, w, partners ? scale : 2 * scale);
    if (partners) addProjector(matrix, reversed(w), odd ? -scale : scale);
    if (!partners || !odd) scalar -= scale;
  }
  return { matrix, scalar };
}

interface Vector {
  readonly re: Float64Array;
  readonly im: Float64Array;
}

/** w over all 2N modes; in the second square of a pair its spin is against the axis. */
function overModes({ kind, axis }: SpinorItem, { re, im }: SpinorRow, square: number): Vector {
  if (kind === 'full') return { re, im };
  const r = Math.SQRT1_2;
  const against = square === 1 ? -1 : 1;
  // ↑ and ↓ of the spin along or against x, y, z, re and im.
  const spin = {
    1: [r, 0, against * r, 0],
    2: [r, 0, 0, against * r],
    3: [square === 0 ? 1 : 0, 0, square, 0],
  }[axis] as [number, number, number, number];
  const out = { re: new Float64Array(2 * re.length), im: new Float64Array(2 * re.length) };
  for (let p = 0; p < re.length; p++) {
    for (const s of [0, 1]) {
      const [x, y] = [spin[2 * s]!, spin[2 * s + 1]!];
      out.re[2 * p + s] = x * re[p]! - y * im[p]!;
      out.im[2 * p + s] = x * im[p]! + y * re[p]!;
    }
  }
  return out;
}

/** iσ_y w*. */
function reversed({ re, im }: Vector): Vector {
  const out = { re: new Float64Array(re.length), im: new Float64Array(re.length) };
  for (let p = 0; p < re.length; p += 2) {
    out.re[p] = re[p + 1]!;
    out.im[p] = -im[p + 1]!;
    out.re[p + 1] = -re[p]!;
    out.im[p + 1] = im[p]!;
  }
  return out;
}

/** matrix += scale·ww†. */
function addProjector({ n, re, im }: ComplexMatrix, w: Vector, scale: number): void {
  for (let p = 0; p < n; p++) {
    for (let q = 0; q < n; q++) {
      re[p * n + q]! += scale * (w.re[p]! * w.re[q]! + w.im[p]! * w.im[q]!);
      im[p * n + q]! += scale * (w.im[p]! * w.re[q]! - w.re[p]! * w.im[q]!);
    }
  }
}

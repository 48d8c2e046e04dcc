import type { SpinorItem, SpinorProgram, SpinorRow } from '../encode';
import type { ComplexMatrix } from '../linalg';
import type { SectorBasis } from './determinants';
import { addIdentity, addProduct, addScaled, oneBodyOnSector, zeroMatrix } from './sector-operators';

/**
 * H − constant that a spinor program stands for, on the determinants of a sector: dense, from the one-body matrices
 * of its rows, so that emitted circuits can be held against it. At most 8 modes; in the program's gauge.
 */
export function spinorProgramOperator(program: SpinorProgram, basis: SectorBasis): ComplexMatrix {
  const total = zeroMatrix(basis.dim);
  for (const item of program.oneBody) addScaled(total, rowsOperator(program, item, 0, 0, basis), 1);
  for (const item of program.items) {
    for (const [face, { sign, lambda }] of item.faces.entries()) {
      const norm = item.rows.reduce((sum, row) => sum + row.faces[face]!.weight, 0);
      for (const square of item.paired ? [0, 1] : [0]) {
        const m = rowsOperator(program, item, face, square, basis);
        const share = (sign * (square === 0 ? 1 : -1) * lambda) / (item.paired ? 2 : 1);
        addProduct(total, m, m, (2 * share) / norm ** 2);
        addIdentity(total, -share);
      }
    }
  }
  return total;
}

/** Σ rows weight·sign·op. */
function rowsOperator(
  { orbitals, partners }: SpinorProgram,
  item: SpinorItem,
  face: number,
  square: number,
  basis: SectorBasis,
): ComplexMatrix {
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
  const out = zeroMatrix(basis.dim);
  addScaled(out, oneBodyOnSector(matrix, basis), 1);
  addIdentity(out, scalar);
  return out;
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

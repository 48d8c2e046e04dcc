import type { SpinorItem, SpinorProgram } from '../encode';
import type { ComplexMatrix } from '../linalg';
import type { SectorBasis } from './determinants';
import { addIdentity, addProduct, addScaled, oneBodyOnSector, zeroMatrix } from './sector-operators';
import { rowsMatrix } from './spinor-rows';

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
  program: SpinorProgram,
  item: SpinorItem,
  face: number,
  square: number,
  basis: SectorBasis,
): ComplexMatrix {
  const { matrix, scalar } = rowsMatrix(program, item, face, square);
  const out = zeroMatrix(basis.dim);
  addScaled(out, oneBodyOnSector(matrix, basis), 1);
  addIdentity(out, scalar);
  return out;
}

import type { RowFace, TripletProgram, TripletRow, VectorProducts } from '../encode';
import {
  isSymmetricPlane,
  type Sector,
  type TripletOperator,
  toSpinOrbitals,
  zeroOperator,
} from '../hamiltonian';
import type { ComplexMatrix } from '../linalg';
import type { SectorBasis } from './determinants';
import { addIdentity, addProduct, addScaled, dagger, oneBodyOnSector, zeroMatrix } from './sector-operators';

/**
 * H − constant that a triplet program stands for, on the determinants of a sector: dense, from the meaning of rows,
 * squares and products on the whole Fock space, so that emitted circuits can be held against it. N ≤ 4.
 */
export function programOperator(program: TripletProgram, basis: SectorBasis): ComplexMatrix {
  const n = program.orbitals;
  const total = zeroMatrix(basis.dim);
  addScaled(total, rowsOperator(n, program.oneBody, 0, 1, basis), 1);
  for (const item of program.items) {
    for (const [face, lambda] of item.lambda.entries()) {
      const norm = item.rows.reduce((sum, row) => sum + row.faces[face]!.weight, 0);
      for (const square of item.paired ? [1, -1] : [1]) {
        const m = rowsOperator(n, item.rows, face, item.paired ? square : 1, basis);
        const share = (item.sign * square * lambda) / (item.paired ? 2 : 1);
        addProduct(total, dagger(m), m, (2 * share) / norm ** 2);
        addIdentity(total, -share);
      }
    }
  }
  if (program.products) addVectorProducts(total, n, program.products, basis);
  return total;
}

/** Σ sign·λ·½{M_m, M_n}, or 2M_m² − 1 for m = n. */
function addVectorProducts(
  total: ComplexMatrix,
  n: number,
  products: VectorProducts,
  basis: SectorBasis,
): void {
  const charges = products.vectors.map((u) =>
    rowsOperator(n, [{ kind: 'S', u, v: u, faces: [{ mu: 0, weight: 1, sign: 1 }] }], 0, 1, basis),
  );
  for (const [p, lambda] of products.lambda.entries()) {
    const [m, k] = [products.first[p]!, products.second[p]!];
    const share = products.sign[p]! * lambda;
    const scale = m === k ? share : 0.5 * share;
    addProduct(total, charges[m]!, charges[k]!, scale);
    addProduct(total, charges[k]!, charges[m]!, scale);
    if (m === k) addIdentity(total, -share);
  }
}

/**
 * Σ rows weight·op. Rows hold traceless Majorana products only: an S row of charge lacks the identity, and an A row
 * of charge has the scalar i u·v where rounding left its vectors not quite orthogonal.
 *
 * @param pairSign - sign of the A rows: −1 in the second square of a pair
 */
function rowsOperator(
  n: number,
  rows: readonly TripletRow[],
  face: number,
  pairSign: number,
  basis: SectorBasis,
): ComplexMatrix {
  const sectors: Record<Sector, TripletOperator> = {
    even: zeroOperator('even', n),
    odd: zeroOperator('odd', n),
  };
  let re = 0;
  let im = 0;
  for (const row of rows) {
    const { mu, weight, sign } = row.faces[face] as RowFace;
    const scale = weight * sign * (row.kind === 'A' ? pairSign : 1);
    const sector: Sector = isSymmetricPlane('even', mu) === (row.kind === 'S') ? 'even' : 'odd';
    const { planes } = sectors[sector];
    for (let p = 0; p < n; p++) {
      for (let q = 0; q < n; q++) {
        planes[(mu * n + p) * n + q]! +=
          row.kind === 'S'
            ? scale * row.u[p]! * row.u[q]!
            : (scale / 2) * (row.u[p]! * row.v[q]! - row.v[p]! * row.u[q]!);
      }
    }
    if (mu !== 0) continue;
    if (row.kind === 'S') re -= scale;
    else im += scale * row.u.reduce((sum, x, p) => sum + x * row.v[p]!, 0);
  }
  const out = zeroMatrix(basis.dim);
  for (const operator of Object.values(sectors))
    addScaled(out, oneBodyOnSector(toSpinOrbitals(operator), basis), 1);
  addIdentity(out, re, im);
  return out;
}

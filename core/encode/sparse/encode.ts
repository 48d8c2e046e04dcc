import type { Residual } from '../../factor';
import type { SpatialHamiltonian, TripletOperator } from '../../hamiltonian';
import type { JobContext } from '../../job';
import { sumLambda } from '../assemble';
import type { Encoding } from '../encoding';
import type { VariantName } from '../variant';
import { chargeRows } from './charge-rows';
import { findCutoff, NOISE, roughCut, visitAll } from './cutoff';
import type { TermKind } from './kinds';
import { diagonalSum, identityOfSquares, sparseOneBody, spinSpinDiagonal } from './one-body';
import { kindSizes, sparseProgram, type TermSizes } from './program';
import { joinedRows } from './quartets';
import { rebuildSparse } from './rebuild';
import { joinSources, ROW_PARTS, type RowSource } from './rows';
import { sectionRows } from './section-rows';
import { type Section, sparseSections } from './sections';

/**
 * Sparse encoding: H as a sum of Majorana products, row by row,
 *
 *     H = c + Σ κ^μ_pq B^μ_pq + two-body rows,    κ^μ_pq = k^μ_pq + Σ_r g^{μ0}_pqrr,    B = T without its constant.
 *
 * κ is all that is quadratic: where the two pairs of a product share one Majorana operator, the product and its reverse
 * cancel. Where they share both, it is a constant. What is left are products of four distinct ones, which each get
 * something from their three pairings.
 *
 * Grouping `joint` joins equal products before the norm is taken, in every part of H: the least λ that a sum of
 * Majorana products has. For a spin-free H it is the closed formula of E. Koridon et al., Phys. Rev. Research 3, 033127
 * (2021). Grouping `-` joins them in the charge part alone, and there only where the smaller λ is worth the further
 * rows; spin-dependent parts are listed coefficient by coefficient, ½ Σ g^μν_pqrs B^μ_pq B^ν_rs over pairs of Hermitian
 * elements, which takes fewer rows and hardly raises λ.
 *
 * Rows are dropped from the lightest up while their sum stays ≤ `threshold`. They are made anew for every pass and
 * never stored.
 */
export async function encodeSparse(
  h: SpatialHamiltonian,
  variant: VariantName,
  threshold: number,
  ctx: JobContext,
): Promise<Encoding> {
  const kappa = sparseOneBody(h);
  const isJoint = variant.grouping === 'joint';
  const source = isJoint
    ? joinSources([oneBodyRows(h, kappa), joinedRows(h)])
    : await groupedRows(h, kappa, threshold, ctx);
  const cutoff = await findCutoff(source, threshold, ctx);
  const tally = await count(source, cutoff, ctx);
  const { n } = kappa;
  const squares = [...(h.g.charge ? [h.g.charge] : []), ...(isJoint ? spinSpinDiagonal(h.g) : [])];
  let constant = h.constant - 0.5 * diagonalSum(h) + identityOfSquares(h, squares);
  for (let p = 0; p < n; p++) constant += kappa.planes[p * n + p]!;
  const { 'one-body.charge': charge, 'one-body.spin': spin, ...twoBody } = tally.lambda;
  const timesSame = sharedRatio(h);
  const coefficients = tally.oneBody + tally.twoBody;
  const terms: TermSizes = {
    orbitals: n,
    coefficients,
    ...kindSizes(tally.kinds),
    sharedPart: tally.total > 0 ? tally.shared / tally.total : 0,
    otherShare: Math.abs(timesSame) / (1 + Math.abs(timesSame)),
  };
  const program = () => sparseProgram(n, constant, source, { cutoff, rows: coefficients }, timesSame);
  return {
    variant,
    shape: {
      kind: 'sparse',
      orbitals: n,
      factors: 0,
      rows: coefficients,
      pairRows: 0,
      oneBodyRows: tally.oneBody,
      oneBodyPairRows: 0,
      maxRowsPerFactor: 0,
      spinDependent: terms.spin,
      terms,
    },
    lambda: sumLambda({ charge: charge ?? 0, spin: spin ?? 0 }, twoBody),
    constant,
    residual: tally.residual,
    rebuild: () => rebuildSparse(h, program(), timesSame),
    sparseProgram: program,
  };
}

/** Spin–other-orbit over spin–same-orbit where one array holds both, else 0. */
function sharedRatio({ g }: SpatialHamiltonian): number {
  const other = g.spinOrbit?.other;
  return other === undefined || other instanceof Float64Array ? 0 : other.timesSame;
}

function oneBodyRows(h: SpatialHamiltonian, kappa: TripletOperator): RowSource {
  return sectionRows(
    sparseSections(h, kappa).filter(({ oneBody }) => oneBody),
    h.orbitals,
  );
}

/**
 * By how much a relative change of the number of rows changes the step: look-ups go with its root, and are some two
 * thirds of the step. Totals of formaldehyde in 8 and 20 orbitals differ by less than 2 % between 0.2 and 0.5.
 */
const COST_OF_ROWS = 0.3;

/** Charge rows joined where that pays, all others coefficient by coefficient. */
async function groupedRows(
  h: SpatialHamiltonian,
  kappa: TripletOperator,
  threshold: number,
  ctx: JobContext,
): Promise<RowSource> {
  const sections = sparseSections(h, kappa);
  const byProducts = sectionRows(sections, h.orbitals);
  const { cutoff, lambda, rows } = await roughCut(byProducts, threshold, ctx);
  const price = { cutoff, perRow: (COST_OF_ROWS * lambda) / Math.max(rows, 1) };
  const isCharge = ({ name }: Section) => name === 'charge';
  return joinSources([
    sectionRows(
      sections.filter((section) => !isCharge(section)),
      h.orbitals,
    ),
    chargeRows(h, price),
  ]);
}

async function count(source: RowSource, cutoff: number, ctx: JobContext) {
  const sums = new Float64Array(ROW_PARTS.length);
  const kinds = new Set<TermKind>();
  let oneBody = 0;
  let twoBody = 0;
  let bound = 0;
  let square = 0;
  let dropped = 0;
  let total = 0;
  let shared = 0;
  await visitAll(source, ctx, (row) => {
    const { weight, kind } = row;
    if (weight <= NOISE) return;
    if (weight <= cutoff) {
      dropped++;
      bound += weight;
      square += row.square;
      return;
    }
    kinds.add(kind);
    if (kind.form === 'pairs' && kind.nu === null) oneBody++;
    else twoBody++;
    total += weight;
    if (kind.form === 'pairs' && kind.shared) shared += weight;
    const { parts } = row;
    for (let part = 0; part < parts.length; part++) sums[part]! += parts[part]! * weight;
  });
  const lambda: Record<string, number> = {};
  for (const [i, part] of ROW_PARTS.entries()) if (source.parts.includes(part)) lambda[part] = sums[i]!;
  const residual: Residual = { frobenius: Math.sqrt(square), oneNormBound: bound, dropped };
  return { lambda, oneBody, twoBody, kinds: [...kinds], total, shared, residual };
}

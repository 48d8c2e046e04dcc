import type { Factorisation } from '../factor';
import type { SpatialHamiltonian } from '../hamiltonian';
import { toSpinOrbitals } from '../hamiltonian';
import type { JobContext } from '../job';
import { hermitianEigenvalues } from '../linalg';
import type { Encoding, EncodingShape, ItemSizes, LambdaByPart } from './encoding';
import { type BlockItems, itemsOf } from './items';
import { KAPPA_ROUNDING, type OneBody, oneBodyPart, oneBodyTriplet } from './one-body';
import { rebuildSpatial } from './rebuild';
import { countAbove, shiftedNorm } from './shift';
import { squareSpinorNorms, tripleSpinorNorms } from './spinor-norms';
import { tripletProgram } from './triplet-program';
import type { VariantName } from './variant';

/** Sizes and weights of the two-body items. */
interface TwoBody {
  readonly parts: Record<string, number>;
  /** ¼ Σ w_t Λ_t² with the sign of w: the constant that T₂ leaves behind. */
  identity: number;
  factors: number;
  rows: number;
  pairRows: number;
  maxRows: number;
  spin: boolean;
}

const PART_NAMES = {
  coulomb: 'coulomb',
  'spin-orbit': 'same-orbit',
  'spin-spin': 'spin-spin',
  even: 'two-body.even',
  odd: 'two-body.odd',
} as const;

function add(two: TwoBody, part: string, lambda: number): void {
  two.parts[part] = (two.parts[part] ?? 0) + lambda;
}

function addRows(two: TwoBody, rows: number, pairRows: number): void {
  two.factors++;
  two.rows += rows;
  two.pairRows += pairRows;
  two.maxRows = Math.max(two.maxRows, rows);
}

function addSquare(two: TwoBody, part: string, w: number, norm: number): void {
  add(two, part, 0.25 * Math.abs(w) * norm * norm);
  two.identity += 0.25 * w * norm * norm;
}

function emptyTwoBody(): TwoBody {
  return { parts: {}, identity: 0, factors: 0, rows: 0, pairRows: 0, maxRows: 0, spin: false };
}

/** Triplet form: λ = ¼ Σ |w| (Σ_μ ‖L^{t,μ}‖_*)², and s Λ_X Λ_Y times its scale for each half of a triple. */
function tripletTwoBody(blocks: readonly BlockItems[]): TwoBody {
  const two = emptyTwoBody();
  for (const entry of blocks) {
    if (entry.kind === 'triples') {
      const { block, items } = entry;
      two.spin ||= block.count > 0;
      items.forEach((item, t) => {
        const s = block.strengths[t]! * item.normX;
        if (block.sameScale !== 0) add(two, 'same-orbit', Math.abs(block.sameScale) * s * item.normSame);
        if (block.otherScale !== 0) add(two, 'other-orbit', Math.abs(block.otherScale) * s * item.normOther);
        addRows(two, item.rows, item.pairRows);
      });
      continue;
    }
    const { block, items } = entry;
    two.spin ||= block.count > 0 && (block.planes.length > 1 || block.sector === 'odd');
    add(two, PART_NAMES[block.part], 0);
    items.forEach((item, t) => {
      addSquare(two, PART_NAMES[block.part], block.weights[t]!, item.norm);
      addRows(two, item.rows, item.pairRows);
    });
  }
  return two;
}

/**
 * Spinor form: λ = ¼ Σ |w| (½ ‖Σ_μ L^{t,μ}⊗σ^μ‖_*)². A row is a Kramers pair (even) or a ± pair (odd) of eigenvectors,
 * which one complex vector serves. Both halves of a triple share rows unless a shift makes their Y differ.
 */
async function spinorTwoBody(blocks: readonly BlockItems[], ctx: JobContext): Promise<TwoBody> {
  const two = emptyTwoBody();
  for (const entry of blocks) {
    if (entry.kind === 'triples') {
      const { block, items } = entry;
      two.spin ||= block.count > 0;
      const plain = block.otherScale !== 0 ? await tripleSpinorNorms(block, items, false, ctx) : null;
      const same = block.sameScale !== 0 ? await tripleSpinorNorms(block, items, true, ctx) : null;
      items.forEach((item, t) => {
        const s = 0.25 * block.strengths[t]!;
        let rows = 0;
        if (same) {
          add(two, 'same-orbit', Math.abs(block.sameScale) * s * same.norms[t]! ** 2);
          rows += same.pairs[t]!;
        }
        if (plain) {
          add(two, 'other-orbit', Math.abs(block.otherScale) * s * plain.norms[t]! ** 2);
          if (!same || item.shift !== 0) rows += plain.pairs[t]!;
        }
        addRows(two, rows, 0);
      });
      continue;
    }
    const { block, items } = entry;
    const part = PART_NAMES[block.part];
    add(two, part, 0);
    const spinFree = block.sector === 'even' && block.planes.length === 1;
    two.spin ||= block.count > 0 && !spinFree;
    const found = spinFree
      ? { norms: items.map((item) => item.norm), pairs: items.map((item) => item.rows) }
      : await squareSpinorNorms(block, items, ctx);
    items.forEach((_, t) => {
      addSquare(two, part, block.weights[t]!, found.norms[t]!);
      addRows(two, found.pairs[t]!, 0);
    });
  }
  return two;
}

/** ½‖κ‖_* over 2N modes, split: charge = ½‖κ⁰⊗1‖_* = ‖κ⁰‖_*, spin = the remainder, which is never negative. */
function oneBodySpinor(part: OneBody) {
  const { n } = part.kappa;
  const charge = shiftedNorm(part.chargeValues, 0, n, 0);
  const values = hermitianEigenvalues(toSpinOrbitals(part.kappa));
  const total = 0.5 * shiftedNorm(values, 0, 2 * n, 0);
  const largest = Math.max(Math.abs(values[0]!), Math.abs(values[2 * n - 1]!));
  const rows = Math.ceil(countAbove(values, 0, 2 * n, 0, KAPPA_ROUNDING * largest) / 2);
  return { charge, spin: Math.max(0, total - charge), rows, pairRows: 0 };
}

/** Triplet or spinor encoding of a Hamiltonian over spatial orbitals. */
export async function encodeSpatial(
  h: SpatialHamiltonian,
  factorisation: Factorisation,
  variant: VariantName,
  ctx: JobContext,
): Promise<Encoding> {
  const shifted = variant.shift !== 'none';
  const triplet = variant.factorisation !== 'spinor';
  const blocks = itemsOf(factorisation.blocks, variant.shift);
  const oneBody = oneBodyPart(h, factorisation, blocks, shifted);
  const one = triplet ? oneBodyTriplet(oneBody) : oneBodySpinor(oneBody);
  const two = triplet ? tripletTwoBody(blocks) : await spinorTwoBody(blocks, ctx);
  const lambda = sumLambda(one, two.parts);
  let trace = 0;
  for (const x of oneBody.chargeValues) trace += x;
  const shape: EncodingShape = {
    kind: triplet ? 'triplet' : 'spinor',
    orbitals: h.orbitals,
    factors: two.factors,
    rows: two.rows,
    pairRows: two.pairRows,
    oneBodyRows: one.rows,
    oneBodyPairRows: one.pairRows,
    maxRowsPerFactor: Math.max(two.maxRows, one.rows),
    spinDependent: two.spin || oneBody.spinNorms.some((a) => a > 0),
    ...(triplet ? { items: itemSizes(h.orbitals, blocks, one) } : {}),
  };
  const constant = oneBody.constant + trace + two.identity;
  return {
    variant,
    shape,
    lambda,
    constant,
    residual: factorisation.residual,
    rebuild: () => rebuildSpatial(h, factorisation, blocks, oneBody),
    ...(triplet ? { program: () => tripletProgram(constant, blocks, oneBody) } : {}),
  };
}

/** Sizes of the items in the order of the program: blocks as they come, the one-body item last. */
function itemSizes(
  orbitals: number,
  blocks: readonly BlockItems[],
  one: { readonly rows: number; readonly pairRows: number },
): ItemSizes {
  const items = blocks.flatMap((entry) => {
    const faced = entry.kind === 'triples' && entry.block.sameScale !== 0 && entry.block.otherScale !== 0;
    return entry.items.map(({ rows, pairRows }) => ({ rows, pairRows, faced }));
  });
  const all = [...items, { rows: one.rows, pairRows: one.pairRows, faced: false }];
  return {
    orbitals,
    rows: Uint32Array.from(all, (item) => item.rows),
    pairRows: Uint32Array.from(all, (item) => item.pairRows),
    twoFaced: Uint8Array.from(all, (item) => (item.faced ? 1 : 0)),
    hasPaired: blocks.some((entry) => entry.kind === 'triples' && entry.items.length > 0),
  };
}

/** λ by part from the one-body figures and the two-body parts. */
export function sumLambda(
  one: { readonly charge: number; readonly spin: number },
  twoBodyParts: Readonly<Record<string, number>>,
): LambdaByPart {
  const oneBody = one.charge + one.spin;
  let twoBody = 0;
  for (const value of Object.values(twoBodyParts)) twoBody += value;
  return {
    oneBody,
    twoBody,
    total: oneBody + twoBody,
    parts: { 'one-body.charge': one.charge, 'one-body.spin': one.spin, ...twoBodyParts },
  };
}

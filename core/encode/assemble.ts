import type { Factorisation } from '../factor';
import type { SpatialHamiltonian } from '../hamiltonian';
import { toSpinOrbitals } from '../hamiltonian';
import type { JobContext } from '../job';
import { hermitianEigenvalues } from '../linalg';
import type { Encoding, EncodingShape, ItemSizes, LambdaByPart } from './encoding';
import { explicitShift } from './explicit-shift';
import { type BlockItems, itemsOf } from './items';
import { KAPPA_ROUNDING, type OneBody, oneBodyPart, oneBodyTriplet, recentred } from './one-body';
import { rebuildSpatial } from './rebuild';
import { countAbove, median, shiftedNorm } from './shift';
import { faceLambda, type SpinorItems, spinorItems } from './spinor-items';
import { sparedBits, spinorProgram, spinorSizes } from './spinor-program';
import { tripletProgram } from './triplet-program';
import type { ShiftAxis, VariantName } from './variant';

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
    if (entry.kind === 'hypercontracted') {
      const { block, products } = entry;
      for (const lambda of products.lambda) add(two, PART_NAMES[block.part], lambda);
      for (let m = 0; m < block.count; m++) two.identity += 0.25 * block.zeta[m * (block.count + 1)]!;
      two.factors += products.lambda.length;
      two.rows += block.count;
      two.maxRows = Math.max(two.maxRows, 1);
      continue;
    }
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

/** Spinor form: λ = ¼ Σ |w| (½ ‖Σ_μ L^{t,μ}⊗σ^μ‖_*)². */
function spinorTwoBody(blocks: readonly SpinorItems[]): TwoBody {
  const two = emptyTwoBody();
  for (const entry of blocks) {
    if (entry.kind === 'triples') {
      const { block, items } = entry;
      two.spin ||= block.count > 0;
      if (block.sameScale !== 0) add(two, 'same-orbit', 0);
      if (block.otherScale !== 0) add(two, 'other-orbit', 0);
      for (const { triple, faces, rows } of items) {
        for (const face of faces) {
          add(two, face.odd ? 'other-orbit' : 'same-orbit', faceLambda(block.strengths[triple]!, face));
        }
        addRows(two, rows, 0);
      }
      continue;
    }
    const { block, items } = entry;
    const part = PART_NAMES[block.part];
    add(two, part, 0);
    items.forEach(({ real, norm, rows }, t) => {
      two.spin ||= !real;
      addSquare(two, part, block.weights[t]!, norm);
      addRows(two, rows, 0);
    });
  }
  return two;
}

/**
 * Most that λ may rise, as a part of it, where κ is listed plane by plane. A row over all 2N modes takes turns of the
 * spin of every orbital: where only κ has such rows, they are a tenth of a step and more.
 */
const DIVIDED = 0.01;

/** λ of all triples. */
function axialLambda(blocks: readonly SpinorItems[]): number {
  let sum = 0;
  for (const entry of blocks) {
    if (entry.kind !== 'triples') continue;
    for (const { triple, faces } of entry.items) {
      for (const face of faces) sum += faceLambda(entry.block.strengths[triple]!, face);
    }
  }
  return sum;
}

/** ½‖κ‖_* over 2N modes, or the sum over its planes ‖κ⁰‖_* + Σ_k ‖κ^k‖_* where that is next to the same. */
function oneBodySpinor(part: OneBody, twoBody: number, hasFullRows: boolean) {
  const { n } = part.kappa;
  const { charge, spin: planesSpin, planeRows } = oneBodyTriplet(part);
  const values = hermitianEigenvalues(toSpinOrbitals(part.kappa));
  const total = 0.5 * shiftedNorm(values, 0, 2 * n, 0);
  const divided = !hasFullRows && charge + planesSpin + twoBody <= (1 + DIVIDED) * (total + twoBody);
  if (divided || planesSpin === 0) {
    const rows = planeRows.reduce((sum, own) => sum + own, 0);
    return { charge, spin: planesSpin, rows, pairRows: 0, list: { whole: null, planes: planeRows } };
  }
  const largest = Math.max(Math.abs(values[0]!), Math.abs(values[2 * n - 1]!));
  // A row is a Kramers pair.
  const rows = Math.ceil(countAbove(values, 0, 2 * n, 0, KAPPA_ROUNDING * largest) / 2);
  // The split of one norm: what spin adds to ‖κ⁰‖_* is never negative.
  const spin = Math.max(0, total - charge);
  return { charge, spin, rows, pairRows: 0, list: { whole: rows, planes: planeRows } };
}

/**
 * κ⁰ about the c₁ that is best for the form: the median of κ⁰ for the norms of single planes, that of κ over 2N modes for
 * the norm of all planes together.
 */
function bestCentre(part: OneBody, electrons: number, twoBody: number, hasFullRows: boolean): OneBody {
  const middle = median(hermitianEigenvalues(toSpinOrbitals(part.kappa)));
  const other = recentred(part, electrons, middle);
  const norm = (own: OneBody) => {
    const { charge, spin } = oneBodySpinor(own, twoBody, hasFullRows);
    return charge + spin;
  };
  return norm(other) < norm(part) ? other : part;
}

/** What the two forms of an encoding differ in. */
interface Form {
  /** The one-body part that it uses. */
  readonly oneBody: OneBody;
  readonly one: {
    readonly charge: number;
    readonly spin: number;
    readonly rows: number;
    readonly pairRows: number;
  };
  readonly two: TwoBody;
  readonly sizes: Pick<EncodingShape, 'items' | 'products' | 'spinors' | 'axialParts'>;
  /** Given the encoding's constant. */
  readonly programs: (constant: number) => Pick<Encoding, 'program' | 'spinorProgram'>;
}

function tripletForm(orbitals: number, blocks: readonly BlockItems[], oneBody: OneBody): Form {
  const one = oneBodyTriplet(oneBody);
  const two = tripletTwoBody(blocks);
  return {
    oneBody,
    one,
    two,
    sizes: { items: itemSizes(orbitals, blocks, one), ...productsPart(blocks, two) },
    programs: (constant) => ({ program: () => tripletProgram(constant, blocks, oneBody) }),
  };
}

/** Vectors of products, and the part of the two-body λ in products of different vectors. */
function productsPart(blocks: readonly BlockItems[], { parts }: TwoBody): Pick<EncodingShape, 'products'> {
  const products = blocks.find((entry) => entry.kind === 'hypercontracted')?.products;
  if (!products) return {};
  const { vectors, first, second, lambda } = products;
  const twoBody = Object.values(parts).reduce((sum, own) => sum + own, 0);
  const ofPairs = lambda.reduce((sum, own, p) => (first[p] === second[p] ? sum : sum + own), 0);
  return { products: { vectors: vectors.length, part: ofPairs / twoBody } };
}

async function spinorForm(
  { orbitals, electrons }: SpatialHamiltonian,
  blocks: readonly BlockItems[],
  given: OneBody,
  shift: ShiftAxis,
  ctx: JobContext,
): Promise<Form> {
  const items: SpinorItems[] = [];
  for (const block of blocks) items.push(await spinorItems(block, ctx));
  const two = spinorTwoBody(items);
  const hasFullRows = items.some(
    (entry) => entry.kind === 'squares' && entry.items.some(({ real }) => !real),
  );
  const twoBody = Object.values(two.parts).reduce((sum, own) => sum + own, 0);
  const oneBody = shift === 'optimised' ? bestCentre(given, electrons, twoBody, hasFullRows) : given;
  const { list, ...one } = oneBodySpinor(oneBody, twoBody, hasFullRows);
  const axialParts =
    hasFullRows || list.whole !== null
      ? null
      : {
          squares: axialLambda(items) / Math.max(twoBody, Number.MIN_VALUE),
          oneBody: one.spin / (one.charge + one.spin),
        };
  const spared = axialParts ? sparedBits({ oneBody: one.charge + one.spin, twoBody }, axialParts) : 0;
  return {
    oneBody,
    one,
    two,
    sizes: {
      spinors: spinorSizes(orbitals, items, list, spared),
      ...(axialParts && spared > 0 ? { axialParts } : {}),
    },
    programs: (constant) => ({ spinorProgram: () => spinorProgram(constant, items, oneBody, list, spared) }),
  };
}

/** Triplet or spinor encoding of a Hamiltonian over spatial orbitals. */
export async function encodeSpatial(
  h: SpatialHamiltonian,
  factorisation: Factorisation,
  variant: VariantName,
  ctx: JobContext,
): Promise<Encoding> {
  const shifted = variant.shift !== 'none';
  const spinor = variant.factorisation === 'spinor';
  const blocks = itemsOf(factorisation.blocks, variant.shift);
  const given = oneBodyPart(h, factorisation, blocks, shifted);
  const { oneBody, one, two, sizes, programs } = spinor
    ? await spinorForm(h, blocks, given, variant.shift, ctx)
    : tripletForm(h.orbitals, blocks, given);
  const lambda = sumLambda(one, two.parts);
  let trace = 0;
  for (const x of oneBody.chargeValues) trace += x;
  const shape: EncodingShape = {
    kind: spinor ? 'spinor' : 'triplet',
    orbitals: h.orbitals,
    factors: two.factors,
    rows: two.rows,
    pairRows: two.pairRows,
    oneBodyRows: one.rows,
    oneBodyPairRows: one.pairRows,
    maxRowsPerFactor: Math.max(two.maxRows, one.rows),
    spinDependent: two.spin || oneBody.spinNorms.some((a) => a > 0),
    ...sizes,
  };
  const constant = oneBody.constant + trace + two.identity;
  return {
    variant,
    shape,
    lambda,
    constant,
    residual: factorisation.residual,
    notes: factorisation.notes,
    rebuild: () => rebuildSpatial(h, factorisation, blocks, oneBody),
    symmetryShift: () => explicitShift(h, blocks, oneBody.shift),
    ...programs(constant),
  };
}

/** Sizes of the items in the order of the program: blocks as they come, the one-body item last. */
function itemSizes(
  orbitals: number,
  blocks: readonly BlockItems[],
  one: { readonly rows: number; readonly pairRows: number },
): ItemSizes {
  const contracted = blocks.find((entry) => entry.kind === 'hypercontracted')?.products;
  const items = blocks.flatMap((entry) => {
    if (entry.kind === 'hypercontracted') return [];
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
    ...(contracted
      ? { products: { count: contracted.lambda.length, vectors: contracted.vectors.length } }
      : {}),
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

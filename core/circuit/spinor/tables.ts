import { SPINOR_KINDS, type SpinorItem, type SpinorProgram, type SpinorSizes } from '../../encode';
import {
  encodedLambda,
  encodedWeights,
  type KeepBits,
  type WeightTables,
  weightTables,
} from '../squares/tables';
import {
  type AngleGroup,
  groupAngles,
  groupBits,
  type Merge,
  type SpinorLayout,
  spinorLayout,
} from './layout';
import { type RoundedSpinorRow, roundedRow, roundRow } from './rounded-row';

export interface SpinorBits extends KeepBits {
  /** b: angles are rounded to the grid 2π/2^b. */
  readonly rotation: number;
}

/** The tables of a spinor encoding, rounded to its bits; addresses as in {@link WeightTables}. */
export interface SpinorTables {
  readonly layout: SpinorLayout;
  readonly weights: WeightTables;
  /** The one-body items are the last. */
  readonly items: readonly SpinorItem[];
  /** By address. */
  readonly rows: ReadonlyMap<number, SpinorTableRow>;
}

export interface SpinorTableRow extends RoundedSpinorRow {
  /** Of the row on each face. */
  readonly signs: readonly (1 | -1)[];
}

/** Sizes of a program's items. */
export function spinorSizesOf(program: SpinorProgram): SpinorSizes {
  const items = [...program.items, ...program.oneBody];
  return {
    orbitals: program.orbitals,
    partners: program.partners,
    oneBodyItems: program.oneBody.length,
    spared: program.spared,
    rows: Uint32Array.from(items, (item) => item.rows.length),
    kinds: Uint8Array.from(items, (item) => SPINOR_KINDS.indexOf(item.kind)),
    twoFaced: Uint8Array.from(items, (item) => (item.faces.length > 1 ? 1 : 0)),
    hasPaired: items.some((item) => item.paired),
  };
}

/** Rounds a program to tables. */
export function spinorTables(
  program: SpinorProgram,
  bits: SpinorBits,
  merge: readonly Merge[],
): SpinorTables {
  const items = [...program.items, ...program.oneBody];
  for (const { faces } of items) {
    // SELECT takes the face itself for what changes.
    if (faces.length > 1 && faces[0]!.odd === faces[1]!.odd) {
      throw new RangeError('the two faces of an item are one even and one odd');
    }
  }
  if (program.oneBody.some(({ faces }) => faces[0]!.odd)) {
    throw new RangeError('the one-body part of a circuit is even');
  }
  const layout = spinorLayout(spinorSizesOf(program), bits.rotation, merge);
  const weights = weightTables(
    items.map(({ faces, rows }) => ({ lambda: faces.map((face) => face.lambda), rows })),
    bits,
  );
  const rows = new Map<number, SpinorTableRow>();
  for (const [t, item] of items.entries()) {
    for (const [j, row] of item.rows.entries()) {
      rows.set(t * 2 ** weights.rowBits + j, {
        ...roundRow(item.kind, row, layout),
        signs: row.faces.map((face) => face.sign),
      });
    }
  }
  return { layout, weights, items, rows };
}

/** Numbers of a group of a row; fewer than the group has where the row does not need them. */
export function groupBit(tables: SpinorTables, group: AngleGroup, address: number, bit: number): boolean {
  const width = groupBits(group, tables.layout);
  const number = tables.rows.get(address)![group][Math.floor(bit / width)] ?? 0;
  return ((number >>> (bit % width)) & 1) === 1;
}

/** Bit of a word of the chain: the angle, in whose low bits and behind which a shared phase stands. */
function wordBit(
  { layout, items }: SpinorTables,
  row: SpinorTableRow,
  address: number,
  bit: number,
): boolean {
  const { angleBits, sharedBits, wordBits, rowBits } = layout;
  const word = Math.floor(bit / wordBits);
  const at = bit % wordBits;
  const isSet = (number: number, place: number) => ((number >>> place) & 1) === 1;
  const sharesPhase = sharedBits > 0 && items[Math.floor(address / 2 ** rowBits)]!.kind === 'axial';
  if (!sharesPhase) return at < angleBits && isSet(row.chain[word]!, at);
  if (at < sharedBits) return isSet(row.phases[word]!, at);
  if (at >= angleBits) return isSet(row.phases[word]!, sharedBits + at - angleBits);
  // The rest of what a coarse step leaves out is put in by SELECT.
  return at >= angleBits - layout.phaseBits && isSet(row.chain[word]!, at);
}

/** Bit of the main table's row: chain, merged groups, sign of the first face, change of the sign on the second. */
export function rowBit(tables: SpinorTables, address: number, bit: number): boolean {
  const { orbitals, chainWidth, merged } = tables.layout;
  const row = tables.rows.get(address)!;
  if (bit < chainWidth) return wordBit(tables, row, address, bit);
  let rest = bit - chainWidth;
  for (const group of merged) {
    if (group === 'shared phases') continue;
    const width = groupAngles(group, orbitals) * groupBits(group, tables.layout);
    if (rest < width) return groupBit(tables, group, address, rest);
    rest -= width;
  }
  // The circuit's centre is 1 − 2n, the row 2n − 1.
  return rest === 0 ? row.signs[0]! > 0 : (row.signs[1] ?? row.signs[0]!) !== row.signs[0]!;
}

/**
 * The program that the tables encode exactly, rounded weights and vectors in place of the given ones. The
 * difference of the two is the whole rounding error.
 */
export function encodedSpinorProgram(program: SpinorProgram, tables: SpinorTables): SpinorProgram {
  const { weights, layout, rows } = tables;
  const encoded = tables.items.map((item, t): SpinorItem => {
    const own = item.faces.map((_, f) => encodedWeights(weights, t, f));
    return {
      ...item,
      faces: item.faces.map((face, f) => ({ ...face, lambda: encodedLambda(weights, t, f) })),
      rows: item.rows.map((row, j) => ({
        ...roundedRow(item.kind, rows.get(t * 2 ** weights.rowBits + j)!, layout),
        faces: row.faces.map((face, f) => ({ ...face, weight: own[f]![j]! })),
      })),
    };
  });
  const inHartree = (item: SpinorItem): SpinorItem => ({
    ...item,
    rows: item.rows.map((row) => ({
      ...row,
      faces: row.faces.map((face) => ({ ...face, weight: face.weight * item.faces[0]!.lambda })),
    })),
  });
  return {
    ...program,
    items: encoded.slice(0, program.items.length),
    oneBody: encoded.slice(program.items.length).map(inHartree),
  };
}

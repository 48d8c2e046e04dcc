import type { TripletItem, TripletProgram } from '../../encode/program';
import { type AliasTable, aliasTable } from '../primitives/alias-sampling';
import { addressBits } from '../primitives/unary-iteration';
import { FACE_FLAGS, IS_PAIR, ROW_FLAGS, type RoundedRow, roundedVector, roundRow } from './rounded-row';

export interface TripletBits {
  /** ℵ of the outer alias table. */
  readonly keep: number;
  /** ℵ of the inner alias tables. */
  readonly innerKeep: number;
  /** b: angles are rounded to the grid 2π/2^b (half a step off zero). */
  readonly rotation: number;
}

/**
 * The tables of a triplet encoding, rounded to its bits. A row's address is item·2^{rowBits} + row number, the
 * one-body item being the last item; the inner alias tables have the face as a further, highest bit.
 */
export interface TripletTables {
  readonly orbitals: number;
  readonly bits: TripletBits;
  readonly items: readonly TripletItem[];
  readonly itemBits: number;
  readonly hasFaces: boolean;
  readonly hasPaired: boolean;
  readonly rowBits: number;
  /** Bits of the row number that each item puts in superposition. */
  readonly sizeBits: Uint8Array;
  /** Over the item number, with the face as highest bit. */
  readonly outer: AliasTable;
  /** By address, face included. */
  readonly inner: readonly (AliasTable & { readonly base: number })[];
  readonly rows: ReadonlyMap<number, RoundedRow>;
  /** Addresses of `rows`, ascending. */
  readonly rowAddresses: Uint32Array;
  /** Bits stored per angle: b − 1. */
  readonly angleBits: number;
  /** Angles and flags of a row. */
  readonly rowWidth: number;
}

/** Rounds a program to tables. */
export function tripletTables(program: TripletProgram, bits: TripletBits): TripletTables {
  const oneBodyWeight = program.oneBody.reduce((sum, row) => sum + row.faces[0]!.weight, 0);
  const oneBody: TripletItem = { sign: 1, paired: false, lambda: [oneBodyWeight], rows: program.oneBody };
  // A rows first: their addresses then have no gaps within an item, which makes for fewer blocks.
  const items = [...program.items, oneBody].map((item) => ({
    ...item,
    rows: [...item.rows.filter((row) => row.kind === 'A'), ...item.rows.filter((row) => row.kind === 'S')],
  }));
  const itemBits = Math.max(1, addressBits(items.length));
  const hasFaces = items.some((item) => item.lambda.length > 1);
  const sizeBits = Uint8Array.from(items, (item) => addressBits(item.rows.length));
  const rowBits = Math.max(1, ...sizeBits);

  const outerWeights = new Float64Array(2 ** (itemBits + (hasFaces ? 1 : 0)));
  const inner: (AliasTable & { base: number })[] = [];
  for (const face of hasFaces ? [0, 1] : [0]) {
    for (const [t, item] of items.entries()) {
      if (item.lambda[face] === undefined) continue;
      const index = face * 2 ** itemBits + t;
      outerWeights[index] = item.lambda[face];
      const weights = item.rows.map((row) => row.faces[face]!.weight);
      inner.push({ ...aliasTable(weights, sizeBits[t]!, bits.innerKeep), base: index * 2 ** rowBits });
    }
  }

  const angleBits = bits.rotation - 1;
  const rows = new Map<number, RoundedRow>();
  for (const [t, item] of items.entries()) {
    for (const [j, row] of item.rows.entries()) {
      rows.set(t * 2 ** rowBits + j, roundRow(row, item.paired, angleBits));
    }
  }
  return {
    orbitals: program.orbitals,
    bits,
    items,
    itemBits,
    hasFaces,
    hasPaired: items.some((item) => item.paired),
    rowBits,
    sizeBits,
    outer: aliasTable(outerWeights, itemBits + (hasFaces ? 1 : 0), bits.keep),
    inner,
    rows,
    rowAddresses: Uint32Array.from(rows.keys()),
    angleBits,
    rowWidth: (program.orbitals - 1) * angleBits + ROW_FLAGS + (hasFaces ? FACE_FLAGS : 0),
  };
}

/** Bit `bit` of the angle table's row at `address`, with the angles of its first or second vector. */
export function rowBit(tables: TripletTables, vector: 'u' | 'v', address: number, bit: number): boolean {
  const row = tables.rows.get(address)!;
  const anglesWidth = (tables.orbitals - 1) * tables.angleBits;
  if (bit >= anglesWidth) return row.flags[bit - anglesWidth]!;
  return ((row[vector][Math.floor(bit / tables.angleBits)]! >>> (bit % tables.angleBits)) & 1) === 1;
}

export const isPairRow = (tables: TripletTables, address: number): boolean =>
  tables.rows.get(address)!.flags[IS_PAIR]!;

/**
 * The program that the tables encode exactly, rounded weights and vectors in place of the given ones. The
 * difference of the two is the whole rounding error.
 */
export function encodedProgram(program: TripletProgram, tables: TripletTables): TripletProgram {
  const { itemBits, rowBits, angleBits, outer, inner, items } = tables;
  const byBase = new Map(inner.map((table) => [table.base, table]));
  const total = items.reduce((sum, item) => sum + item.lambda.reduce((a, b) => a + b, 0), 0);
  const index = (t: number, face: number) => face * 2 ** itemBits + t;
  const encoded = items.map(
    (item, t): TripletItem => ({
      sign: item.sign,
      paired: item.paired,
      lambda: item.lambda.map((_, face) => total * outer.probabilities[index(t, face)]!),
      rows: item.rows.map((row, j) => {
        const rounded = tables.rows.get(t * 2 ** rowBits + j)!;
        const u = roundedVector(rounded.u, angleBits);
        return {
          kind: row.kind,
          u,
          v: row.kind === 'S' ? u : roundedVector(rounded.v, angleBits),
          faces: row.faces.map((face, f) => ({
            mu: face.mu,
            weight: byBase.get(index(t, f) * 2 ** rowBits)?.probabilities[j] ?? 0,
            sign: (face.sign * rounded.turned) as 1 | -1,
          })),
        };
      }),
    }),
  );
  const oneBody = encoded.pop()!;
  return {
    orbitals: program.orbitals,
    constant: program.constant,
    items: encoded,
    oneBody: oneBody.rows.map((row) => ({
      ...row,
      faces: row.faces.map((face) => ({ ...face, weight: face.weight * oneBody.lambda[0]! })),
    })),
  };
}

import type { TripletItem, TripletProgram, TripletRow } from '../../encode/program';
import { roundedVector } from '../squares/rounded-vector';
import {
  encodedLambda,
  encodedProducts,
  encodedWeights,
  type KeepBits,
  type WeightTables,
  weightTables,
} from '../squares/tables';
import { FACE_FLAGS, IS_PAIR, ROW_FLAGS, type RoundedRow, roundRow } from './rounded-row';

export interface TripletBits extends KeepBits {
  /** b: angles are rounded to the grid 2π/2^b (half a step off zero). */
  readonly rotation: number;
}

/** The tables of a triplet encoding, rounded to its bits; addresses as in {@link WeightTables}. */
export interface TripletTables extends WeightTables {
  readonly orbitals: number;
  readonly bits: TripletBits;
  /** The one-body item is the last. */
  readonly items: readonly TripletItem[];
  readonly hasPaired: boolean;
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
  const weights = weightTables(items, bits, program.products);
  const angleBits = bits.rotation - 1;
  const rows = new Map<number, RoundedRow>();
  for (const [t, item] of items.entries()) {
    for (const [j, row] of item.rows.entries()) {
      rows.set(weights.bases[t]! + j, roundRow(row, item.paired, angleBits));
    }
  }
  for (const [m, u] of (program.products?.vectors ?? []).entries()) {
    rows.set(weights.places!.library + m, roundRow(vectorRow(u), false, angleBits));
  }
  return {
    ...weights,
    orbitals: program.orbitals,
    bits,
    items,
    hasPaired: items.some((item) => item.paired),
    rows,
    rowAddresses: Uint32Array.from(rows.keys()).sort(),
    angleBits,
    rowWidth: (program.orbitals - 1) * angleBits + ROW_FLAGS + (weights.hasFaces ? FACE_FLAGS : 0),
  };
}

/** M(u) as a row. */
const vectorRow = (u: Float64Array): TripletRow => ({
  kind: 'S',
  u,
  v: u,
  faces: [{ mu: 0, weight: 1, sign: 1 }],
});

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
  const { bases, angleBits, items, places } = tables;
  const encoded = items.map((item, t): TripletItem => {
    const weights = item.lambda.map((_, face) => encodedWeights(tables, t, face));
    return {
      sign: item.sign,
      paired: item.paired,
      lambda: item.lambda.map((_, face) => encodedLambda(tables, t, face)),
      rows: item.rows.map((row, j) => {
        const rounded = tables.rows.get(bases[t]! + j)!;
        const u = roundedVector(rounded.u, angleBits);
        return {
          kind: row.kind,
          u,
          v: row.kind === 'S' ? u : roundedVector(rounded.v, angleBits),
          faces: row.faces.map((face, f) => ({
            mu: face.mu,
            weight: weights[f]?.[j] ?? 0,
            sign: (face.sign * rounded.turned) as 1 | -1,
          })),
        };
      }),
    };
  });
  const oneBody = encoded.pop()!;
  const products = program.products && {
    ...program.products,
    vectors: program.products.vectors.map((_, m) =>
      roundedVector(tables.rows.get(places!.library + m)!.u, angleBits),
    ),
    lambda: encodedProducts(tables),
  };
  return {
    orbitals: program.orbitals,
    constant: program.constant,
    items: encoded,
    oneBody: oneBody.rows.map((row) => ({
      ...row,
      faces: row.faces.map((face) => ({ ...face, weight: face.weight * oneBody.lambda[0]! })),
    })),
    ...(products ? { products } : {}),
  };
}

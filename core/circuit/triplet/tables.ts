import type { TripletItem, TripletProgram, TripletRow } from '../../encode/program';
import { type AliasTable, aliasTable } from '../primitives/alias-sampling';
import { anglesOf, vectorOf } from '../primitives/majorana';
import { addressBits } from '../primitives/unary-iteration';
import { rowBits } from './rows';

export interface TripletBits {
  /** ℵ of the outer alias table. */
  readonly keep: number;
  /** ℵ of the inner alias tables. */
  readonly innerKeep: number;
  /** b: angles are rounded to the grid 2π/2^b (half a step off zero). */
  readonly rotation: number;
}

/** Bits of a row that ride in the angle table, in this order after the angles. */
export const ROW_FLAGS = ['s', 'r', 'm', 'sign', 'isPair', 'signOfPair'] as const;
/** Further bits where items have two faces: what changes on the second one. */
export const FACE_FLAGS = ['s', 'r', 'm', 'sign'] as const;

/**
 * The tables of a triplet encoding, rounded to its bits. Addresses: item·2^{rowBits} + row; the inner alias
 * tables add the face as highest bit.
 */
export interface TripletTables {
  readonly orbitals: number;
  readonly bits: TripletBits;
  /** Items and the one-body item, which is the last. */
  readonly numItems: number;
  readonly itemBits: number;
  readonly hasFaces: boolean;
  readonly hasPaired: boolean;
  /** Width of the row number. */
  readonly rowBits: number;
  /** Over item index (and face as highest bit). */
  readonly outer: AliasTable;
  /** Bits of the row number each item puts in superposition. */
  readonly sizeBits: Uint8Array;
  readonly inner: {
    readonly addresses: Uint32Array;
    readonly keep: Uint32Array;
    readonly alternate: Uint32Array;
  };
  /** Ascending addresses of rows of squares and of the one-body item. */
  readonly rowAddresses: Uint32Array;
  /** Bits stored per angle: b − 1, since every angle but a sign lies in [0, π). */
  readonly angleBits: number;
  /** Width of a row in the angle table: angles and flags. */
  readonly rowWidth: number;
  /** Bit of the row at an address with the angles of its first (u) or second (v) vector. */
  readonly rowBit: (vector: 'u' | 'v', address: number, bit: number) => boolean;
  readonly isPairRow: (address: number) => boolean;
  readonly itemSign: (item: number) => 1 | -1;
  readonly isPaired: (item: number) => boolean;
  /** The program that these tables encode exactly: rounded weights and vectors. */
  readonly encoded: TripletProgram;
}

/** Rounds a program to tables. */
export function tripletTables(program: TripletProgram, bits: TripletBits): TripletTables {
  const n = program.orbitals;
  const oneBodyLambda = sum(program.oneBody.map((row) => row.faces[0]!.weight));
  const all: TripletItem[] = [
    ...program.items,
    { sign: 1, paired: false, lambda: [oneBodyLambda], rows: program.oneBody },
  ];
  const numItems = all.length;
  const itemBits = addressBits(numItems);
  const hasFaces = all.some((item) => item.lambda.length > 1);
  const hasPaired = all.some((item) => item.paired);
  const sizeBits = Uint8Array.from(all, (item) => addressBits(Math.max(1, item.rows.length)));
  const numRowBits = Math.max(...sizeBits);

  const outerWeights = new Float64Array(numItems + (hasFaces ? 2 ** itemBits : 0));
  for (const [t, item] of all.entries()) {
    for (const [f, lambda] of item.lambda.entries()) outerWeights[f * 2 ** itemBits + t] = lambda;
  }
  const outer = aliasTable(outerWeights, itemBits + (hasFaces ? 1 : 0), bits.keep);
  const lambda = sum(outerWeights);

  const inner = innerTables(all, itemBits, numRowBits, sizeBits, bits.innerKeep);
  const angleBits = bits.rotation - 1;
  const rows = new Map<number, PackedRow>();
  for (const [t, item] of all.entries()) {
    for (const [j, row] of item.rows.entries()) {
      rows.set(t * 2 ** numRowBits + j, packRow(row, item.paired, n, angleBits));
    }
  }
  const anglesWidth = (n - 1) * angleBits;
  const flagCount = ROW_FLAGS.length + (hasFaces ? FACE_FLAGS.length : 0);
  return {
    orbitals: n,
    bits,
    numItems,
    itemBits,
    hasFaces,
    hasPaired,
    rowBits: numRowBits,
    outer,
    sizeBits,
    inner,
    rowAddresses: Uint32Array.from(rows.keys()).sort(),
    angleBits,
    rowWidth: anglesWidth + flagCount,
    rowBit(vector, address, bit) {
      const row = rows.get(address)!;
      if (bit >= anglesWidth) return row.flags[bit - anglesWidth]!;
      return ((row[vector][Math.floor(bit / angleBits)]! >>> (bit % angleBits)) & 1) === 1;
    },
    isPairRow: (address) => rows.get(address)!.flags[4]!,
    itemSign: (t) => all[t]!.sign,
    isPaired: (t) => all[t]!.paired,
    encoded: encodedProgram(program, all, rows, outer, inner, lambda, itemBits, numRowBits, angleBits),
  };
}

interface PackedRow {
  /** N − 1 rounded angles. */
  readonly u: Uint32Array;
  readonly v: Uint32Array;
  readonly flags: readonly boolean[];
  /** −1 where the signs of u and v were turned to bring their last angle into [0, π). */
  readonly turned: 1 | -1;
}

/** Angle number x stands for θ = (x + ½)·2π/2^b; b − 1 bits reach every θ in [0, π). */
const angleStep = (angleBits: number) => (2 * Math.PI) / 2 ** (angleBits + 1);

function packRow(row: TripletRow, paired: boolean, n: number, angleBits: number): PackedRow {
  const u = roundAngles(row.u, angleBits);
  const v = row.kind === 'S' ? u : roundAngles(row.v, angleBits);
  const turned = row.kind === 'S' ? 1 : ((u.sign * v.sign) as 1 | -1);
  const face = (f: number) => {
    const { mu, sign } = row.faces[f] ?? row.faces[0]!;
    const bits = rowBits(row.kind, mu);
    return [bits.s, bits.r, bits.m, (sign * turned < 0 ? 1 : 0) ^ bits.constant];
  };
  const first = face(0);
  const second = face(1);
  const flags = [
    ...first,
    row.kind === 'A' ? 1 : 0,
    row.kind === 'A' && paired ? 1 : 0,
    ...first.map((bit, i) => bit ^ second[i]!),
  ].map((bit) => bit === 1);
  if (n < 1) throw new RangeError('a row needs at least one orbital');
  return { u: u.numbers, v: v.numbers, flags, turned };
}

function roundAngles(vector: Float64Array, angleBits: number): { numbers: Uint32Array; sign: 1 | -1 } {
  const n = vector.length;
  // All angles but the last lie in [0, π] anyway; a negative last component would put that one beyond π.
  const sign = vector[n - 1]! < 0 ? -1 : 1;
  const angles = anglesOf(sign < 0 ? vector.map((x) => -x) : vector);
  const step = angleStep(angleBits);
  const numbers = Uint32Array.from(angles, (theta) =>
    Math.min(2 ** angleBits - 1, Math.max(0, Math.floor(theta / step))),
  );
  return { numbers, sign };
}

function innerTables(
  all: readonly TripletItem[],
  itemBits: number,
  numRowBits: number,
  sizeBits: Uint8Array,
  keepBits: number,
): TripletTables['inner'] {
  const faces = Math.max(...all.map((item) => item.lambda.length));
  const size = faces * 2 ** (itemBits + numRowBits);
  const keep = new Uint32Array(size);
  const alternate = new Uint32Array(size);
  const addresses: number[] = [];
  for (let f = 0; f < faces; f++) {
    for (const [t, item] of all.entries()) {
      // Every listed face, and the first one of items that have no second: the index never goes there.
      if (f >= item.lambda.length) continue;
      const table = aliasTable(
        item.rows.map((row) => row.faces[f]!.weight),
        sizeBits[t]!,
        keepBits,
      );
      const base = (f * 2 ** itemBits + t) * 2 ** numRowBits;
      for (let j = 0; j < 2 ** sizeBits[t]!; j++) {
        addresses.push(base + j);
        keep[base + j] = table.keep[j]!;
        alternate[base + j] = table.alternate[j]!;
      }
    }
  }
  return { addresses: Uint32Array.from(addresses), keep, alternate };
}

/** What the tables hold, written back as a program. */
function encodedProgram(
  program: TripletProgram,
  all: readonly TripletItem[],
  rows: ReadonlyMap<number, PackedRow>,
  outer: AliasTable,
  inner: TripletTables['inner'],
  lambda: number,
  itemBits: number,
  numRowBits: number,
  angleBits: number,
): TripletProgram {
  const step = angleStep(angleBits);
  const unpack = (numbers: Uint32Array) => vectorOf(Float64Array.from(numbers, (x) => (x + 0.5) * step));
  const items = all.map((item, t): TripletItem => {
    const faceLambda = item.lambda.map((_, f) => lambda * outer.probabilities[f * 2 ** itemBits + t]!);
    const probabilities = item.lambda.map((_, f) =>
      innerProbabilities(inner, (f * 2 ** itemBits + t) * 2 ** numRowBits, item.rows.length),
    );
    return {
      sign: item.sign,
      paired: item.paired,
      lambda: faceLambda,
      rows: item.rows.map((row, j): TripletRow => {
        const packed = rows.get(t * 2 ** numRowBits + j)!;
        const u = unpack(packed.u);
        return {
          kind: row.kind,
          u,
          v: row.kind === 'S' ? u : unpack(packed.v),
          faces: row.faces.map((face, f) => ({
            mu: face.mu,
            weight: probabilities[f]?.[j] ?? 0,
            sign: (face.sign * packed.turned) as 1 | -1,
          })),
        };
      }),
    };
  });
  const oneBody = items[items.length - 1]!;
  return {
    orbitals: program.orbitals,
    constant: program.constant,
    items: items.slice(0, -1),
    oneBody: oneBody.rows.map((row) => ({
      ...row,
      faces: row.faces.map((face) => ({ ...face, weight: face.weight * oneBody.lambda[0]! })),
    })),
  };
}

/** Probability of each row from its alias table; padding rows have none by construction. */
function innerProbabilities(inner: TripletTables['inner'], base: number, numRows: number): Float64Array {
  let size = 1;
  while (size < numRows) size *= 2;
  const share = new Float64Array(size);
  let unit = 1;
  // keep is below 2^ℵ; the largest power above every keep value is found from the table itself only when some
  // bucket gives units away, so ℵ is passed implicitly through `bucket`.
  const bucket = inner.keepScale;
  unit = 1 / (size * bucket);
  for (let j = 0; j < size; j++) {
    const alternate = inner.alternate[base + j]!;
    const kept = alternate === j ? bucket : inner.keep[base + j]!;
    share[j]! += kept * unit;
    share[alternate]! += (bucket - kept) * unit;
  }
  return share.subarray(0, numRows);
}

const sum = (values: ArrayLike<number>) => {
  let total = 0;
  for (let i = 0; i < values.length; i++) total += values[i]!;
  return total;
};

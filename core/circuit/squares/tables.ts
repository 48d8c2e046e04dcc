import { type AliasTable, aliasTable } from '../primitives/alias-sampling';
import { addressBits } from '../primitives/unary-iteration';

/** Bits of the alias tables. */
export interface KeepBits {
  /** ℵ of the outer alias table. */
  readonly keep: number;
  /** ℵ of the inner alias tables. */
  readonly innerKeep: number;
}

/** What PREPARE needs of an item: λ of each face, and the weights of its rows on each. */
export interface WeightedItem {
  readonly lambda: readonly number[];
  readonly rows: readonly { readonly faces: readonly { readonly weight: number }[] }[];
}

/**
 * The weights of an encoding by squares, rounded to alias tables. A row's address is item·2^{rowBits} + row number,
 * the one-body item being the last item; the inner alias tables have the face as a further, highest bit.
 */
export interface WeightTables {
  readonly keepBits: KeepBits;
  readonly itemCount: number;
  readonly itemBits: number;
  readonly hasFaces: boolean;
  readonly rowBits: number;
  /** Bits of the row number that each item puts in superposition. */
  readonly sizeBits: Uint8Array;
  /** Over the item number, with the face as highest bit. */
  readonly outer: AliasTable;
  /** By address, face included. */
  readonly inner: readonly (AliasTable & { readonly base: number })[];
  /** Σ λ over all items, what the outer probabilities are parts of; hartree. */
  readonly lambda: number;
}

export function weightTables(items: readonly WeightedItem[], bits: KeepBits): WeightTables {
  const itemBits = Math.max(1, addressBits(items.length));
  const hasFaces = items.some((item) => item.lambda.length > 1);
  const sizeBits = Uint8Array.from(items, (item) => addressBits(item.rows.length));
  const rowBits = Math.max(1, ...sizeBits);
  const outerWeights = new Float64Array(2 ** (itemBits + (hasFaces ? 1 : 0)));
  const inner: (AliasTable & { base: number })[] = [];
  let lambda = 0;
  for (const face of hasFaces ? [0, 1] : [0]) {
    for (const [t, item] of items.entries()) {
      if (item.lambda[face] === undefined) continue;
      const index = face * 2 ** itemBits + t;
      outerWeights[index] = item.lambda[face];
      lambda += item.lambda[face];
      const weights = item.rows.map((row) => row.faces[face]!.weight);
      inner.push({ ...aliasTable(weights, sizeBits[t]!, bits.innerKeep), base: index * 2 ** rowBits });
    }
  }
  return {
    keepBits: { keep: bits.keep, innerKeep: bits.innerKeep },
    itemCount: items.length,
    itemBits,
    hasFaces,
    rowBits,
    sizeBits,
    outer: aliasTable(outerWeights, itemBits + (hasFaces ? 1 : 0), bits.keep),
    inner,
    lambda,
  };
}

/** λ of an item's face as the outer table holds it, hartree. */
export function encodedLambda(tables: WeightTables, t: number, face: number): number {
  return tables.lambda * tables.outer.probabilities[face * 2 ** tables.itemBits + t]!;
}

/** Weights of an item's rows on a face as the inner table holds them, as parts of their sum. */
export function encodedWeights(tables: WeightTables, t: number, face: number): Float64Array {
  const base = (face * 2 ** tables.itemBits + t) * 2 ** tables.rowBits;
  return tables.inner.find((table) => table.base === base)!.probabilities;
}

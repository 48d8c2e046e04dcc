import { type AliasTable, aliasTable } from '../primitives/alias-sampling';
import { type Indexing, indexingOf } from './indexing';

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
 * Products of two row operators out of a library: sign·λ·½{M_m, M_n} for m < n, sign·λ·(2M_m² − 1) for m = n, every
 * M_m of norm 1. All arrays have the same length.
 */
export interface WeightedProducts {
  /** Number of vectors in the library. */
  readonly vectors: { readonly length: number };
  /** m ≤ n of each. */
  readonly first: Uint32Array;
  readonly second: Uint32Array;
  /** Hartree, ≥ 0. */
  readonly lambda: Float64Array;
  readonly sign: Int8Array;
}

/**
 * The weights of an encoding by squares, rounded to alias tables. Rows are numbered as {@link Indexing} says, the
 * one-body item being the last item; the inner alias tables have the face as a further, highest bit.
 */
export interface WeightTables extends Indexing {
  readonly keepBits: KeepBits;
  readonly itemCount: number;
  /** Over the outer index. */
  readonly outer: AliasTable;
  /** By address, face included. */
  readonly inner: readonly (AliasTable & { readonly base: number })[];
  /** Σ λ over all items and products, what the outer probabilities are parts of; hartree. */
  readonly lambda: number;
  /** Those of `places`. */
  readonly products: WeightedProducts | null;
}

export function weightTables(
  items: readonly WeightedItem[],
  bits: KeepBits,
  products: WeightedProducts | null = null,
): WeightTables {
  const indexing = indexingOf({
    rows: Uint32Array.from(items, (item) => item.rows.length),
    twoFaced: Uint8Array.from(items, (item) => (item.lambda.length > 1 ? 1 : 0)),
    ...(products ? { products: { count: products.lambda.length, vectors: products.vectors.length } } : {}),
  });
  const { outerBits, sizeBits, bases, faceOffset, firstEntry, nextFace, places } = indexing;
  const outerWeights = new Float64Array(2 ** outerBits);
  const inner: (AliasTable & { base: number })[] = [];
  let lambda = 0;
  for (const face of indexing.hasFaces ? [0, 1] : [0]) {
    for (const [t, item] of items.entries()) {
      if (item.lambda[face] === undefined) continue;
      outerWeights[firstEntry[t]! + face * nextFace] = item.lambda[face];
      lambda += item.lambda[face];
      const weights = item.rows.map((row) => row.faces[face]!.weight);
      const table = aliasTable(weights, sizeBits[t]!, bits.innerKeep);
      inner.push({ ...table, base: bases[t]! + face * faceOffset });
    }
  }
  if (places && products) {
    outerWeights.set(products.lambda, places.firstProduct);
    for (const x of products.lambda) lambda += x;
    // A vector is drawn for sure.
    const single = aliasTable([1], 0, bits.innerKeep);
    for (let m = 0; m < places.vectors; m++) inner.push({ ...single, base: places.library + m });
  }
  return {
    ...indexing,
    keepBits: { keep: bits.keep, innerKeep: bits.innerKeep },
    itemCount: items.length,
    outer: aliasTable(outerWeights, outerBits, bits.keep),
    inner,
    lambda,
    products,
  };
}

/**
 * A value of the outer index and of its uniform number with which alias sampling draws an entry; null where it never
 * does.
 */
export function drawing(
  { keep, alternate }: Pick<AliasTable, 'keep' | 'alternate'>,
  entry: number,
): { readonly index: number; readonly uniform: number } | null {
  if (keep[entry]! > 0) return { index: entry, uniform: 0 };
  const index = alternate.indexOf(entry);
  return index < 0 ? null : { index, uniform: keep[index]! };
}

/** λ of an item's face as the outer table holds it, hartree. */
export function encodedLambda(tables: WeightTables, t: number, face: number): number {
  return tables.lambda * tables.outer.probabilities[tables.firstEntry[t]! + face * tables.nextFace]!;
}

/** λ of all products as the outer table holds them, hartree. */
export function encodedProducts({ lambda, outer, places }: WeightTables): Float64Array {
  if (!places) return new Float64Array(0);
  return outer.probabilities.slice(places.firstProduct, places.entries).map((p) => lambda * p);
}

/** Weights of an item's rows on a face as the inner table holds them, as parts of their sum. */
export function encodedWeights(tables: WeightTables, t: number, face: number): Float64Array {
  const base = tables.bases[t]! + face * tables.faceOffset;
  return tables.inner.find((table) => table.base === base)!.probabilities;
}

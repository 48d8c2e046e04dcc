import type { Table } from '../primitives/look-up';
import { firstAddresses } from '../primitives/unary-iteration';
import type { Indexing } from './indexing';
import type { WeightTables } from './tables';

/** What a form says of its items. */
export interface ItemFacts {
  readonly weights: WeightTables;
  /** Items that are squared; the others are the one-body part, applied once. */
  readonly isSquare: (t: number) => boolean;
  readonly isNegative: (t: number) => boolean;
  readonly isPaired: (t: number) => boolean;
  /** Flags of an item of the form's own; every item has as many. Those of products are 0. */
  readonly flags: (t: number) => readonly boolean[];
}

/** Wires of an item's data. */
export interface ItemDataWires {
  /** Row bits that are put in superposition. */
  readonly sizes: readonly number[];
  readonly negative: number;
  readonly paired: number;
  /** Whether the rows are reflected between their two uses: 0 for the one-body part and for products. */
  readonly isSquare: number;
  /** Whether there is a second use: 0 for the one-body part. The same wire as `isSquare` where nothing is a product. */
  readonly isTwofold: number;
  /** Face; null where it is part of the outer index, or no item has two. */
  readonly face: number | null;
  /** Address of the first row, and what the second vector of a product has for it, as a difference (XOR). */
  readonly place: readonly number[];
  readonly change: readonly number[];
  /** So many of the first wires of `change` are a product's; of another entry they are sizes and high bits of the place. */
  readonly shared: number;
  /** The form's own. */
  readonly flags: readonly number[];
}

/**
 * Bits of the fields in the order of the wires; the three flags that every form has are one each. Products have no sizes,
 * and their place has no high bits: what tells their two places apart stands there instead.
 */
function widths(indexing: Indexing, flags: number) {
  const { rowBits, hasFaces, places } = indexing;
  if (!places)
    return { sizes: rowBits, common: 3, isTwofold: 0, face: 0, low: 0, change: 0, either: 0, flags };
  const { placeBits, changeBits } = places;
  return {
    sizes: 0,
    common: 3,
    isTwofold: 1,
    face: hasFaces ? 1 : 0,
    low: changeBits,
    change: 0,
    either: Math.max(rowBits + placeBits - changeBits, changeBits),
    flags,
  };
}

export function itemDataWidth(indexing: Indexing, flags: number): number {
  return Object.values(widths(indexing, flags)).reduce((sum, bits) => sum + bits, 0);
}

/** Wires that a product and other entries use for different things. */
export function sharedWires({ rowBits, places }: Indexing): number {
  return places ? Math.min(rowBits + places.placeBits - places.changeBits, places.changeBits) : 0;
}

export function itemDataWires(indexing: Indexing, flags: number, wires: readonly number[]): ItemDataWires {
  let at = 0;
  const take = (bits: number) => {
    at += bits;
    return wires.slice(at - bits, at);
  };
  const bits = widths(indexing, flags);
  const sizes = take(bits.sizes);
  const [negative, paired, isSquare] = take(bits.common) as [number, number, number];
  const isTwofold = take(bits.isTwofold)[0] ?? isSquare;
  const face = take(bits.face)[0] ?? null;
  const low = take(bits.low);
  const either = take(bits.either);
  const own = take(bits.flags);
  const common = { negative, paired, isSquare, isTwofold, face, flags: own, shared: sharedWires(indexing) };
  const { rowBits, places } = indexing;
  if (!places) return { ...common, sizes, place: [], change: [] };
  const { placeBits, changeBits } = places;
  return {
    ...common,
    sizes: either.slice(0, rowBits),
    place: [...low, ...either.slice(rowBits, rowBits + placeBits - changeBits)],
    change: either.slice(0, changeBits),
  };
}

/**
 * The table of item data, by item, or by entry of the outer index where entries say where their rows stand. What stands
 * at an outer index that is no entry is never used.
 */
export function itemDataTable(facts: ItemFacts): Table {
  const { weights } = facts;
  const { rowBits, sizeBits, itemCount, bases, places, products, hasFaces, firstEntry } = weights;
  const isSet = (number: number, b: number) => ((number >>> b) & 1) === 1;
  const own = Array.from({ length: itemCount }, (_, t) => facts.flags(t));
  const sizesOf = (t: number) => Array.from({ length: rowBits }, (_, b) => sizeBits[t]! > b);
  const common = (t: number) => [facts.isNegative(t), facts.isPaired(t), facts.isSquare(t)];
  if (!places || !products) {
    const words = own.map((flags, t) => [...sizesOf(t), ...common(t), ...flags]);
    return {
      addresses: firstAddresses(itemCount),
      width: itemDataWidth(weights, own[0]!.length),
      bit: (t, b) => words[t]![b]!,
    };
  }
  const { placeBits, changeBits } = places;
  const { either } = widths(weights, 0);
  const bitsOf = (number: number, from: number, to: number) =>
    Array.from({ length: to - from }, (_, b) => isSet(number, from + b));
  const padded = (bits: boolean[]) => [...bits, ...new Array<boolean>(either - bits.length).fill(false)];
  const itemWord = (entry: number): boolean[] => {
    const t = firstEntry.findLastIndex((first) => first <= entry);
    const face = hasFaces ? [entry > firstEntry[t]!] : [];
    const base = bases[t]!;
    const upper = [...sizesOf(t), ...bitsOf(base, changeBits, placeBits)];
    return [
      ...common(t),
      facts.isSquare(t),
      ...face,
      ...bitsOf(base, 0, changeBits),
      ...padded(upper),
      ...own[t]!,
    ];
  };
  const productWord = (p: number): boolean[] => {
    const [m, n] = [products.first[p]!, products.second[p]!];
    return [
      products.sign[p]! < 0,
      false,
      m === n,
      true,
      ...(hasFaces ? [false] : []),
      ...bitsOf(m, 0, changeBits),
      ...padded(bitsOf(m ^ n, 0, changeBits)),
      ...own[0]!.map(() => false),
    ];
  };
  // A word is asked for bit by bit, entry after entry.
  let kept = { entry: -1, word: [] as boolean[] };
  return {
    addresses: firstAddresses(places.entries),
    width: itemDataWidth(weights, own[0]!.length),
    bit: (entry, b) => {
      if (kept.entry !== entry) {
        const { firstProduct } = places;
        const isItem = entry < firstProduct;
        const isEntry = entry < places.entries;
        kept = { entry, word: isItem ? itemWord(entry) : isEntry ? productWord(entry - firstProduct) : [] };
      }
      return kept.word[b] ?? false;
    },
  };
}

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
  /** The form's own. */
  readonly flags: readonly number[];
}

/** Bits of the fields in the order of the wires; the three flags that every form has are one each. */
function widths(indexing: Indexing, flags: number) {
  const { rowBits, hasFaces, places } = indexing;
  return {
    sizes: rowBits,
    negative: 1,
    paired: 1,
    isSquare: 1,
    isTwofold: places ? 1 : 0,
    face: places && hasFaces ? 1 : 0,
    place: places?.placeBits ?? 0,
    change: places?.changeBits ?? 0,
    flags,
  };
}

export function itemDataWidth(indexing: Indexing, flags: number): number {
  return Object.values(widths(indexing, flags)).reduce((sum, bits) => sum + bits, 0);
}

export function itemDataWires(indexing: Indexing, flags: number, wires: readonly number[]): ItemDataWires {
  let at = 0;
  const take = (bits: number) => {
    at += bits;
    return wires.slice(at - bits, at);
  };
  const bits = widths(indexing, flags);
  const sizes = take(bits.sizes);
  const [negative, paired, isSquare] = take(3) as [number, number, number];
  return {
    sizes,
    negative,
    paired,
    isSquare,
    isTwofold: take(bits.isTwofold)[0] ?? isSquare,
    face: take(bits.face)[0] ?? null,
    place: take(bits.place),
    change: take(bits.change),
    flags: take(bits.flags),
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
  const word = (t: number): boolean[] => [
    ...Array.from({ length: rowBits }, (_, b) => sizeBits[t]! > b),
    facts.isNegative(t),
    facts.isPaired(t),
    facts.isSquare(t),
  ];
  if (!places || !products) {
    const words = own.map((flags, t) => [...word(t), ...flags]);
    return {
      addresses: firstAddresses(itemCount),
      width: itemDataWidth(weights, own[0]!.length),
      bit: (t, b) => words[t]![b]!,
    };
  }
  const place = (at: number, change: number) => [
    ...Array.from({ length: places.placeBits }, (_, b) => isSet(at, b)),
    ...Array.from({ length: places.changeBits }, (_, b) => isSet(change, b)),
  ];
  const itemWord = (entry: number): boolean[] => {
    const t = firstEntry.findLastIndex((first) => first <= entry);
    const face = hasFaces ? [entry > firstEntry[t]!] : [];
    return [...word(t), facts.isSquare(t), ...face, ...place(bases[t]!, 0), ...own[t]!];
  };
  const productWord = (p: number): boolean[] => {
    const [m, n] = [products.first[p]!, products.second[p]!];
    return [
      ...new Array<boolean>(rowBits).fill(false),
      products.sign[p]! < 0,
      false,
      m === n,
      true,
      ...(hasFaces ? [false] : []),
      ...place(places.library + m, m ^ n),
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

import type { WeightTables } from '../../circuit';
import { type ArrayLayout, joined, type Numbers, type Pieces, type Sizes, whole } from './arrays';
import type { StoredTables } from './form';

/** What all forms by squares say of PREPARE. */
export const SQUARES_CONVENTIONS = {
  prepare:
    'lambda of an item on a face = sizes.outerLambda * outer probability of the outer index that prepare_table gives. The probability of row j of the item on that face is that of bucket j of the inner table whose index bits n and first bucket prepare_table gives.',
  alias:
    'bucket i of 2^n keeps keep[i] of 2^b units for i and gives the rest to alternate[i]: probability = units / 2^(n + b), with b = bits.keep in the outer table and bits.innerKeep in the inner ones, whose alternates count from their own first bucket.',
} as const;

/** Arrays that all forms by squares have. */
export const SQUARES_ARRAYS: readonly ArrayLayout[] = [
  { name: 'item_paired', type: '|u1', shape: ['items'], meaning: '1 where an item is paired' },
  { name: 'item_rows', type: '<u4', shape: ['items'], meaning: 'rows of each item' },
  {
    name: 'prepare_table',
    type: '<u4',
    shape: ['itemFaces', 5],
    meaning:
      'each face of each item: item, face, outer index, index bits of its inner alias table, first bucket of it',
  },
  {
    name: 'outer_keep',
    type: '<u4',
    shape: ['outerBuckets'],
    meaning: 'alias table over the outer index: keep values',
  },
  {
    name: 'outer_alternate',
    type: '<u4',
    shape: ['outerBuckets'],
    meaning: 'alias table over the outer index: alternates',
  },
  {
    name: 'inner_keep',
    type: '<u4',
    shape: ['innerBuckets'],
    meaning: 'buckets of all inner alias tables: keep values',
  },
  {
    name: 'inner_alternate',
    type: '<u4',
    shape: ['innerBuckets'],
    meaning: 'buckets of all inner alias tables: alternates',
  },
  {
    name: 'row_address',
    type: '<u4',
    shape: ['rows'],
    meaning: 'address of each row in the tables of the circuit, item by item',
  },
];

const COLUMNS = 5;

/** What the tables need of an item. */
export interface WrittenItem {
  readonly faces: number;
  readonly paired: boolean;
  readonly rows: number;
}

/** The arrays of {@link SQUARES_ARRAYS}, their sizes, and the addresses of all rows, item by item. */
export function squaresData(
  weights: WeightTables,
  items: readonly WrittenItem[],
): { readonly sizes: Sizes; readonly data: Record<string, Pieces>; readonly addresses: Uint32Array } {
  const { outer, bases, faceOffset, firstEntry, nextFace } = weights;
  const tableAt = new Map(weights.inner.map((table) => [table.base, table]));
  const table: number[] = [];
  const inner: (typeof weights.inner)[number][] = [];
  let buckets = 0;
  items.forEach((item, t) => {
    for (let face = 0; face < item.faces; face++) {
      const own = tableAt.get(bases[t]! + face * faceOffset)!;
      table.push(t, face, firstEntry[t]! + face * nextFace, own.indexBits, buckets);
      inner.push(own);
      buckets += own.keep.length;
    }
  });
  const addresses = new Uint32Array(items.reduce((sum, item) => sum + item.rows, 0));
  let at = 0;
  items.forEach((item, t) => {
    for (let j = 0; j < item.rows; j++) addresses[at++] = bases[t]! + j;
  });
  return {
    addresses,
    sizes: {
      items: items.length,
      rows: addresses.length,
      faces: items.reduce((most, item) => Math.max(most, item.faces), 1),
      itemFaces: table.length / COLUMNS,
      outerLambda: weights.lambda,
      outerBuckets: outer.keep.length,
      innerBuckets: buckets,
    },
    data: {
      item_paired: whole(Uint8Array.from(items, (item) => (item.paired ? 1 : 0))),
      item_rows: whole(Uint32Array.from(items, (item) => item.rows)),
      prepare_table: whole(Uint32Array.from(table)),
      outer_keep: whole(outer.keep),
      outer_alternate: whole(outer.alternate),
      inner_keep: joined(inner.map(({ keep }) => keep)),
      inner_alternate: joined(inner.map(({ alternate }) => alternate)),
      row_address: whole(addresses),
    },
  };
}

/** Sum of the weights of rows with one face. */
export const weightOf = (
  rows: readonly { readonly faces: readonly { readonly weight: number }[] }[],
): number => rows.reduce((sum, row) => sum + row.faces[0]!.weight, 0);

/** An item as PREPARE knows it. */
export interface StoredItem {
  readonly paired: boolean;
  /** Position of its first row in arrays over all rows. */
  readonly first: number;
  readonly rows: number;
  readonly faces: readonly {
    /** Hartree. */
    readonly lambda: number;
    /** Of the rows, and of places behind them; they sum to 1. */
    readonly probabilities: Float64Array;
  }[];
}

/** The items that written alias tables stand for, and the outer probabilities. */
export async function readSquares(
  stored: StoredTables,
): Promise<{ readonly items: StoredItem[]; readonly outer: Float64Array }> {
  const items = stored.size('items');
  const total = stored.size('outerLambda');
  const buckets = stored.size('outerBuckets');
  const paired = await stored.array('item_paired', 0, 2);
  const rows = await stored.array('item_rows');
  const table = await stored.array('prepare_table');
  const outerBits = stored.bits('keep');
  const innerBits = stored.bits('innerKeep');
  const outerKeep = await stored.array('outer_keep', 0, 2 ** outerBits);
  const outerAlternate = await stored.array('outer_alternate', 0, buckets);
  const outer = probabilities(outerKeep, outerAlternate, 0, buckets, outerBits);
  const innerKeep = await stored.array('inner_keep', 0, 2 ** innerBits);
  const innerAlternate = await stored.array('inner_alternate');
  await stored.array('row_address');

  const faces: StoredItem['faces'][number][][] = Array.from({ length: items }, () => []);
  for (let i = 0; i < table.length; i += COLUMNS) {
    const [item, face, index, bits, from] = table.subarray(i, i + COLUMNS) as unknown as number[];
    const own = faces[item!];
    const size = 2 ** bits!;
    if (own?.length !== face || index! >= buckets || from! + size > innerKeep.length || size < rows[item!]!) {
      stored.refuse(
        'prepare_table',
        `item ${item}, face ${face}, outer index ${index}, ${size} buckets from ${from}`,
        `faces of ${items} items in turn, outer indices below ${buckets}, at least a bucket a row, buckets below ${innerKeep.length}`,
      );
    }
    for (let j = from!; j < from! + size; j++) {
      if (innerAlternate[j]! >= size) {
        stored.refuse('inner_alternate', `${innerAlternate[j]} at position ${j}`, `a number below ${size}`);
      }
    }
    own.push({
      lambda: total * outer[index!]!,
      probabilities: probabilities(innerKeep, innerAlternate, from!, size, innerBits),
    });
  }
  let first = 0;
  const found = faces.map((own, t): StoredItem => {
    if (own.length === 0) stored.refuse('prepare_table', `no face of item ${t}`, 'one or more');
    const item = { paired: paired[t] === 1, first, rows: rows[t]!, faces: own };
    first += rows[t]!;
    return item;
  });
  if (first !== stored.size('rows')) {
    stored.refuse('item_rows', `${first} rows in all`, `${stored.size('rows')}, as sizes.rows says`);
  }
  return { items: found, outer };
}

/** What each of `size` buckets from `from` is drawn with. */
export function probabilities(
  keep: Numbers,
  alternate: Numbers,
  from: number,
  size: number,
  keepBits: number,
): Float64Array {
  const units = new Float64Array(size);
  const bucket = 2 ** keepBits;
  for (let i = 0; i < size; i++) {
    units[i]! += keep[from + i]!;
    units[alternate[from + i]!]! += bucket - keep[from + i]!;
  }
  return units.map((x) => x / (size * bucket));
}

import { addressBits } from '../primitives/unary-iteration';

/** Sizes of the items of an encoding by squares, the one-body item last. */
export interface SquaresSizes {
  /** Rows of each item. */
  readonly rows: Uint32Array;
  /** 1 where the item has two faces. */
  readonly twoFaced: Uint8Array;
  /** Whether any item is a pair of squares. */
  readonly hasPaired: boolean;
  /** Products of two vectors out of a library of rows, further entries of the outer index; absent: none. */
  readonly products?: { readonly count: number; readonly vectors: number };
}

/**
 * How items and rows are numbered.
 *
 * Without products the outer index is the item, with the face as highest bit, and the address of a row
 * item·2^{rowBits} + row: no gate computes it, and gaps cost nothing. Products are many and have no rows of their own,
 * so with them every entry (face of an item, or product) says where its rows stand: buckets of 2^{size} addresses side
 * by side, the library of vectors in one, and the address is place ⊕ row. The face then is a datum of the entry too.
 */
export interface Indexing {
  /** Bits of the outer index, the face not counted. */
  readonly itemBits: number;
  /** Of the outer index in all. */
  readonly outerBits: number;
  readonly rowBits: number;
  /** Bits of the row number that each item puts in superposition. */
  readonly sizeBits: Uint8Array;
  readonly hasFaces: boolean;
  /** Address of each item's first row. */
  readonly bases: Uint32Array;
  /** What the second face adds to an address of the inner alias tables. */
  readonly faceOffset: number;
  /** Outer index of each item's first face, and what the second one adds to it. */
  readonly firstEntry: Uint32Array;
  readonly nextFace: number;
  readonly places: Places | null;
}

/** Where the rows of entries stand, if entries say so themselves. */
export interface Places {
  /** Faces of items, then products. */
  readonly entries: number;
  /** Outer index of the first product. */
  readonly firstProduct: number;
  /** Bits of a row's address. */
  readonly placeBits: number;
  /** Vectors of the library, and the address of the first. */
  readonly vectors: number;
  readonly library: number;
  /** Bits in which the addresses of two vectors may differ. */
  readonly changeBits: number;
}

export function indexingOf(sizes: Pick<SquaresSizes, 'rows' | 'twoFaced' | 'products'>): Indexing {
  const { rows, twoFaced, products } = sizes;
  const sizeBits = Uint8Array.from(rows, (count) => addressBits(count));
  const rowBits = Math.max(1, ...sizeBits);
  const hasFaces = twoFaced.includes(1);
  const common = { rowBits, sizeBits, hasFaces };
  if (!products) {
    const itemBits = Math.max(1, addressBits(rows.length));
    return {
      ...common,
      itemBits,
      outerBits: itemBits + (hasFaces ? 1 : 0),
      bases: Uint32Array.from(rows, (_, t) => t * 2 ** rowBits),
      faceOffset: 2 ** (itemBits + rowBits),
      firstEntry: Uint32Array.from(rows, (_, t) => t),
      nextFace: 2 ** itemBits,
      places: null,
    };
  }
  let firstProduct = 0;
  const firstEntry = Uint32Array.from(rows, (_, t) => {
    const entry = firstProduct;
    firstProduct += twoFaced[t] === 1 ? 2 : 1;
    return entry;
  });
  const entries = firstProduct + products.count;
  const itemBits = Math.max(1, addressBits(entries));
  const changeBits = addressBits(products.vectors);
  const { bases, end } = packed(sizeBits, changeBits);
  const placeBits = Math.max(rowBits, addressBits(end));
  return {
    ...common,
    itemBits,
    outerBits: itemBits,
    bases,
    faceOffset: 2 ** placeBits,
    firstEntry,
    nextFace: 1,
    places: { entries, firstProduct, placeBits, vectors: products.vectors, library: 0, changeBits },
  };
}

/** The library first, then buckets of 2^{bits} addresses, the widest first: each stands at a multiple of its width. */
function packed(sizeBits: Uint8Array, changeBits: number) {
  const order = Array.from(sizeBits, (bits, t) => ({ bits, t }));
  order.sort((a, b) => b.bits - a.bits || a.t - b.t);
  const widest = 2 ** order[0]!.bits;
  let end = Math.ceil(2 ** changeBits / widest) * widest;
  const bases = new Uint32Array(sizeBits.length);
  for (const { bits, t } of order) {
    bases[t] = end;
    end += 2 ** bits;
  }
  return { bases, end };
}

/** Addresses of the first `counts[t]` rows of every item that `keep` lets through, ascending. */
export function raggedAddresses(
  counts: ArrayLike<number>,
  bases: Uint32Array,
  keep: (t: number) => boolean = () => true,
): Uint32Array {
  let size = 0;
  for (let t = 0; t < counts.length; t++) if (keep(t)) size += counts[t]!;
  const found = new Uint32Array(size);
  let [at, ascending] = [0, true];
  for (let t = 0; t < counts.length; t++) {
    if (!keep(t) || counts[t] === 0) continue;
    ascending &&= at === 0 || found[at - 1]! < bases[t]!;
    for (let j = 0; j < counts[t]!; j++) found[at++] = bases[t]! + j;
  }
  return ascending ? found : found.sort();
}

/** Two lists of addresses as one, ascending. */
export function merged(a: Uint32Array, b: Uint32Array): Uint32Array {
  if (b.length === 0) return a;
  const all = new Uint32Array(a.length + b.length);
  all.set(a);
  all.set(b, a.length);
  return all.sort();
}

/** Addresses of the library. */
export function libraryAddresses(places: Places | null): Uint32Array {
  return Uint32Array.from({ length: places?.vectors ?? 0 }, (_, m) => places!.library + m);
}

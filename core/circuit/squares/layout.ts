import { addressBits, firstAddresses } from '../primitives/unary-iteration';

/** Sizes of the items of an encoding by squares, the one-body item last. */
export interface SquaresSizes {
  /** Rows of each item. */
  readonly rows: Uint32Array;
  /** 1 where the item has two faces. */
  readonly twoFaced: Uint8Array;
  /** Whether any item is a pair of squares. */
  readonly hasPaired: boolean;
}

/** Addresses of the tables that PREPARE reads, from sizes alone: those of the tables that are filled. */
export interface SquaresLayout {
  readonly itemBits: number;
  readonly rowBits: number;
  readonly hasFaces: boolean;
  readonly hasPaired: boolean;
  /** Whether all items put the same number of row bits in superposition. */
  readonly equalSizes: boolean;
  readonly outerAddresses: Uint32Array;
  readonly itemAddresses: Uint32Array;
  readonly innerAddresses: Uint32Array;
  readonly rowAddresses: Uint32Array;
}

export function squaresLayout(sizes: SquaresSizes): SquaresLayout {
  const { rows, twoFaced, hasPaired } = sizes;
  const itemBits = Math.max(1, addressBits(rows.length));
  const sizeBits = Uint8Array.from(rows, (count) => addressBits(count));
  const rowBits = Math.max(1, ...sizeBits);
  const hasFaces = twoFaced.includes(1);
  const buckets = Uint32Array.from(sizeBits, (b) => 2 ** b);
  const second = raggedAddresses(buckets, rowBits, (t) => twoFaced[t] === 1);
  return {
    itemBits,
    rowBits,
    hasFaces,
    hasPaired,
    equalSizes: sizeBits.every((b) => b === rowBits),
    outerAddresses: firstAddresses(2 ** (itemBits + (hasFaces ? 1 : 0))),
    itemAddresses: firstAddresses(rows.length),
    innerAddresses: Uint32Array.from([
      ...raggedAddresses(buckets, rowBits),
      ...second.map((address) => address + 2 ** (itemBits + rowBits)),
    ]),
    rowAddresses: raggedAddresses(rows, rowBits),
  };
}

/** item·2^{rowBits} + row number for the first `counts[t]` rows of every item that `keep` lets through. */
export function raggedAddresses(
  counts: ArrayLike<number>,
  rowBits: number,
  keep: (t: number) => boolean = () => true,
): Uint32Array {
  const out: number[] = [];
  for (let t = 0; t < counts.length; t++) {
    if (keep(t)) for (let j = 0; j < counts[t]!; j++) out.push(t * 2 ** rowBits + j);
  }
  return Uint32Array.from(out);
}

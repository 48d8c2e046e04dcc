import type { ItemSizes, TripletItem, TripletProgram } from '../../encode';
import { addressBits, firstAddresses } from '../primitives/unary-iteration';
import { FACE_FLAGS, ROW_FLAGS } from './rounded-row';
import type { TripletBits } from './tables';

/** Sizes of a program's items. */
export function sizesOf(program: TripletProgram): ItemSizes {
  const oneBody: Pick<TripletItem, 'rows' | 'lambda'> = { rows: program.oneBody, lambda: [0] };
  const items = [...program.items, oneBody];
  return {
    orbitals: program.orbitals,
    rows: Uint32Array.from(items, (item) => item.rows.length),
    pairRows: Uint32Array.from(items, (item) => item.rows.filter((row) => row.kind === 'A').length),
    twoFaced: Uint8Array.from(items, (item) => (item.lambda.length > 1 ? 1 : 0)),
    hasPaired: program.items.some((item) => item.paired),
  };
}

/**
 * The addresses and widths of the four kinds of tables of a triplet walk, from sizes alone: the same as those of
 * the tables that are filled (tests compare them).
 */
export interface TripletLayout {
  readonly itemBits: number;
  readonly rowBits: number;
  readonly hasFaces: boolean;
  /** Whether all items put the same number of row bits in superposition. */
  readonly equalSizes: boolean;
  readonly angleBits: number;
  /** Angles of one vector. */
  readonly anglesWidth: number;
  /** Angles and flags. */
  readonly rowWidth: number;
  readonly outerAddresses: Uint32Array;
  readonly itemAddresses: Uint32Array;
  readonly innerAddresses: Uint32Array;
  readonly rowAddresses: Uint32Array;
  readonly pairAddresses: Uint32Array;
}

export function tripletLayout(sizes: ItemSizes, bits: Pick<TripletBits, 'rotation'>): TripletLayout {
  const { rows, pairRows, twoFaced, orbitals } = sizes;
  const itemBits = Math.max(1, addressBits(rows.length));
  const sizeBits = Uint8Array.from(rows, (count) => addressBits(count));
  const rowBits = Math.max(1, ...sizeBits);
  const hasFaces = twoFaced.includes(1);
  const angleBits = bits.rotation - 1;
  const anglesWidth = (orbitals - 1) * angleBits;
  const ragged = (counts: ArrayLike<number>, keep: (t: number) => boolean, base = 0) => {
    const out: number[] = [];
    for (let t = 0; t < counts.length; t++) {
      if (keep(t)) for (let j = 0; j < counts[t]!; j++) out.push(base + t * 2 ** rowBits + j);
    }
    return out;
  };
  const buckets = Uint32Array.from(sizeBits, (b) => 2 ** b);
  return {
    itemBits,
    rowBits,
    hasFaces,
    equalSizes: sizeBits.every((b) => b === rowBits),
    angleBits,
    anglesWidth,
    rowWidth: anglesWidth + ROW_FLAGS + (hasFaces ? FACE_FLAGS : 0),
    outerAddresses: firstAddresses(2 ** (itemBits + (hasFaces ? 1 : 0))),
    itemAddresses: firstAddresses(rows.length),
    innerAddresses: Uint32Array.from([
      ...ragged(buckets, () => true),
      ...ragged(buckets, (t) => twoFaced[t] === 1, 2 ** (itemBits + rowBits)),
    ]),
    rowAddresses: Uint32Array.from(ragged(rows, () => true)),
    pairAddresses: Uint32Array.from(ragged(pairRows, () => true)),
  };
}

import { firstAddresses } from '../primitives/unary-iteration';
import {
  type Indexing,
  indexingOf,
  libraryAddresses,
  merged,
  raggedAddresses,
  type SquaresSizes,
} from './indexing';

/** Addresses of the tables that PREPARE reads, from sizes alone: those of the tables that are filled. */
export interface SquaresLayout extends Indexing {
  readonly hasPaired: boolean;
  /** Whether all entries put the same number of row bits in superposition. */
  readonly equalSizes: boolean;
  readonly outerAddresses: Uint32Array;
  /** Empty where the outer PREPARE reads the data of an entry. */
  readonly itemAddresses: Uint32Array;
  readonly innerAddresses: Uint32Array;
  readonly rowAddresses: Uint32Array;
  /** Bits of a row's address that rows of one item differ in, or all of them: a table is read 2^these rows at a time at most. */
  readonly blockBits: number;
}

export function squaresLayout(sizes: SquaresSizes): SquaresLayout {
  const { rows, twoFaced, hasPaired } = sizes;
  const indexing = indexingOf(sizes);
  const { sizeBits, rowBits, bases, faceOffset, places } = indexing;
  const buckets = Uint32Array.from(sizeBits, (b) => 2 ** b);
  const library = libraryAddresses(places);
  const second = raggedAddresses(buckets, bases, (t) => twoFaced[t] === 1);
  return {
    ...indexing,
    hasPaired,
    equalSizes: !places && sizeBits.every((b) => b === rowBits),
    outerAddresses: firstAddresses(2 ** indexing.outerBits),
    itemAddresses: firstAddresses(places ? 0 : rows.length),
    innerAddresses: merged(
      merged(raggedAddresses(buckets, bases), library),
      second.map((address) => address + faceOffset),
    ),
    rowAddresses: merged(raggedAddresses(rows, bases), library),
    blockBits: places ? places.placeBits : rowBits,
  };
}

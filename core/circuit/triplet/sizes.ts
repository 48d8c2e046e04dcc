import type { ItemSizes, TripletItem, TripletProgram } from '../../encode';
import { raggedAddresses } from '../squares/indexing';
import { type SquaresLayout, squaresLayout } from '../squares/layout';
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
    ...(program.products
      ? { products: { count: program.products.lambda.length, vectors: program.products.vectors.length } }
      : {}),
  };
}

/** Addresses and widths of the tables of a triplet walk, from sizes alone: those of the tables that are filled. */
export interface TripletLayout extends SquaresLayout {
  readonly angleBits: number;
  /** Angles of one vector. */
  readonly anglesWidth: number;
  /** Angles and flags. */
  readonly rowWidth: number;
  readonly pairAddresses: Uint32Array;
}

export function tripletLayout(sizes: ItemSizes, bits: Pick<TripletBits, 'rotation'>): TripletLayout {
  const squares = squaresLayout(sizes);
  const angleBits = bits.rotation - 1;
  const anglesWidth = (sizes.orbitals - 1) * angleBits;
  return {
    ...squares,
    angleBits,
    anglesWidth,
    rowWidth: anglesWidth + ROW_FLAGS + (squares.hasFaces ? FACE_FLAGS : 0),
    pairAddresses: raggedAddresses(sizes.pairRows, squares.bases),
  };
}

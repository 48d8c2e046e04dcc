import { bestBlock } from '../formulas';
import { borrowedLookUpToffoli } from '../primitives/borrowed-look-up';
import { type Blocks, countBlocks, erasureToffoli, lookUpToffoli } from '../primitives/look-up';
import type { LookupPolicy } from '../recipes/scope';

/** A table whose blocks are to be chosen. */
export interface ChoosableTable {
  readonly addresses: Uint32Array;
  readonly width: number;
  /** Largest block: the low address bits that a block takes must be those of one item. */
  readonly limit: number;
  readonly controlled?: boolean;
  /** Takes the block that the policy gives, if it gives one. */
  readonly main?: boolean;
  /** Toffoli that reading in blocks of k on clean wires brings elsewhere. */
  readonly extra?: (k: number) => number;
  /** Wires that may be borrowed. @defaultValue 0 */
  readonly idle?: number;
}

/**
 * Blocks with the fewest Toffoli: ⌈rows/k⌉ falls and b(k − 1) rises with k. `plain` reads every table row by row, and
 * so does `dirty` where too few wires are idle to be worth borrowing.
 *
 * @param limit - largest k·width any look-up may hold, in wires, or null.
 */
export function chooseTableBlocks(
  table: ChoosableTable,
  policy: Pick<LookupPolicy, 'mode' | 'block'>,
  limit: number | null,
): Blocks {
  const { addresses, width, limit: largest, controlled = false, main = false, extra } = table;
  if (addresses.length === 0) return { read: 1, erase: 1 };
  const eraseBlock = bestBlock(largest, (k) => erasureToffoli(countBlocks(addresses, k), k, controlled));
  if (policy.mode === 'dirty') {
    const given = main && policy.block !== 'auto' ? policy.block : null;
    const sizes = { ...table, controlled, blocksOf: (k: number) => countBlocks(addresses, k) };
    return { ...borrowedBlocks(sizes, given, limit), erase: eraseBlock };
  }
  const best = () =>
    bestBlock(
      largest,
      (k) => lookUpToffoli(countBlocks(addresses, k), width, k, controlled) + (extra?.(k) ?? 0),
      (k) => k <= largest && (limit === null || k === 1 || k * width <= limit),
    );
  const read =
    policy.mode === 'plain' ? 1 : main && policy.block !== 'auto' ? Math.min(policy.block, largest) : best();
  return { read, erase: eraseBlock };
}

/** A table that may be read through borrowed wires. */
export interface BorrowingTable extends Pick<ChoosableTable, 'width' | 'limit' | 'controlled' | 'idle'> {
  /** Number of blocks of k rows. */
  readonly blocksOf: (k: number) => number;
}

/**
 * The cheapest way through borrowed wires, or row by row.
 *
 * @param given - the only k to try, or null.
 * @param limit - most flags of low address bits, in wires, or null.
 */
export function borrowedBlocks(
  { blocksOf, width, limit: largest, controlled = false, idle = 0 }: BorrowingTable,
  given: number | null,
  limit: number | null,
): Omit<Blocks, 'erase'> {
  let best: Omit<Blocks, 'erase'> = { read: 1 };
  let least = lookUpToffoli(blocksOf(1), width, 1, controlled);
  for (let k = 2; k <= largest && k - 1 <= idle && k <= (limit ?? k); k *= 2) {
    if (given !== null && k !== given) continue;
    const blocks = blocksOf(k);
    const widest = Math.min(width, Math.floor(idle / (k - 1)));
    // Of the slices that make as many passes, the narrowest is the cheapest.
    for (let slices = Math.ceil(width / widest); slices <= width; slices++) {
      const slice = Math.ceil(width / slices);
      const cost = borrowedLookUpToffoli(blocks, width, { block: k, slice }, controlled);
      if (cost < least) {
        least = cost;
        best = { read: k, slice };
      }
    }
  }
  return best;
}

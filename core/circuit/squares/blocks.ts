import { bestBlock } from '../formulas';
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
  /** Toffoli that reading in blocks of k brings elsewhere. */
  readonly extra?: (k: number) => number;
}

/**
 * Blocks with the fewest Toffoli: ⌈rows/k⌉ falls and b(k − 1) rises with k. `plain` reads every table row by row.
 *
 * @param limit - largest k·width any look-up may hold, in wires, or null.
 */
export function chooseTableBlocks(
  { addresses, width, limit: largest, controlled = false, main = false, extra }: ChoosableTable,
  policy: Pick<LookupPolicy, 'mode' | 'block'>,
  limit: number | null,
): Blocks {
  if (addresses.length === 0) return { read: 1, erase: 1 };
  const best = () =>
    bestBlock(
      largest,
      (k) => lookUpToffoli(countBlocks(addresses, k), width, k, controlled) + (extra?.(k) ?? 0),
      (k) => k <= largest && (limit === null || k === 1 || k * width <= limit),
    );
  const read =
    policy.mode === 'plain' ? 1 : main && policy.block !== 'auto' ? Math.min(policy.block, largest) : best();
  return {
    read,
    erase: bestBlock(largest, (k) => erasureToffoli(countBlocks(addresses, k), k, controlled)),
  };
}

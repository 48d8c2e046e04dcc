import { bestBlock } from '../formulas';
import { type Blocks, countBlocks, erasureToffoli, lookUpToffoli } from '../primitives/look-up';
import type { LookupPolicy } from '../recipes/scope';
import type { TripletLayout } from './sizes';
import type { TripletBits } from './tables';
import type { WalkBlocks } from './walk';

/** The five tables of a triplet walk, with the width of each and the largest block it can take. */
function tablesOf(layout: TripletLayout, bits: TripletBits) {
  const index = layout.itemBits + (layout.hasFaces ? 1 : 0);
  const rowLimit = 2 ** layout.rowBits;
  return {
    outer: {
      addresses: layout.outerAddresses,
      width: index + bits.keep,
      limit: 2 ** index,
      controlled: false,
    },
    items: {
      addresses: layout.itemAddresses,
      width: layout.rowBits + 3,
      limit: 2 ** layout.itemBits,
      controlled: false,
    },
    inner: {
      addresses: layout.innerAddresses,
      width: layout.rowBits + bits.innerKeep,
      limit: rowLimit,
      controlled: false,
    },
    rows: { addresses: layout.rowAddresses, width: layout.rowWidth, limit: rowLimit, controlled: false },
    pairs: { addresses: layout.pairAddresses, width: layout.anglesWidth, limit: rowLimit, controlled: true },
  } as const;
}

/**
 * Block sizes with the fewest Toffoli, each table by itself: ⌈rows/k⌉ falls and b(k − 1) rises with k. A given
 * block applies to the angle table; `plain` reads every table row by row.
 *
 * @param limit - largest k·width any look-up may hold, in wires, or null.
 */
export function chooseBlocks(
  layout: TripletLayout,
  bits: TripletBits,
  policy: Pick<LookupPolicy, 'mode' | 'block'>,
  limit: number | null,
): WalkBlocks {
  const tables = tablesOf(layout, bits);
  const choose = (name: keyof typeof tables): Blocks => {
    const { addresses, width, limit: largest, controlled } = tables[name];
    if (addresses.length === 0) return { read: 1, erase: 1 };
    const allowed = (k: number) => k <= largest && (limit === null || k === 1 || k * width <= limit);
    // A second-vector table read in blocks must be erased too.
    const extra = (k: number) =>
      name === 'pairs' && k > 1 ? erasureToffoli(countBlocks(addresses, k), k, controlled) : 0;
    const best = bestBlock(
      largest,
      (k) => lookUpToffoli(countBlocks(addresses, k), width, k, controlled) + extra(k),
      allowed,
    );
    const given = name === 'rows' && policy.block !== 'auto' ? Math.min(policy.block, largest) : best;
    return {
      read: policy.mode === 'plain' ? 1 : given,
      erase: bestBlock(largest, (k) => erasureToffoli(countBlocks(addresses, k), k, controlled)),
    };
  };
  return {
    outer: choose('outer'),
    items: choose('items'),
    inner: choose('inner'),
    rows: choose('rows'),
    pairs: choose('pairs'),
  };
}

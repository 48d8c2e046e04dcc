import { countBlocks, erasureToffoli } from '../primitives/look-up';
import type { LookupPolicy } from '../recipes/scope';
import { chooseTableBlocks } from '../squares/blocks';
import { idleQubits, squaresTables } from '../squares/recipe';
import { TRIPLET_WIRES } from './recipe';
import type { TripletLayout } from './sizes';
import type { TripletBits } from './tables';
import type { WalkBlocks } from './walk';

/**
 * Blocks of all tables with the fewest Toffoli, each table by itself. A given block applies to the angle table.
 *
 * @param limit - largest k·width any look-up may hold, in wires, or null.
 */
export function chooseBlocks(
  orbitals: number,
  layout: TripletLayout,
  bits: TripletBits,
  policy: Pick<LookupPolicy, 'mode' | 'block'>,
  limit: number | null,
): WalkBlocks {
  const { outer, items, inner } = squaresTables(layout, bits, 0);
  const idle = idleQubits(layout, bits, 2 * orbitals, TRIPLET_WIRES);
  const { rowAddresses, rowWidth, pairAddresses, anglesWidth } = layout;
  const largest = 2 ** layout.blockBits;
  const rows = { addresses: rowAddresses, width: rowWidth, limit: largest, main: true, idle: idle.rows };
  const pairs = {
    addresses: pairAddresses,
    width: anglesWidth,
    limit: largest,
    controlled: true,
    idle: idle.rows,
    // A second-vector table read in blocks must be erased too.
    extra: (k: number) => (k > 1 ? erasureToffoli(countBlocks(pairAddresses, k), k, true) : 0),
  };
  return {
    outer: chooseTableBlocks({ ...outer, idle: idle.outer }, policy, limit),
    items: chooseTableBlocks({ ...items, idle: idle.items }, policy, limit),
    inner: chooseTableBlocks({ ...inner, idle: idle.inner }, policy, limit),
    rows: chooseTableBlocks(rows, policy, limit),
    pairs: chooseTableBlocks(pairs, policy, limit),
  };
}

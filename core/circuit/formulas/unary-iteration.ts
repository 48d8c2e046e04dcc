import { bitsFor, free, type PrimitiveCost } from './cost';

const SOURCE = 'Babbush et al., Phys. Rev. X 8, 041015 (2018), unary iteration';

/**
 * Walks through `items` index values and offers one wire per value on which gates may be controlled.
 *
 * @param ranged - the wire stays set for all values from the index on (Majorana strings): one accumulator wire more.
 */
export function unaryIteration(items: number, { controlled = true, ranged = false } = {}): PrimitiveCost {
  const inputs = { L: items };
  if (items <= 1) return free('0 for one item', inputs, SOURCE);
  return {
    toffoli: controlled ? items - 1 : items - 2,
    t: 0,
    scratch: bitsFor(items) - (controlled ? 0 : 1) + (ranged ? 1 : 0),
    formula: controlled ? 'L − 1' : 'L − 2',
    inputs,
    source: SOURCE,
  };
}

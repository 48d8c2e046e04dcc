import type { PrimitiveCost } from './cost';

/** Swaps two registers of n qubits on a control. */
export function controlledSwap(n: number): PrimitiveCost {
  return { toffoli: n, t: 0, scratch: 0, formula: 'n', inputs: { n }, source: 'common practice, no source' };
}

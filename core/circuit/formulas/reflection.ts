import type { PrimitiveCost } from './cost';

/** Changes the sign of all states but zero of n qubits, those it is controlled on included. */
export function reflection(n: number): PrimitiveCost {
  return {
    toffoli: Math.max(n - 2, 0),
    t: 0,
    scratch: Math.max(n - 2, 0),
    formula: 'n − 2',
    inputs: { n },
    source: 'common practice, no source',
  };
}

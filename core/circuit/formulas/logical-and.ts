import type { PrimitiveCost } from './cost';

/** `count` ANDs of two wires onto a fresh one; their erasure by measurement is free. */
export function logicalAnd(count: number): PrimitiveCost {
  return {
    toffoli: count,
    t: 0,
    scratch: count,
    formula: 'number of ANDs',
    inputs: { n: count },
    source: 'Gidney, Quantum 2, 74 (2018)',
  };
}

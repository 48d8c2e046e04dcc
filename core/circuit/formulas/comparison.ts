import type { PrimitiveCost } from './cost';

/** Flags whether one n-bit number is below another. */
export function comparison(n: number): PrimitiveCost {
  return {
    toffoli: n,
    t: 0,
    scratch: n,
    formula: 'n',
    inputs: { n },
    source: 'Gidney, Quantum 2, 74 (2018)',
  };
}

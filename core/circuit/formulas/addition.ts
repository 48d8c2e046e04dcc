import type { PrimitiveCost } from './cost';

/** Adds two n-bit numbers modulo 2^n in place. */
export function addition(n: number): PrimitiveCost {
  return {
    toffoli: Math.max(n - 1, 0),
    t: 0,
    scratch: Math.max(n - 1, 0),
    formula: 'n − 1',
    inputs: { n },
    source: 'Gidney, Quantum 2, 74 (2018)',
  };
}

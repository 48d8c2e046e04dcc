import type { PrimitiveCost } from './cost';

/** Turns one qubit by a β-bit angle held in a register, by adding it into the phase-gradient register. */
export function phaseGradientRotation(beta: number): PrimitiveCost {
  return {
    toffoli: Math.max(beta - 2, 0),
    t: 0,
    scratch: Math.max(beta - 2, 0),
    formula: 'β − 2',
    inputs: { β: beta },
    source: 'Gidney, Quantum 2, 74 (2018); Lee et al., PRX Quantum 2, 030305 (2021)',
  };
}

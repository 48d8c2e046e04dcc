import type { PrimitiveCost } from './cost';

/** Exchanges the ↑ and ↓ mode of each of `pairs` orbitals on a control; the two modes are neighbours in the string order. */
export function controlledFermionicSwaps(pairs: number): PrimitiveCost {
  return {
    toffoli: pairs,
    t: 0,
    scratch: 1,
    formula: 'N',
    inputs: { N: pairs },
    source:
      'derived: two CNOTs put the parity of the pair on one wire; one AND of control and parity drives the swap and its sign',
  };
}

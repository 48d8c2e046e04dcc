import type { PrimitiveCost } from './cost';

/**
 * Exchanges the two Majorana operators of `modes` modes on a control by (X + Y)/√2 = T X T†: uncontrolled T gates
 * around Clifford gates.
 */
export function majoranaExchange(modes: number): PrimitiveCost {
  return {
    toffoli: 0,
    t: modes,
    scratch: 0,
    formula: '0 Toffoli, n T',
    inputs: { n: modes },
    source: 'derived: (X + Y)/√2 = T X T†, only the Clifford part carries the control',
  };
}

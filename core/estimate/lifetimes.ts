import type { Subroutine } from '../circuit';

/** The moment of a recipe at which the most qubits are alive. */
export interface Peak {
  readonly qubits: number;
  /** Registers alive then, outermost first; they sum to `qubits`. */
  readonly registers: readonly { readonly name: string; readonly qubits: number }[];
  /** Names of the nested subroutines that run then, outermost first. */
  readonly path: readonly string[];
}

/** Peak of a recipe: a node's own registers plus the largest peak among its children, which run one after the other. */
export function peakOf(tree: Subroutine): Peak {
  const own = tree.registers ?? [];
  let inner: Peak = { qubits: 0, registers: [], path: [] };
  for (const child of tree.children ?? []) {
    const peak = peakOf(child);
    if (peak.qubits > inner.qubits) inner = peak;
  }
  return {
    qubits: own.reduce((sum, register) => sum + register.qubits, 0) + inner.qubits,
    registers: [...own, ...inner.registers],
    path: [tree.name, ...inner.path],
  };
}

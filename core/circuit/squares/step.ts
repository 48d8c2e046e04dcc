import type { Subroutine } from '../recipe';
import type { PhaseEstimationPart } from './leaves';

export interface StepBits {
  /** ℵ of all alias tables. */
  readonly keepBits: number;
  /** b: angles on the grid 2π/2^b. */
  readonly rotationBits: number;
  /** Bits of the phase register, ⌈log₂(steps + 1)⌉. */
  readonly phaseBits: number;
}

/**
 * What phase estimation carries along. Two Toffoli are for the phase register: the reflection's control and the step
 * of the counter that unfolds the register into walk steps (R. Babbush et al., Phys. Rev. X 8, 041015 (2018)).
 */
export const phaseEstimationPart = (phaseBits: number): PhaseEstimationPart => ({
  controls: 2,
  registers: [
    { name: 'phase register', qubits: phaseBits },
    { name: 'step counter ladder', qubits: Math.max(phaseBits - 1, 0) },
  ],
});

/**
 * The cheapest step; where a cap on the qubits is given, look-ups are narrowed until the peak fits, or cannot shrink
 * further.
 *
 * @param build - the step with no look-up wider than the given number of wires
 * @param width - wires of the widest look-up of a step
 */
export function withinCap<S extends { readonly recipe: Subroutine }>(
  build: (limit: number | null) => S,
  width: (step: S) => number,
  qubitCap: number | null,
): S {
  let step = build(null);
  if (qubitCap === null) return step;
  for (let limit = width(step); peakQubits(step.recipe) > qubitCap; limit /= 2) {
    step = build(limit);
    if (limit < 1) break;
  }
  return step;
}

function peakQubits(node: Subroutine): number {
  const own = (node.registers ?? []).reduce((sum, register) => sum + register.qubits, 0);
  return own + Math.max(0, ...(node.children ?? []).map(peakQubits));
}

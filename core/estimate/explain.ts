import { AMPLIFICATION_BITS, bitsFor, cheapestAmplificationBits } from '../circuit';
import type { PublishedRow } from './published';
import type { RunCost } from './variant';
import type { WhatIfOptions } from './whatif-options';

/** One reason for a difference; `amount` in the unit of the figure, ours − published. */
export interface Reason {
  readonly what: string;
  readonly amount: number;
  /** `component`: a count of ours that the published formula lacks or has otherwise. `inference`: our own guess at the published choice. `unexplained`: the rest. */
  readonly basis: 'component' | 'inference' | 'unexplained';
}

/** Ours against published; `because` sums to `difference`. */
export interface Reconciliation {
  readonly ours: number;
  readonly published: number;
  readonly difference: number;
  readonly because: readonly Reason[];
}

/** Compares a reckoned run with its published row and says where the rest comes from, as far as we know. */
export function explain(
  published: PublishedRow,
  parameters: WhatIfOptions,
  run: Pick<RunCost, 'step' | 'logicalQubits'>,
): { stepToffoli: Reconciliation; logicalQubits: Reconciliation } {
  const known = published.method === 'sparse' ? sparseReasons(published, parameters) : [];
  return {
    stepToffoli: reconcile(run.step.toffoli, published.stepToffoli, known, 'Toffoli'),
    logicalQubits: reconcile(run.logicalQubits, published.logicalQubits, [], 'qubits'),
  };
}

function reconcile(ours: number, published: number, known: readonly Reason[], unit: string): Reconciliation {
  const difference = ours - published;
  const rest = difference - known.reduce((sum, reason) => sum + reason.amount, 0);
  const remainder: Reason = {
    what: `${unit} that the published components, as we know them, do not account for`,
    amount: rest,
    basis: 'unexplained',
  };
  return { ours, published, difference, because: rest === 0 ? known : [...known, remainder] };
}

/**
 * The published sparse total is remembered as look-up and erasure plus 4·2N + 8n + 2ℵ + 7⌈log₂d⌉ − 6e + 4b_r − 19,
 * n = ⌈log₂N⌉. Both benchmark rows follow from it exactly once b_r is the width that minimises the expected cost.
 */
function sparseReasons(
  published: PublishedRow,
  { spinOrbitals, coefficients, keepBits }: WhatIfOptions,
): Reason[] {
  const orbitalBits = bitsFor(spinOrbitals / 2);
  const width = cheapestAmplificationBits(coefficients!, published.stepToffoli);
  return [
    {
      what: 'symmetry swaps of the orbital indices, counted in PREPARE and in PREPARE† beside the alias swaps',
      amount: 8 * orbitalBits,
      basis: 'component',
    },
    {
      what: 'sign and one-body flag in the alias swap, both ways',
      amount: 4,
      basis: 'component',
    },
    {
      what: 'comparison register and plus qubits in the reflection, two Toffoli of control, less the constant of the published formula',
      amount: keepBits + 1,
      basis: 'component',
    },
    {
      what: `equal superposition at ${AMPLIFICATION_BITS} bits where the cheapest expected step takes ${width}`,
      amount: 4 * (AMPLIFICATION_BITS - width),
      basis: 'inference',
    },
  ];
}

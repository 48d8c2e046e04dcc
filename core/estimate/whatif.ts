import {
  bitsFor,
  doubleFactorisedStep,
  hypercontractedStep,
  type LookupPolicy,
  type Subroutine,
  singleFactorisedStep,
  sparseStepByFormula,
} from '../circuit';
import type { SurfaceCodeAssumptions } from './estimate';
import { explain, type Reconciliation } from './explain';
import { walkSteps } from './phase-estimation';
import { type PublishedRow, publishedRow } from './published';
import { type RunCost, runCost } from './variant';
import { checkWhatIf, type WhatIfOptions } from './whatif-options';

/** Costs from published parameters alone. */
export interface WhatIfResult extends RunCost {
  readonly schema: 'spinwright-whatif/1';
  readonly parameters: WhatIfOptions;
  /** Bits used; rotation 0 where nothing is rotated. */
  readonly bits: { readonly keep: number; readonly rotation: number };
  /** The published row with these very parameters, or null. */
  readonly published: PublishedRow | null;
  /** Ours − published, with reasons that sum to it; null without a published row. */
  readonly difference: {
    readonly stepToffoli: Reconciliation;
    readonly logicalQubits: Reconciliation;
  } | null;
}

/** Published trade of Toffoli for qubits in the sparse benchmarks; the fewest Toffoli would need a larger block. */
const SPARSE_BLOCK = 32;

/**
 * Reckons a spin-free block encoding from published parameters, no integrals.
 *
 * @throws InputError naming the parameter that is missing or out of range.
 */
export function whatif(
  given: Parameters<typeof checkWhatIf>[0],
  machine: SurfaceCodeAssumptions | null = null,
): WhatIfResult {
  const parameters = checkWhatIf(given);
  const steps = walkSteps(parameters.lambda, parameters.target);
  const run = runCost(recipeOf(parameters, bitsFor(steps + 1)), steps, machine);
  const published = publishedRow(parameters);
  const rotates = parameters.method === 'double-factorised' || parameters.method === 'hypercontracted';
  return {
    schema: 'spinwright-whatif/1',
    parameters,
    bits: { keep: parameters.keepBits, rotation: rotates ? parameters.rotationBits : 0 },
    ...run,
    published,
    difference: published === null ? null : explain(published, parameters, run),
  };
}

function recipeOf(parameters: WhatIfOptions, phaseBits: number): Subroutine {
  const { method, keepBits, rotationBits } = parameters;
  const orbitals = parameters.spinOrbitals / 2;
  const policy: LookupPolicy = {
    mode: 'clean',
    block: parameters.lookupBlock ?? (method === 'sparse' ? SPARSE_BLOCK : 'auto'),
    qubitCap: parameters.qubitsMax ?? null,
  };
  switch (method) {
    case 'double-factorised': {
      const { factors, rows } = parameters;
      return doubleFactorisedStep(
        { orbitals, factors: factors!, rows: rows!, keepBits, rotationBits, phaseBits },
        policy,
      );
    }
    case 'single-factorised':
      return singleFactorisedStep({ orbitals, factors: parameters.factors!, keepBits, phaseBits }, policy);
    case 'sparse':
      return sparseStepByFormula(
        { orbitals, coefficients: parameters.coefficients!, spinDependent: false, keepBits, phaseBits },
        policy,
      );
    case 'hypercontracted':
      return hypercontractedStep(
        { orbitals, rank: parameters.rank!, keepBits, rotationBits, phaseBits },
        policy,
      );
  }
}

import type { StepPart, Subroutine } from '../circuit/recipe';

/** Cost of one walk step. Toffoli and T are separate ledgers: neither contains the other. */
export interface StepCost {
  readonly toffoli: number;
  readonly t: number;
  /** Toffoli by part, sums to `toffoli`. */
  readonly parts: Readonly<Record<StepPart, number>>;
  readonly tree: Subroutine;
}

export interface SurfaceCodeAssumptions {
  readonly physicalError: number;
  readonly cycleMicroseconds: number;
  readonly reactionMicroseconds: number;
  readonly factories: number;
  /** Accepted probability that the whole run fails. */
  readonly failure: number;
}

export interface PhysicalEstimate {
  readonly distance: number;
  readonly qubits: number;
  readonly hours: number;
  readonly assumptions: SurfaceCodeAssumptions;
}

import type { StepPart, Subroutine } from '../circuit/recipe';
import type { PhysicalEstimate } from '../estimate/estimate';
import type { EnergyUnit } from '../units';
import type { FrameRecord } from './frame';

/** What is asked of phase estimation. */
export interface Target {
  readonly value: number;
  readonly unit: EnergyUnit;
  readonly hartree: number;
}

/** One column of the comparison; a stopped or failed one carries no figures. `compare --json` prints these. */
export interface VariantEstimate {
  readonly name: string;
  readonly terms: readonly string[];
  readonly factorisation: string;
  readonly grouping: string;
  readonly spinInSelect: 'index' | 'swap-layers';
  readonly shift: string;
  readonly lookup: string;
  readonly lambda: {
    readonly oneBody: number;
    readonly twoBody: number;
    readonly total: number;
    readonly parts: Readonly<Record<string, number>>;
  };
  readonly spectralFloor: {
    readonly value: number | null;
    readonly kind: 'exact' | 'bracket';
    readonly sector: 'eta' | 'all';
    readonly low: number | null;
    readonly high: number | null;
  };
  readonly constant: number;
  readonly factors: number;
  readonly rows: number;
  readonly residual: {
    readonly frobenius: number;
    readonly oneNormBound: number;
    /** First and second order of a reference determinant; null where there is no estimate. */
    readonly energyEstimate: number | null;
    /**
     * Change of levels and couplings among low states beside a shift that all share, to first order; null where there is
     * no estimate.
     */
    readonly lowStates: number | null;
  };
  readonly bits: { readonly keep: number; readonly rotation: number };
  readonly step: {
    readonly toffoli: number;
    readonly t: number;
    readonly parts: Readonly<Record<StepPart, number>>;
    /** Subroutines with counts, formulas and sources; left out of `--json` unless asked for. */
    readonly tree?: Subroutine;
  };
  readonly logicalQubits: number;
  readonly walkSteps: number;
  readonly totalToffoli: number;
  readonly repetitions: number;
  readonly campaignToffoli: number;
  readonly physical: PhysicalEstimate | null;
}

export interface TermSummary {
  readonly name: string;
  /** LCU-type one-norm of the term alone, hartree. */
  readonly oneNorm: number;
  readonly maxAbs: number;
}

export interface Comparison {
  readonly schema: 'spinwright-comparison/1';
  readonly hamiltonian: {
    readonly orbitals: number;
    readonly electrons: number;
    readonly constant: number;
    readonly terms: readonly TermSummary[];
  };
  readonly target: Target;
  readonly variants: readonly VariantEstimate[];
  /** Frames that were sought; absent where none was asked for. */
  readonly frames?: readonly FrameRecord[];
  readonly recommendation: { readonly variant: string | null; readonly reasons: readonly string[] };
}

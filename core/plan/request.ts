import type { VariantName } from '../encode/variant';
import type { Problem } from '../job';
import type { EnergyUnit } from '../units';
import type { Comparison, VariantEstimate } from './comparison';
import type { SystemRequest } from './system';

/** What the wanted accuracy is of. */
export const MEANINGS = ['level', 'splitting', 'matrix-element'] as const;
export type Meaning = (typeof MEANINGS)[number];

/** How many factors compressed variants have in each block: as many as the threshold keeps, or a number. */
export type FactorCount = 'auto' | { readonly count: number; readonly perOrbital: boolean };

/** Everything that decides a comparison beside the integrals. Plain data: crosses worker borders. */
export interface ComparisonRequest extends SystemRequest {
  readonly target: {
    readonly value: number;
    readonly unit: EnergyUnit;
    readonly meaning: Meaning;
  };
  /** Variants in the order of the table; null: the default set. */
  readonly variants: readonly VariantName[] | null;
  /** Sum of LCU norms that truncation may drop, hartree; `auto`: the error budget's share for it. */
  readonly threshold: number | 'auto';
  /** Bits of keep values and of angles, 4…60; `auto`: as many as the error budget asks for. */
  readonly bits: number | 'auto';
  /** Of compressed variants, and of the Coulomb part of mixed ones. @defaultValue `auto` */
  readonly factors?: FactorCount;
  /** Squared overlap of the start state with the wanted state(s), one a level, 0 < p ≤ 1. */
  readonly overlaps: readonly number[];
  /** Most logical qubits a run may use; null: no cap. */
  readonly qubitsMax: number | null;
}

/** What became of one requested variant. */
export type VariantOutcome =
  | {
      readonly status: 'done';
      readonly name: string;
      readonly estimate: VariantEstimate;
      /** What could not be made as asked, one sentence each. */
      readonly notes?: readonly string[];
    }
  /** Not computed for a reason known beforehand, such as a sector that is too large. */
  | { readonly status: 'left-out'; readonly name: string; readonly reason: string }
  | { readonly status: 'failed'; readonly name: string; readonly problem: Problem };

/** A comparison and, in the order asked for, what became of each variant. */
export interface ComparisonRun {
  readonly comparison: Comparison;
  readonly outcomes: readonly VariantOutcome[];
}

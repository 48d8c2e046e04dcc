import type { FrameRecord } from './frame';

/** One check: `ok` where |value − expected| ≤ tolerance. */
export interface Check {
  readonly name: string;
  readonly value: number;
  readonly expected: number;
  readonly tolerance: number;
  /** What the expected value and the tolerance rest on. */
  readonly source: string;
  readonly ok: boolean;
}

/** Three views of what a variant's truncation does to the energy, hartree. */
export interface TruncationEvidence {
  /** Rigorous: no level moves by more. */
  readonly oneNormBound: number;
  /** Change of the reference determinant's energy in first and in second order. */
  readonly firstOrder: number;
  readonly secondOrder: number;
  /** Over random determinants: mean and standard deviation of the shift, root mean square of the couplings. */
  readonly random: {
    readonly samples: number;
    readonly mean: number;
    readonly spread: number;
    readonly singles: number;
    readonly doubles: number;
  };
}

/** What `verify --json` prints, keys in this order. Energies in hartree. */
export interface Evidence {
  readonly schema: 'spinwright-evidence/1';
  readonly electrons: number;
  readonly terms: readonly string[];
  readonly spectrum: {
    readonly exact: readonly number[];
    readonly variants: Readonly<Record<string, readonly number[]>>;
  };
  /** By variant, where something was dropped: rigorous bound, perturbation theory and random determinants. */
  readonly truncation: Readonly<Record<string, TruncationEvidence>>;
  readonly blockEncoding: Readonly<
    Record<string, { readonly maxError: number; readonly bound: number; readonly columns: number }>
  >;
  /** Frames that were sought; absent where none was asked for. */
  readonly frames?: readonly FrameRecord[];
  readonly checks: readonly Check[];
}

/** Books a check. */
export function check(
  name: string,
  value: number,
  expected: number,
  tolerance: number,
  source: string,
): Check {
  return { name, value, expected, tolerance, source, ok: Math.abs(value - expected) <= tolerance };
}

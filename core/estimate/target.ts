/** What the target energy stands for: one energy, a difference of two, or a spin–orbit matrix element. */
export type TargetMeaning = 'level' | 'splitting' | 'matrix-element';

/** Shares of the target given to each source of error; they sum to 1. */
export interface ErrorSplit {
  readonly walk: number;
  readonly prepare: number;
  readonly rotation: number;
  readonly truncation: number;
}

/** Common practice, no source: nearly all of the error to what costs in proportion to it. */
export const DEFAULT_SPLIT: ErrorSplit = { walk: 0.9, prepare: 0.03, rotation: 0.03, truncation: 0.04 };

/** `rms`: the target is the standard deviation. `confidence`: the error stays below it with this probability. */
export type Accuracy =
  | { readonly kind: 'rms' }
  | { readonly kind: 'confidence'; readonly probability: number };

/** A state to be read out, and |⟨start|state⟩|², 0 < overlap ≤ 1. */
export interface Level {
  readonly label: string;
  readonly overlap: number;
}

/** What is asked of phase estimation. */
export interface TargetRequest {
  /** Target energy, hartree. */
  readonly hartree: number;
  readonly meaning: TargetMeaning;
  readonly accuracy: Accuracy;
  readonly split: ErrorSplit;
  /** One level, or two for a splitting. */
  readonly levels: readonly Level[];
}

/** The request behind a bare target energy: standard deviation, default split, every level with the same overlap. */
export function targetRequest(
  hartree: number,
  {
    meaning = 'level',
    accuracy = { kind: 'rms' },
    split = DEFAULT_SPLIT,
    overlap = 1,
  }: { meaning?: TargetMeaning; accuracy?: Accuracy; split?: ErrorSplit; overlap?: number } = {},
): TargetRequest {
  const labels = meaning === 'splitting' ? ['lower', 'upper'] : ['state'];
  return { hartree, meaning, accuracy, split, levels: labels.map((label) => ({ label, overlap })) };
}

/** Errors in hartree that the target leaves to each source. */
export interface ErrorBudget {
  /** Standard deviation of one phase estimation of one level. */
  readonly walk: number;
  /** Bounds on the systematic errors of weights, angles and dropped terms. */
  readonly prepare: number;
  readonly rotation: number;
  readonly truncation: number;
}

/**
 * Divides the target. The two levels of a splitting are independent runs, so each gets 1/√2; the systematic errors
 * are common to both and are not divided. A matrix element is read as one level here.
 *
 * @param confidenceFactor - by how much a run must be finer than the target for the asked confidence.
 */
export function errorBudget(target: TargetRequest, confidenceFactor: number): ErrorBudget {
  const { hartree, split } = target;
  const runs = target.meaning === 'splitting' ? Math.SQRT2 : 1;
  return {
    walk: (split.walk * hartree) / runs / confidenceFactor,
    prepare: split.prepare * hartree,
    rotation: split.rotation * hartree,
    truncation: split.truncation * hartree,
  };
}

/** Parts of a walk step's cost: a closed list whose Toffoli counts sum to the step. */
export const STEP_PARTS = [
  'prepare',
  'select.lookup',
  'select.rotations',
  'select.swaps',
  'select.other',
  'reflections',
  'control',
] as const;
export type StepPart = (typeof STEP_PARTS)[number];

/**
 * A subroutine in a tree of subroutines. Leaves carry counts; a node's own counts are those of its leaves.
 * Qubits follow lifetimes: `registers` live while the node runs, so the peak of a node is its own registers
 * plus the largest of its children's peaks (children run one after the other).
 */
export interface Subroutine {
  readonly name: string;
  /** The step part a leaf is booked under; inner nodes may leave it out. */
  readonly part?: StepPart;
  /** How often the whole node runs per step. @defaultValue 1 */
  readonly times?: number;
  /** Toffoli of one run of a leaf. */
  readonly toffoli?: number;
  /** T gates of one run of a leaf. */
  readonly t?: number;
  /** Formula in symbols, e.g. `⌈L/k⌉ + b(k−1)`. */
  readonly formula?: string;
  /** The figures that went in: symbol → value. */
  readonly inputs?: Readonly<Record<string, number>>;
  /** Published source of the formula, or "derived: …" / "common practice, no source". */
  readonly source?: string;
  /** Registers allocated while this node runs. */
  readonly registers?: readonly { readonly name: string; readonly qubits: number }[];
  readonly children?: readonly Subroutine[];
}

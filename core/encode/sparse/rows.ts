import type { TermKind } from './kinds';

/** Parts of λ that rows go to. */
export const ROW_PARTS = [
  'one-body.charge',
  'one-body.spin',
  'coulomb',
  'same-orbit',
  'other-orbit',
  'spin-spin',
] as const;

/** One row of the sparse form. The object is used again for the next one. */
export interface SparseRow {
  /** One-norm, hartree, ≥ 0. */
  weight: number;
  isNegative: boolean;
  /** What it multiplies. */
  kind: TermKind;
  p: number;
  q: number;
  /** 0 where the row is of one body, as s. */
  r: number;
  s: number;
  /** Sum of squares over the elements of g that the row stands for. */
  square: number;
  /** Share of each of {@link ROW_PARTS}; they sum to 1. */
  parts: ArrayLike<number>;
}

/** The rows of an encoding, made anew each time they are gone through: they are never all in memory. */
export interface RowSource {
  /** Names of {@link ROW_PARTS} that rows may go to. */
  readonly parts: readonly string[];
  /** A step each some 10⁵ rows at most. */
  visit(visitor: (row: SparseRow) => void): Iterable<void>;
}

export function emptyRow(): SparseRow {
  return {
    weight: 0,
    isNegative: false,
    kind: { form: 'strings', flags: 0 },
    p: 0,
    q: 0,
    r: 0,
    s: 0,
    square: 0,
    parts: [],
  };
}

/** One after the other. */
export function joinSources(sources: readonly RowSource[]): RowSource {
  return {
    parts: [...new Set(sources.flatMap(({ parts }) => parts))],
    *visit(visitor) {
      for (const source of sources) yield* source.visit(visitor);
    },
  };
}

/** Shares of {@link ROW_PARTS} from named ones. */
export function sharesOf(named: readonly (readonly [part: string, fraction: number])[]): Float64Array {
  const shares = new Float64Array(ROW_PARTS.length);
  for (const [part, fraction] of named)
    shares[ROW_PARTS.indexOf(part as (typeof ROW_PARTS)[number])]! += fraction;
  return shares;
}

import { carriesSpin, type TermKind } from './kinds';
import type { RowSource, SparseRow } from './rows';

/** Sizes of a sparse encoding. */
export interface TermSizes {
  readonly orbitals: number;
  /** Rows. */
  readonly coefficients: number;
  /** Any coefficient carries spin. */
  readonly spin: boolean;
  /** The second element of a coefficient has a component of its own, apart from the shared spin–orbit ones. */
  readonly secondComponent: boolean;
  /** One value may stand for both ways of placing two components. */
  readonly exchanged: boolean;
  /** Whether the two pairs of a row have spins of their own: in all rows, in some, or in none. */
  readonly spins: 'free' | 'mixed' | 'fixed';
  /** Part of λ in coefficients that serve both spin–orbit kinds at once. */
  readonly sharedPart: number;
  /** Of these, the part that acts as spin–other-orbit. */
  readonly otherShare: number;
}

/** All rows of a sparse encoding: H − constant = Σ of what they stand for, λ = Σ weights. */
export interface SparseProgram {
  readonly orbitals: number;
  /** Hartree. */
  readonly constant: number;
  readonly kinds: readonly TermKind[];
  /** Position in `kinds` of each row. */
  readonly kindOf: Uint8Array;
  /** p, q, r, s of each row, four after one another; r = s = 0 where it is of one body. */
  readonly orbitalsOf: Uint16Array;
  /** Positive, hartree. */
  readonly weights: Float64Array;
  /** 1 where the sign is −1. */
  readonly negative: Uint8Array;
  /** Part of a shared coefficient that acts as spin–other-orbit, between 0 and 1. */
  readonly otherShare: number;
  readonly otherSign: 1 | -1;
}

/**
 * The rows heavier than the cutoff, all in memory.
 *
 * @param rows - how many there are.
 */
export function sparseProgram(
  orbitals: number,
  constant: number,
  source: RowSource,
  { cutoff, rows }: { readonly cutoff: number; readonly rows: number },
  timesSame: number,
): SparseProgram {
  const kinds = new Map<TermKind, number>();
  const kindOf = new Uint8Array(rows);
  const orbitalsOf = new Uint16Array(4 * rows);
  const weights = new Float64Array(rows);
  const negative = new Uint8Array(rows);
  let at = 0;
  const visitor = ({ weight, isNegative, kind, p, q, r, s }: SparseRow) => {
    if (weight <= cutoff) return;
    let index = kinds.get(kind);
    if (index === undefined) {
      index = kinds.size;
      kinds.set(kind, index);
    }
    kindOf[at] = index;
    weights[at] = weight;
    negative[at] = isNegative ? 1 : 0;
    orbitalsOf[4 * at] = p;
    orbitalsOf[4 * at + 1] = q;
    orbitalsOf[4 * at + 2] = r;
    orbitalsOf[4 * at + 3] = s;
    at++;
  };
  for (const _ of source.visit(visitor));
  return {
    orbitals,
    constant,
    kinds: [...kinds.keys()],
    kindOf,
    orbitalsOf,
    weights,
    negative,
    otherShare: Math.abs(timesSame) / (1 + Math.abs(timesSame)),
    otherSign: timesSame < 0 ? -1 : 1,
  };
}

/** The sizes that a program's circuit depends on. */
export function termSizes(program: SparseProgram): TermSizes {
  const { kinds, kindOf, weights } = program;
  const used = new Set(kindOf);
  const found = kinds.filter((_, i) => used.has(i));
  let total = 0;
  let shared = 0;
  for (const [i, weight] of weights.entries()) {
    const kind = kinds[kindOf[i]!]!;
    total += weight;
    if (kind.form === 'pairs' && kind.shared) shared += weight;
  }
  return {
    orbitals: program.orbitals,
    coefficients: weights.length,
    ...kindSizes(found),
    sharedPart: total > 0 ? shared / total : 0,
    otherShare: program.otherShare,
  };
}

/** What the kinds that occur ask of a row's word and of SELECT. */
export function kindSizes(
  kinds: readonly TermKind[],
): Pick<TermSizes, 'spin' | 'secondComponent' | 'exchanged' | 'spins'> {
  const pairs = kinds.filter((kind) => kind.form === 'pairs');
  const isFree = pairs.some(({ nu }) => nu !== null);
  return {
    spin: kinds.some(carriesSpin),
    secondComponent: pairs.some(({ nu }) => (nu ?? 0) !== 0),
    exchanged: pairs.some(({ exchanged }) => exchanged),
    spins: kinds.length === pairs.length ? 'free' : isFree ? 'mixed' : 'fixed',
  };
}

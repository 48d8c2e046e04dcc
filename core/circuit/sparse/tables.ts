import type { SparseProgram, TermKind } from '../../encode';
import { termSizes } from '../../encode';
import { aliasBuckets } from '../primitives/alias-sampling';
import { type SparseBits, type SparseLayout, sparseLayout } from './layout';
import { signBit } from './select';

/** The table of a sparse encoding, rounded to its bits. */
export interface SparseTables {
  readonly program: SparseProgram;
  readonly layout: SparseLayout;
  /** Row i keeps its own coefficient where the fraction of the address number is below keep[i]/2^ℵ. */
  readonly keep: Uint32Array;
  readonly alternate: Uint32Array;
}

/** @param refinement - see {@link sparseLayout}. */
export function sparseTables(program: SparseProgram, bits: SparseBits, refinement: number): SparseTables {
  const layout = sparseLayout(termSizes(program), bits, refinement);
  const { keep, alternate } = aliasBuckets(program.weights, layout.address.rows, bits.keep);
  return { program, layout, keep, alternate };
}

/** Bit of the word of a coefficient; rows beyond the last coefficient are never kept, so theirs is not looked at. */
function wordBit({ program, layout }: SparseTables, term: number, bit: number): boolean {
  if (term >= program.weights.length) return false;
  const { orbitalBits: n } = layout;
  const kind = program.kinds[program.kindOf[term]!]!;
  const isOneBody = kind.form === 'pairs' && kind.nu === null;
  if (bit < 4 * n) {
    const which = Math.floor(bit / n);
    if (isOneBody && which >= 2) return !layout.noneBit && ((layout.orbitals >>> (bit % n)) & 1) === 1;
    return ((program.orbitalsOf[4 * term + which]! >>> (bit % n)) & 1) === 1;
  }
  const flags = [
    ...(layout.noneBit ? [isOneBody] : []),
    signBit(layout.spin, kind, program.negative[term] === 1),
    ...spinBits(layout, kind),
    ...(layout.strings ? stringBits(kind) : layout.spin ? componentBits(layout, kind) : []),
  ];
  return flags[bit - 4 * n]!;
}

/** How the spins of the two pairs go together. */
function spinBits({ spins }: SparseLayout, kind: TermKind): boolean[] {
  if (spins === 'free') return [];
  const isOpposite = kind.form === 'strings' && (kind.flags & 4) !== 0;
  return spins === 'fixed' ? [isOpposite] : [kind.form === 'strings', isOpposite];
}

/** s₁, r₁, s₂, r₂; a second pair that is none has 0, 1. */
function stringBits(kind: TermKind): boolean[] {
  const bit = (flags: number, i: number) => ((flags >>> i) & 1) === 1;
  if (kind.form === 'strings') return [0, 3, 1, 4].map((i) => bit(kind.flags, i));
  const [s, m] = signature(kind.mu);
  return [s, !kind.antisymmetric !== (s && m), false, true];
}

function componentBits({ storesSecond }: SparseLayout, kind: TermKind): boolean[] {
  if (kind.form === 'pairs') {
    const second = storesSecond ? signature(kind.nu ?? 0) : [];
    return [kind.antisymmetric, ...signature(kind.mu), ...second];
  }
  // Only charge pairs have fixed spins beside pairs with spins of their own.
  if ((kind.flags & ~4) !== (8 | 16)) throw new RangeError('strings with spin beside pairs of free spins');
  return new Array(storesSecond ? 5 : 3).fill(false);
}

/** s and m of a spin component. */
const signature = (mu: number): [boolean, boolean] => [mu === 1 || mu === 2, mu === 2 || mu === 3];

/** Bit of a row of the table: word, word ⊕ alternate word, keep value. */
export function rowBit(tables: SparseTables, row: number, bit: number): boolean {
  const { wordWidth } = tables.layout;
  if (bit < wordWidth) return wordBit(tables, row, bit);
  if (bit < 2 * wordWidth) {
    const own = wordBit(tables, row, bit - wordWidth);
    return own !== wordBit(tables, tables.alternate[row]!, bit - wordWidth);
  }
  return ((tables.keep[row]! >>> (bit - 2 * wordWidth)) & 1) === 1;
}

/** Values of the numbers in superposition that lead to one row and one choice of word, one standing for all. */
export interface Steering {
  readonly low: number;
  readonly uniform: number;
  readonly share: number;
  /** Whose word SELECT gets. */
  readonly term: number;
  readonly isOther: boolean;
  /** Part of all values that do the same. */
  readonly probability: number;
}

/** All distinct things that the numbers in superposition may lead to. */
export function* steeringNumbers({ layout, keep, alternate }: SparseTables): Generator<Steering> {
  const { rows, lowBits, factor, uniformBits } = layout.address;
  const size = 2 ** uniformBits;
  const unit = 2 ** (uniformBits - layout.keepBits);
  const kinds = layout.share
    ? [
        { share: 0, isOther: true, part: layout.share.threshold / 2 ** layout.share.bits },
        {
          share: 2 ** layout.share.bits - 1,
          isOther: false,
          part: 1 - layout.share.threshold / 2 ** layout.share.bits,
        },
      ]
    : [{ share: 0, isOther: false, part: 1 }];
  // factor·u < bound for the first ⌈bound/factor⌉ numbers u.
  const below = (bound: number) => Math.ceil(bound / factor);
  for (let row = 0; row < rows; row++) {
    const high = Math.floor(row / 2 ** lowBits);
    const middle = below(high * size + keep[row]! * unit);
    const ranges = [
      { from: below(high * size), to: middle, term: row },
      { from: middle, to: below((high + 1) * size), term: alternate[row]! },
    ];
    for (const { from, to, term } of ranges) {
      if (to <= from) continue;
      const probability = (to - from) / (size * 2 ** lowBits);
      for (const { share, isOther, part } of kinds) {
        yield {
          low: row % 2 ** lowBits,
          uniform: from,
          share,
          term,
          isOther,
          probability: probability * part,
        };
      }
    }
  }
}

/** The program that the tables encode exactly. The difference to the given one is the whole rounding error. */
export function encodedProgram(tables: SparseTables): SparseProgram {
  const { program, layout } = tables;
  const total = program.weights.reduce((sum, weight) => sum + weight, 0);
  const weights = new Float64Array(program.weights.length);
  for (const { term, probability } of steeringNumbers(tables)) weights[term]! += total * probability;
  const otherShare = layout.share ? layout.share.threshold / 2 ** layout.share.bits : program.otherShare;
  return { ...program, weights, otherShare };
}

import type { TermSizes } from '../../encode';
import { addressBits } from '../primitives/unary-iteration';

export interface SparseBits {
  /** ℵ of the alias table. */
  readonly keep: number;
  /** Bits of the number that splits a coefficient between its two spin–orbit kinds; unused where none is shared. */
  readonly share: number;
}

/**
 * How the rows of the table are brought into equal superposition without filling them up to a power of two: rows =
 * factor · 2^{lowBits}. The lower address bits are |+⟩ qubits; the upper ones are the whole part of factor · u/2^g
 * with u a g-bit number in uniform superposition, and its fraction is the number that alias sampling compares.
 */
export interface AddressLayout {
  readonly rows: number;
  readonly lowBits: number;
  /** 1, or an odd number. */
  readonly factor: number;
  /** Bits of the upper part of the address, 0 for factor 1. */
  readonly highBits: number;
  /** g = ℵ + highBits. */
  readonly uniformBits: number;
}

/** The word that describes a coefficient, and what SELECT makes of it. */
export interface SparseLayout {
  readonly orbitals: number;
  /** Bits of an orbital number. */
  readonly orbitalBits: number;
  /**
   * Number N in place of r and s says that there is no second pair. Where N = 2^n that takes one more bit, which
   * both have in common.
   */
  readonly noneBit: boolean;
  readonly spin: boolean;
  /** See `TermSizes`; 'mixed' takes two bits of the word (is fixed, opposite), 'fixed' one (opposite). */
  readonly spins: TermSizes['spins'];
  /** Spin-dependent rows are products of fixed relative spins and kinds, which the word names as they are. */
  readonly strings: boolean;
  /** The word holds a spin component of the second pair. */
  readonly storesSecond: boolean;
  /** Any second pair can have a component, stored or not. */
  readonly hasSecond: boolean;
  /** Two components may be placed both ways. */
  readonly exchanged: boolean;
  /**
   * The word: p, q, r, s, none, sign; how the spins go together; antisymmetric, s, m of the first pair; s, m of the
   * second. For strings: s₁, r₁, s₂, r₂ in place of these.
   */
  readonly wordWidth: number;
  /** Word, its change to the alternate one, keep value. */
  readonly rowWidth: number;
  readonly keepBits: number;
  /** [number < threshold] of a uniform number of `bits` bits picks spin–other-orbit; null: nothing is shared. */
  readonly share: { readonly bits: number; readonly threshold: number } | null;
  readonly address: AddressLayout;
}

/**
 * @param refinement - how many bits of the row number the factor may have: 0 fills up to the next power of two,
 *   each further bit halves what is filled up at most.
 */
export function sparseLayout(sizes: TermSizes, bits: SparseBits, refinement: number): SparseLayout {
  const { orbitals, spin, spins, exchanged } = sizes;
  const orbitalBits = addressBits(orbitals);
  const noneBit = orbitals === 2 ** orbitalBits;
  const storesSecond = sizes.secondComponent;
  const share = sizes.sharedPart > 0 ? shareOf(sizes.otherShare, bits.share) : null;
  const strings = spin && spins === 'fixed';
  const components = strings ? 4 : (spin ? 3 : 0) + (storesSecond ? 2 : 0);
  const wordWidth = 4 * orbitalBits + (noneBit ? 1 : 0) + 1 + SPIN_BITS[spins] + components;
  return {
    orbitals,
    orbitalBits,
    noneBit,
    spin,
    spins,
    strings,
    storesSecond,
    hasSecond: storesSecond || share !== null,
    exchanged,
    wordWidth,
    rowWidth: 2 * wordWidth + bits.keep,
    keepBits: bits.keep,
    share,
    address: addressOf(sizes.coefficients, bits.keep, refinement),
  };
}

/** Bits of a word that say how the spins of its pairs go together. */
export const SPIN_BITS: Readonly<Record<TermSizes['spins'], number>> = { free: 0, mixed: 2, fixed: 1 };

function addressOf(count: number, keepBits: number, refinement: number): AddressLayout {
  const bits = addressBits(count);
  let lowBits = bits - Math.min(refinement, bits);
  let factor = Math.ceil(count / 2 ** lowBits);
  while (factor % 2 === 0) {
    factor /= 2;
    lowBits++;
  }
  const highBits = factor === 1 ? 0 : addressBits(factor + 1);
  return { rows: factor * 2 ** lowBits, lowBits, factor, highBits, uniformBits: keepBits + highBits };
}

/** A fraction as threshold/2^bits; trailing zeros of the threshold would be bits that nobody looks at. */
function shareOf(fraction: number, bits: number): { bits: number; threshold: number } {
  let threshold = Math.min(2 ** bits - 1, Math.max(1, Math.round(fraction * 2 ** bits)));
  let used = bits;
  while (threshold % 2 === 0) {
    threshold /= 2;
    used--;
  }
  return { bits: used, threshold };
}

/**
 * Bits for the split between the two spin–orbit kinds. What it moves, λ_shared·2^{−bits}, all of it in one direction, is
 * to be no more than what rounding L weights is expected to, λ·2^{−ℵ}/√(12L) with errors of random signs.
 */
export function shareBits({ sharedPart, coefficients }: TermSizes, keepBits: number): number {
  if (sharedPart <= 0) return 0;
  return Math.max(1, keepBits + Math.ceil(Math.log2(sharedPart * Math.sqrt(12 * coefficients))));
}

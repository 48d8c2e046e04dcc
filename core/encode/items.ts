import {
  type FactorBlock,
  type HypercontractedFactors,
  type SquareFactors,
  sectorLayout,
  type TripleFactors,
  traceOfPairs,
} from '../factor';
import { vectorProducts } from './products';
import type { VectorProducts } from './program';
import { countAbove, median, shiftedNorm } from './shift';
import type { ShiftAxis } from './variant';

/** Eigenvalues below this part of a factor's largest are zero and take no row. */
export const ROW_ZERO = 1e-9;

/** One item of the outer PREPARE as the triplet form sees it, with its shift. */
export interface SquareItem {
  /** c_t, zero without a shift and in the odd sector, whose L⁰ has a spectrum symmetric about 0. */
  readonly shift: number;
  /** τ_t = tr L^{t,0}, before the shift. */
  readonly trace: number;
  /** Λ_t = Σ_μ ‖·‖_* after the shift. */
  readonly norm: number;
  readonly rows: number;
  /** Of these, rows of antisymmetric planes. */
  readonly pairRows: number;
}

export function squareItems(block: SquareFactors, shift: ShiftAxis): SquareItem[] {
  const { slots, spectrumWidth } = sectorLayout(block.sector, block.planes, block.n);
  const { spectra } = block;
  return Array.from({ length: block.count }, (_, t) => {
    const at = t * spectrumWidth;
    const charge = slots.find((slot) => slot.mu === 0 && slot.symmetric);
    const c = charge ? shiftOf(block, t, shift, at) : 0;
    let largest = 0;
    for (let i = at; i < at + spectrumWidth; i++) largest = Math.max(largest, Math.abs(spectra[i]!));
    let norm = 0;
    let rows = 0;
    let pairRows = 0;
    for (const slot of slots) {
      const from = at + slot.spectrumOffset;
      const to = from + slot.spectrumLength;
      const own = slot === charge ? c : 0;
      norm += (slot.symmetric ? 1 : 2) * shiftedNorm(spectra, from, to, own);
      const found = countAbove(spectra, from, to, own, ROW_ZERO * largest);
      rows += found;
      if (!slot.symmetric) pairRows += found;
    }
    const trace = charge ? traceOfPairs(block.vectors, t * block.dim + charge.offset, block.n) : 0;
    return { shift: c, trace, norm, rows, pairRows };
  });
}

/** Shift of a factor's charge plane: its median, or what was optimised where the factors carry that. */
function shiftOf(block: SquareFactors, t: number, shift: ShiftAxis, at: number): number {
  if (shift === 'none') return 0;
  return shift === 'optimised' && block.shifts ? block.shifts[t]! : median(block.spectra, at, at + block.n);
}

/** One triple: {X, Y} = ½[(cX + Y/c)² − (cX − Y/c)²] with c² = Λ_Y/Λ_X, X = a, Y = S. */
export interface TripleItem {
  /** Shift of Y in the same-orbit part, where Y = S⊗1; the other-orbit part has no charge to shift. */
  readonly shift: number;
  /** tr S before the shift. */
  readonly trace: number;
  readonly normX: number;
  /** Λ_Y of the same-orbit part, shifted, and of the other-orbit part. */
  readonly normSame: number;
  readonly normOther: number;
  readonly rows: number;
  readonly pairRows: number;
}

/** Shift of S in the same-orbit part of a triple: as {@link shiftOf}. */
function tripleShiftOf(block: TripleFactors, t: number, shift: ShiftAxis): number {
  if (shift === 'none' || block.sameScale === 0) return 0;
  const { n } = block;
  return shift === 'optimised' && block.shifts
    ? block.shifts[t]!
    : median(block.symmetricValues, t * n, (t + 1) * n);
}

export function tripleItems(block: TripleFactors, shift: ShiftAxis): TripleItem[] {
  const { n, count, antisymmetricNorms: a, symmetricValues: s } = block;
  const half = n >> 1;
  const npair = count > 0 ? block.symmetric.length / count : 0;
  return Array.from({ length: count }, (_, t) => {
    const from = t * n;
    const to = from + n;
    const c = tripleShiftOf(block, t, shift);
    const largest = Math.max(Math.abs(s[from]!), Math.abs(s[to - 1]!));
    const pairRows = countAbove(a, t * half, (t + 1) * half, 0, ROW_ZERO * a[t * half]!);
    // One list of vectors serves both parts; a vector counts where either part gives it weight.
    let symmetricRows = 0;
    for (let i = from; i < to; i++) {
      const same = block.sameScale !== 0 && Math.abs(s[i]! - c) > ROW_ZERO * largest;
      const other = block.otherScale !== 0 && Math.abs(s[i]!) > ROW_ZERO * largest;
      if (same || other) symmetricRows++;
    }
    return {
      shift: c,
      trace: traceOfPairs(block.symmetric, t * npair, n),
      normX: 2 * shiftedNorm(a, t * half, (t + 1) * half, 0),
      normSame: shiftedNorm(s, from, to, c),
      normOther: shiftedNorm(s, from, to, 0),
      rows: pairRows + symmetricRows,
      pairRows,
    };
  });
}

/** Everything a block contributes to the one-body part and to the constant, whatever the form of the encoding. */
export type BlockItems =
  | { readonly kind: 'squares'; readonly block: SquareFactors; readonly items: readonly SquareItem[] }
  | { readonly kind: 'triples'; readonly block: TripleFactors; readonly items: readonly TripleItem[] }
  | {
      readonly kind: 'hypercontracted';
      readonly block: HypercontractedFactors;
      readonly products: VectorProducts;
    };

export function itemsOf(blocks: readonly FactorBlock[], shift: ShiftAxis): BlockItems[] {
  return blocks.map((block) => {
    if (block.kind === 'squares') return { kind: 'squares', block, items: squareItems(block, shift) };
    if (block.kind === 'triples') return { kind: 'triples', block, items: tripleItems(block, shift) };
    if (block.kind === 'hypercontracted') return { kind: block.kind, block, products: vectorProducts(block) };
    throw new RangeError('spinor factors have no triplet items');
  });
}

import { bitsFor, free, type PrimitiveCost } from './cost';

/**
 * `plain` reads row by row (k = 1); `clean` is select-swap with k copies of the word on wires in state zero;
 * `dirty` is select-swap that borrows the copies from wires in any state.
 */
export type LookupMode = 'plain' | 'clean' | 'dirty';

export interface Table {
  /** L: number of rows. */
  readonly rows: number;
  /** b: bits of a row. */
  readonly bits: number;
}

const LOAD_SOURCE =
  'Low, Kliuchnikov & Schaeffer, arXiv:1812.00954 (2018); Berry et al., Quantum 3, 208 (2019)';
const ERASE_SOURCE = 'Berry et al., Quantum 3, 208 (2019), measurement-based erasure';

/** Wires a load with block `k` borrows in any state (dirty mode only). */
export function borrowedByLoad(table: Table, block: number, mode: LookupMode): number {
  return mode === 'dirty' && table.rows > 1 ? table.bits * (block - 1) : 0;
}

/** Toffoli of loading one row of `table` onto b wires in state zero. @param block - k, a power of two. */
export function loadToffoli({ rows, bits }: Table, block: number, mode: LookupMode): number {
  if (rows <= 1) return 0;
  const groups = Math.ceil(rows / block);
  if (mode === 'dirty' && block > 1) return 2 * groups + 4 * bits * (block - 1);
  return groups + bits * (block - 1);
}

/** Toffoli of erasing a loaded row by measuring it in the X basis and mending the phases. */
export function eraseToffoli(rows: number, block: number, mode: LookupMode): number {
  if (rows <= 1) return 0;
  const groups = Math.ceil(rows / block);
  return mode === 'dirty' && block > 1 ? 2 * groups + 4 * block : groups + block;
}

/** Loads a row: `scratch` is the address ladder and, in clean mode, the k − 1 further copies of the word. */
export function load(table: Table, block: number, mode: LookupMode): PrimitiveCost {
  const { rows, bits } = table;
  if (rows <= 1) return free('0: at most one row is written by X gates', { L: rows, b: bits }, LOAD_SOURCE);
  const copies = mode === 'dirty' ? 0 : bits * (block - 1);
  return {
    toffoli: loadToffoli(table, block, mode),
    t: 0,
    scratch: copies + bitsFor(Math.ceil(rows / block)),
    formula: mode === 'dirty' && block > 1 ? '2⌈L/k⌉ + 4b(k − 1)' : '⌈L/k⌉ + b(k − 1)',
    inputs: { L: rows, b: bits, k: block },
    source: LOAD_SOURCE,
  };
}

/** Erases a loaded row of a table of `rows` rows; the measured wires are free again afterwards. */
export function erase(rows: number, block: number, mode: LookupMode): PrimitiveCost {
  if (rows <= 1) return free('0: at most one row', { L: rows }, ERASE_SOURCE);
  return {
    toffoli: eraseToffoli(rows, block, mode),
    t: 0,
    scratch: (mode === 'dirty' ? 1 : block) + bitsFor(Math.ceil(rows / block)),
    formula: mode === 'dirty' && block > 1 ? '2⌈L/k⌉ + 4k' : '⌈L/k⌉ + k',
    inputs: { L: rows, k: block },
    source: ERASE_SOURCE,
  };
}

/** Block sizes worth trying for a table of `rows` rows: 1, 2, 4, … up to the first power of two ≥ rows. */
export function blockSizes(rows: number): number[] {
  const sizes = [1];
  while (sizes[sizes.length - 1]! < rows) sizes.push(sizes[sizes.length - 1]! * 2);
  return sizes;
}

/**
 * The block with the fewest Toffoli among those that `fits` allows; the smaller one on a tie. Where none fits,
 * the smallest block: the caller then sees a peak above its cap.
 */
export function bestBlock(
  rows: number,
  toffoli: (block: number) => number,
  fits: (block: number) => boolean = () => true,
): number {
  let best = 1;
  let least = Number.POSITIVE_INFINITY;
  for (const block of blockSizes(rows)) {
    if (!fits(block)) continue;
    const cost = toffoli(block);
    if (cost < least) {
      least = cost;
      best = block;
    }
  }
  return best;
}

import type { Block } from './blocks';

/*
 * Spin reversal as a linear symmetry. Time reversal is antiunitary, but where a block is real, H commutes also
 * with its unitary part: a permutation of the determinants (↑↔↓ in every orbital) with signs. The signs are
 * found from the matrix and the symmetry is verified element by element before it is used, so nothing is
 * assumed about the Hamiltonian.
 */

/** Largest deviation of an element from its mirror image, relative to the largest element, that is rounding. */
const ROUNDING = 1e-13;

/** The state with ↑ and ↓ exchanged in every orbital. */
function reversed(state: number): number {
  return (((state & 0x55555555) << 1) | ((state >>> 1) & 0x55555555)) >>> 0;
}

/** Symmetric storage: column j holds all its elements, the diagonal one too, rows ascending. */
interface FullColumns {
  readonly start: Uint32Array;
  readonly row: Uint32Array;
  readonly value: Float64Array;
}

function fullColumns({ dim, start, row, re, diagonal }: Block): FullColumns {
  const counts = new Uint32Array(dim + 1);
  for (let j = 0; j < dim; j++) {
    counts[j + 1]! += 1 + start[j + 1]! - start[j]!;
    for (let e = start[j]!; e < start[j + 1]!; e++) counts[row[e]! + 1]!++;
  }
  for (let j = 0; j < dim; j++) counts[j + 1]! += counts[j]!;
  const next = counts.slice(0, dim);
  const rows = new Uint32Array(counts[dim]!);
  const value = new Float64Array(counts[dim]!);
  const put = (column: number, i: number, x: number) => {
    const at = next[column]!++;
    rows[at] = i;
    value[at] = x;
  };
  // Column by column: the elements above the diagonal of a column come before its own, so only the part below
  // needs sorting.
  for (let j = 0; j < dim; j++) {
    put(j, j, diagonal[j]!);
    const below = Array.from({ length: start[j + 1]! - start[j]! }, (_, e) => start[j]! + e);
    below.sort((a, b) => row[a]! - row[b]!);
    for (const e of below) {
      put(j, row[e]!, re[e]!);
      put(row[e]!, j, re[e]!);
    }
  }
  return { start: counts, row: rows, value };
}

function elementAt({ start, row, value }: FullColumns, i: number, j: number): number {
  let [low, high] = [start[j]!, start[j + 1]! - 1];
  while (low <= high) {
    const middle = (low + high) >>> 1;
    if (row[middle] === i) return value[middle]!;
    if (row[middle]! < i) low = middle + 1;
    else high = middle - 1;
  }
  return 0;
}

interface Mirror {
  readonly image: Int32Array;
  /** W|j⟩ = sign_j |image_j⟩. */
  readonly sign: Int8Array;
  /** Largest |H − WHW⁻¹| of any element. */
  readonly deviation: number;
}

/** The signed permutation that commutes with the block, or null where there is none with W² = 1. */
function findMirror(block: Block, full: FullColumns): Mirror | null {
  const { dim, states } = block;
  const position = new Map<number, number>();
  for (let i = 0; i < dim; i++) position.set(states[i]!, i);
  const image = new Int32Array(dim);
  for (let i = 0; i < dim; i++) {
    const partner = position.get(reversed(states[i]!));
    if (partner === undefined) return null;
    image[i] = partner;
  }
  let largest = 0;
  for (let i = 0; i < full.value.length; i++) largest = Math.max(largest, Math.abs(full.value[i]!));
  const sign = new Int8Array(dim);
  let deviation = 0;
  sign[0] = 1;
  const queue = [0];
  for (let j = queue.pop(); j !== undefined; j = queue.pop()) {
    for (let e = full.start[j]!; e < full.start[j + 1]!; e++) {
      const i = full.row[e]!;
      const here = full.value[e]!;
      const there = elementAt(full, image[i]!, image[j]!);
      // Tiny elements do not tell a sign; others fix it at their first visit and must agree at every later one.
      if (sign[i] === 0) {
        if (Math.abs(here) < 1e3 * ROUNDING * largest) continue;
        sign[i] = here * there > 0 ? sign[j]! : -sign[j]!;
        queue.push(i);
      }
      deviation = Math.max(deviation, Math.abs(there - sign[i]! * sign[j]! * here));
      if (deviation > ROUNDING * largest) return null;
    }
  }
  for (let i = 0; i < dim; i++) if (sign[i] === 0 || sign[i] !== sign[image[i]!]) return null;
  return { image, sign, deviation };
}

/**
 * Splits a real block into its two parts under spin reversal, W = +1 and W = −1.
 *
 * @returns the two parts and a bound on the shift of any eigenvalue by rounding in the symmetry (hartree), or null
 *   where the block does not have the symmetry.
 */
export function splitByMirror(block: Block): { readonly parts: Block[]; readonly bound: number } | null {
  if (block.im.length > 0 || block.dim < 2) return null;
  const full = fullColumns(block);
  const mirror = findMirror(block, full);
  if (!mirror) return null;
  const parts = [1, -1].map((parity) => project(block, full, mirror, parity)).filter((part) => part.dim > 0);
  let longest = 0;
  for (let j = 0; j < block.dim; j++) longest = Math.max(longest, full.start[j + 1]! - full.start[j]!);
  return { parts, bound: mirror.deviation * longest };
}

/**
 * The part W = parity in the basis N_j P|j⟩, P = (1 + parity·W)/2, with N = √2 for a pair and 1 for a determinant
 * that is its own mirror image: ⟨i|H|j⟩ = N_i N_j Σ_k ⟨i|P|k⟩ H_kj.
 */
function project(block: Block, full: FullColumns, { image, sign }: Mirror, parity: number): Block {
  const { dim } = block;
  const index = new Int32Array(dim).fill(-1);
  const kept: number[] = [];
  for (let j = 0; j < dim; j++) {
    if (image[j]! < j || (image[j] === j && sign[j] !== parity)) continue;
    index[j] = kept.length;
    kept.push(j);
  }
  const diagonal = new Float64Array(kept.length);
  const start = new Uint32Array(kept.length + 1);
  const rows: number[] = [];
  const values: number[] = [];
  const work = new Float64Array(dim);
  for (const [column, j] of kept.entries()) {
    const normJ = image[j] === j ? 1 : Math.SQRT2;
    const touched: number[] = [];
    for (let e = full.start[j]!; e < full.start[j + 1]!; e++) {
      const k = full.row[e]!;
      const i = Math.min(k, image[k]!);
      if (index[i]! < column) continue;
      if (work[i] === 0) touched.push(i);
      const weight = image[k] === k ? normJ : Math.SQRT1_2 * normJ * (k === i ? 1 : parity * sign[k]!);
      work[i]! += weight * full.value[e]!;
    }
    for (const i of touched) {
      // An element may come back to zero and be listed twice; the second visit finds it cleared.
      if (i === j) diagonal[column] = work[i]!;
      else if (work[i] !== 0) {
        rows.push(index[i]!);
        values.push(work[i]!);
      }
      if (i !== j) work[i] = 0;
    }
    work[j] = 0;
    start[column + 1] = rows.length;
  }
  return {
    dim: kept.length,
    states: Uint32Array.from(kept, (j) => block.states[j]!),
    diagonal,
    start,
    row: Uint32Array.from(rows),
    re: Float64Array.from(values),
    im: new Float64Array(0),
  };
}

import type { JobContext } from '../job';
import { type Adjacency, adjacencyOf } from './adjacency';
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

interface Mirror {
  readonly image: Int32Array;
  /** W|j⟩ = sign_j |image_j⟩. */
  readonly sign: Int8Array;
  /** Largest |H − WHW⁻¹| of any element. */
  readonly deviation: number;
}

/** The signed permutation that commutes with the block, or null where there is none with W² = 1. */
function findMirror(block: Block, links: Adjacency): Mirror | null {
  const { dim, states, diagonal, re } = block;
  const position = new Map<number, number>();
  for (let i = 0; i < dim; i++) position.set(states[i]!, i);
  const image = new Int32Array(dim);
  for (let i = 0; i < dim; i++) {
    const partner = position.get(reversed(states[i]!));
    if (partner === undefined) return null;
    image[i] = partner;
  }
  let largest = 0;
  for (const plane of [diagonal, re]) {
    for (let i = 0; i < plane.length; i++) largest = Math.max(largest, Math.abs(plane[i]!));
  }
  const sign = new Int8Array(dim);
  const mirrored = new Float64Array(dim);
  const { start, row, element } = links;
  let deviation = 0;
  sign[0] = 1;
  const stack = [0];
  for (let j = stack.pop(); j !== undefined; j = stack.pop()) {
    const partner = image[j]!;
    for (let at = start[partner]!; at < start[partner + 1]!; at++) mirrored[row[at]!] = re[element[at]!]!;
    deviation = Math.max(deviation, Math.abs(diagonal[j]! - diagonal[partner]!));
    for (let at = start[j]!; at < start[j + 1]!; at++) {
      const i = row[at]!;
      const here = re[element[at]!]!;
      const there = mirrored[image[i]!]!;
      // Tiny elements do not tell a sign; others fix it at their first visit and must agree at every later one.
      if (sign[i] === 0) {
        if (Math.abs(here) < 1e3 * ROUNDING * largest) continue;
        sign[i] = here * there > 0 ? sign[j]! : -sign[j]!;
        stack.push(i);
      }
      deviation = Math.max(deviation, Math.abs(there - sign[i]! * sign[j]! * here));
    }
    if (deviation > ROUNDING * largest) return null;
    for (let at = start[partner]!; at < start[partner + 1]!; at++) mirrored[row[at]!] = 0;
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
export async function splitByMirror(
  block: Block,
  context: JobContext,
): Promise<{ readonly parts: Block[]; readonly bound: number } | null> {
  if (block.im.length > 0 || block.dim < 2) return null;
  const links = adjacencyOf(block);
  await context.checkpoint();
  const mirror = findMirror(block, links);
  if (!mirror) return null;
  const parts: Block[] = [];
  for (const parity of [1, -1]) {
    await context.checkpoint();
    const part = project(block, links, mirror, parity);
    if (part.dim > 0) parts.push(part);
  }
  let longest = 0;
  for (let j = 0; j < block.dim; j++) longest = Math.max(longest, 1 + links.start[j + 1]! - links.start[j]!);
  return { parts, bound: mirror.deviation * longest };
}

/**
 * The part W = parity in the basis N_j P|j⟩, P = (1 + parity·W)/2, with N = √2 for a pair and 1 for a determinant
 * that is its own mirror image: ⟨i|H|j⟩ = N_i N_j Σ_k ⟨i|P|k⟩ H_kj.
 */
function project(block: Block, links: Adjacency, { image, sign }: Mirror, parity: number): Block {
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
  const rows = new Uint32Array(links.row.length);
  const values = new Float64Array(links.row.length);
  const work = new Float64Array(dim);
  const touched = new Uint32Array(dim);
  let size = 0;
  for (const [column, j] of kept.entries()) {
    const normJ = image[j] === j ? 1 : Math.SQRT2;
    let count = 0;
    const add = (k: number, value: number) => {
      const i = Math.min(k, image[k]!);
      if (index[i]! < column) return;
      if (work[i] === 0) touched[count++] = i;
      const weight = image[k] === k ? normJ : Math.SQRT1_2 * normJ * (k === i ? 1 : parity * sign[k]!);
      work[i]! += weight * value;
    };
    add(j, block.diagonal[j]!);
    for (let at = links.start[j]!; at < links.start[j + 1]!; at++) {
      add(links.row[at]!, block.re[links.element[at]!]!);
    }
    diagonal[column] = work[j]!;
    work[j] = 0;
    // A row whose sum came back to zero in between is listed twice; the second visit finds it cleared.
    for (let t = 0; t < count; t++) {
      const i = touched[t]!;
      if (work[i] === 0) continue;
      rows[size] = index[i]!;
      values[size++] = work[i]!;
      work[i] = 0;
    }
    start[column + 1] = size;
  }
  return {
    dim: kept.length,
    states: Uint32Array.from(kept, (j) => block.states[j]!),
    diagonal,
    start,
    row: rows.slice(0, size),
    re: values.slice(0, size),
    im: new Float64Array(0),
  };
}

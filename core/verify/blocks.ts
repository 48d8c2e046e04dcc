import type { JobContext } from '../job';
import { adjacencyOf } from './adjacency';
import type { SectorMatrix } from './sector-matrix';
import type { SparseHermitian } from './sparse-hermitian';

/** An unconnected part of a sector's matrix, with the determinants it lives on. */
export interface Block extends SparseHermitian {
  readonly states: Uint32Array;
}

/**
 * Splits a sparse Hermitian matrix into the blocks that its pattern of zeros leaves unconnected: symmetries (spin
 * projection, point groups) show themselves as such, without being named. A block is made real where a change
 * of phases by powers of i does it.
 *
 * @returns blocks in ascending order of their first determinant; together they have the matrix' spectrum.
 */
export async function connectedBlocks(matrix: SectorMatrix, context: JobContext): Promise<Block[]> {
  const { dim, start, row } = matrix;
  const parent = Uint32Array.from({ length: dim }, (_, i) => i);
  const root = (i: number): number => {
    while (parent[i] !== i) {
      parent[i] = parent[parent[i]!]!;
      i = parent[i]!;
    }
    return i;
  };
  for (let j = 0; j < dim; j++) {
    for (let e = start[j]!; e < start[j + 1]!; e++) {
      const [a, b] = [root(j), root(row[e]!)];
      if (a < b) parent[b] = a;
      else if (b < a) parent[a] = b;
    }
  }
  const members = new Map<number, number[]>();
  const position = new Uint32Array(dim);
  for (let i = 0; i < dim; i++) {
    const list = members.get(root(i)) ?? [];
    if (list.length === 0) members.set(root(i), list);
    position[i] = list.length;
    list.push(i);
  }
  const blocks: Block[] = [];
  for (const list of members.values()) {
    await context.checkpoint();
    const block = extract(matrix, list, position);
    await context.checkpoint();
    blocks.push(block.im.length > 0 ? madeReal(block) : block);
  }
  return blocks;
}

function extract(matrix: SectorMatrix, list: readonly number[], position: Uint32Array): Block {
  const dim = list.length;
  const complex = matrix.im.length > 0;
  const start = new Uint32Array(dim + 1);
  for (let j = 0; j < dim; j++) {
    start[j + 1] = start[j]! + matrix.start[list[j]! + 1]! - matrix.start[list[j]!]!;
  }
  const row = new Uint32Array(start[dim]!);
  const re = new Float64Array(start[dim]!);
  const im = new Float64Array(complex ? start[dim]! : 0);
  for (let j = 0; j < dim; j++) {
    const from = matrix.start[list[j]!]!;
    for (let e = start[j]!, f = from; e < start[j + 1]!; e++, f++) {
      row[e] = position[matrix.row[f]!]!;
      re[e] = matrix.re[f]!;
      if (complex) im[e] = matrix.im[f]!;
    }
  }
  const diagonal = Float64Array.from(list, (i) => matrix.diagonal[i]!);
  const states = Uint32Array.from(list, (i) => matrix.basis.states[i]!);
  return { dim, states, diagonal, start, row, re, im };
}

/**
 * The block in phases i^t, t ∈ {0, 1}, that make it real, or unchanged where there are none: that takes every
 * element purely real or purely imaginary and all cycles to agree.
 */
function madeReal(block: Block): Block {
  const { dim, start, row, re, im } = block;
  for (let e = 0; e < row.length; e++) if (re[e] !== 0 && im[e] !== 0) return block;
  const links = adjacencyOf(block);
  const turns = new Int8Array(dim).fill(-1);
  turns[0] = 0;
  const stack = [0];
  for (let j = stack.pop(); j !== undefined; j = stack.pop()) {
    for (let at = links.start[j]!; at < links.start[j + 1]!; at++) {
      const expected = turns[j]! ^ (im[links.element[at]!] !== 0 ? 1 : 0);
      const i = links.row[at]!;
      if (turns[i] === -1) {
        turns[i] = expected;
        stack.push(i);
      } else if (turns[i] !== expected) return block;
    }
  }
  // Element (i, j) times (−i)^t_i i^t_j: an imaginary y becomes y where the row is turned, −y where the column is.
  const real = re.slice();
  for (let j = 0; j < dim; j++) {
    for (let e = start[j]!; e < start[j + 1]!; e++) {
      if (im[e] !== 0) real[e] = turns[row[e]!] === 1 ? im[e]! : -im[e]!;
    }
  }
  return { ...block, re: real, im: new Float64Array(0) };
}

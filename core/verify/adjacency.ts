import type { SparseHermitian } from './sparse-hermitian';

/**
 * The elements off the diagonal of a sparse Hermitian matrix, both triangles: column j lists its rows in ascending
 * order, each with the number of the stored element below the diagonal that it comes from.
 */
export interface Adjacency {
  readonly start: Uint32Array;
  readonly row: Uint32Array;
  readonly element: Uint32Array;
}

/** Sorts without comparing: filling by ascending columns, twice, leaves both triangles in order. */
export function adjacencyOf({ dim, start, row }: SparseHermitian): Adjacency {
  const size = row.length;
  const above = new Uint32Array(dim + 1);
  for (let e = 0; e < size; e++) above[row[e]! + 1]!++;
  for (let i = 0; i < dim; i++) above[i + 1]! += above[i]!;
  const both = new Uint32Array(dim + 1);
  for (let i = 0; i <= dim; i++) both[i] = above[i]! + start[i]!;
  const rows = new Uint32Array(2 * size);
  const element = new Uint32Array(2 * size);
  const next = both.slice(0, dim);
  // Row i is first met in column j < i: these entries come in ascending j.
  for (let j = 0; j < dim; j++) {
    for (let e = start[j]!; e < start[j + 1]!; e++) {
      const at = next[row[e]!]!++;
      rows[at] = j;
      element[at] = e;
    }
  }
  // Their mirror images, read by ascending i, fill the rest of each column in ascending order.
  for (let i = 0; i < dim; i++) {
    const upper = both[i]! + above[i + 1]! - above[i]!;
    for (let at = both[i]!; at < upper; at++) {
      const to = next[rows[at]!]!++;
      rows[to] = i;
      element[to] = element[at]!;
    }
  }
  return { start: both, row: rows, element };
}

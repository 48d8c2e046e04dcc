/** Rows and columns of a matrix that exact zeros separate from the rest (spatial symmetry, mostly). */
export interface Block {
  readonly rows: Int32Array;
  readonly cols: Int32Array;
}

/**
 * Blocks of a rows×cols matrix: connected components of the graph that joins row i with column j where a_ij ≠ 0.
 * Rows and columns that are zero throughout belong to no block. Decomposing block by block gives the same
 * singular vectors as decomposing the whole, for a fraction of the work.
 */
export function matrixBlocks(a: Float64Array, rows: number, cols: number): Block[] {
  const find = (i: number): number => {
    let root = i;
    while (parent[root] !== root) root = parent[root]!;
    while (parent[i] !== root) [i, parent[i]] = [parent[i]!, root];
    return root;
  };
  const parent = Int32Array.from({ length: rows + cols }, (_, i) => i);
  for (let i = 0, at = 0; i < rows; i++) {
    let root = find(i);
    for (let j = 0; j < cols; j++, at++) {
      if (a[at] === 0) continue;
      const other = find(rows + j);
      if (other === root) continue;
      // Lowest index as the root, so that blocks come out in order of their first row.
      const low = Math.min(root, other);
      parent[Math.max(root, other)] = low;
      root = low;
    }
  }
  const members = new Map<number, { rows: number[]; cols: number[] }>();
  for (let i = 0; i < rows + cols; i++) {
    const root = find(i);
    let block = members.get(root);
    if (!block) {
      block = { rows: [], cols: [] };
      members.set(root, block);
    }
    if (i < rows) block.rows.push(i);
    else block.cols.push(i - rows);
  }
  return [...members.values()]
    .filter((block) => block.rows.length > 0 && block.cols.length > 0)
    .map((block) => ({ rows: Int32Array.from(block.rows), cols: Int32Array.from(block.cols) }));
}

/** Blocks of a symmetric n×n matrix; `rows` and `cols` of a block are the same indices. */
export function symmetricBlocks(a: Float64Array, n: number): Block[] {
  return matrixBlocks(a, n, n).map((block) => {
    // In the bipartite graph of a symmetric matrix without diagonal a block may appear as two mirror images.
    const indices = Int32Array.from(new Set([...block.rows, ...block.cols])).sort();
    return { rows: indices, cols: indices };
  });
}

export function submatrix(a: Float64Array, cols: number, block: Block): Float64Array {
  const out = new Float64Array(block.rows.length * block.cols.length);
  let i = 0;
  for (const r of block.rows) for (const c of block.cols) out[i++] = a[r * cols + c]!;
  return out;
}

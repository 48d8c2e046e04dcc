import type { SpinHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import { hermitianEigenvalues, lowestEigenpairs, type Planes, symmetricEigenvalues } from '../linalg';
import { connectedBlocks } from './blocks';
import type { Form } from './fock';
import { type SparseHermitian, sectorMatrix } from './sector-matrix';

export interface SpectrumOptions {
  /** @defaultValue those of the Hamiltonian */
  readonly electrons?: number;
  /** How many of the lowest levels, counted with multiplicity; fewer where the sector is smaller. @defaultValue 6 */
  readonly states?: number;
  /** Which form the matrix is built from. @defaultValue 'product' */
  readonly form?: Form;
}

export interface Spectrum {
  /** Ascending, hartree, constant included. */
  readonly values: Float64Array;
  /** Determinants in the sector. */
  readonly dim: number;
  /** Unconnected blocks that the sector falls into. */
  readonly blocks: number;
  /** What numerical zeros left out and the iteration's residuals may shift a value by, hartree. */
  readonly errorBound: number;
}

/** Up to here all eigenvalues of a block are computed at once; above, the lowest by iteration. */
const DENSE_REAL = 400;
const DENSE_COMPLEX = 240;
/** Residual of iterated eigenpairs, hartree. The error of a value is at most that and in practice its square. */
const RESIDUAL = 1e-7;

/** Lowest eigenvalues of H in the sector of fixed electron number, all spin projections. */
export async function exactSpectrum(
  hamiltonian: SpinHamiltonian,
  options: SpectrumOptions,
  context: JobContext,
): Promise<Spectrum> {
  const matrix = await sectorMatrix(
    hamiltonian,
    options.electrons ?? hamiltonian.electrons,
    options.form ?? 'product',
    context,
  );
  const states = Math.min(options.states ?? 6, matrix.dim);
  const blocks = connectedBlocks(matrix);
  const levels = await lowestLevels(blocks, states, context);
  return {
    values: levels.values,
    dim: matrix.dim,
    blocks: blocks.length,
    errorBound: matrix.droppedBound + levels.residual,
  };
}

/** y = H x. */
export function multiplySparse(matrix: SparseHermitian, x: Planes, y: Planes): void {
  const { dim, diagonal, start, row, re, im } = matrix;
  for (let i = 0; i < dim; i++) y.re[i] = diagonal[i]! * x.re[i]!;
  if (im.length === 0 && x.im.length === 0) {
    for (let j = 0; j < dim; j++) {
      const xj = x.re[j]!;
      let sum = 0;
      for (let e = start[j]!; e < start[j + 1]!; e++) {
        const i = row[e]!;
        y.re[i]! += re[e]! * xj;
        sum += re[e]! * x.re[i]!;
      }
      y.re[j]! += sum;
    }
    return;
  }
  for (let i = 0; i < dim; i++) y.im[i] = diagonal[i]! * x.im[i]!;
  for (let j = 0; j < dim; j++) {
    const xr = x.re[j]!;
    const xi = x.im[j]!;
    let sr = 0;
    let si = 0;
    for (let e = start[j]!; e < start[j + 1]!; e++) {
      const i = row[e]!;
      const a = re[e]!;
      const b = im.length === 0 ? 0 : im[e]!;
      y.re[i]! += a * xr - b * xi;
      y.im[i]! += a * xi + b * xr;
      sr += a * x.re[i]! + b * x.im[i]!;
      si += a * x.im[i]! - b * x.re[i]!;
    }
    y.re[j]! += sr;
    y.im[j]! += si;
  }
}

interface BlockLevels {
  values: Float64Array;
  vectors: Planes | null;
  /** True once every eigenvalue of the block is there. */
  complete: boolean;
  residual: number;
}

/**
 * The lowest `states` eigenvalues over all blocks. A large block is asked for its share first and for more as
 * long as its highest computed level still lies below the last one wanted.
 */
async function lowestLevels(
  blocks: readonly SparseHermitian[],
  states: number,
  context: JobContext,
): Promise<{ values: Float64Array; residual: number }> {
  const total = blocks.reduce((sum, block) => sum + block.dim, 0);
  const found: BlockLevels[] = [];
  for (const [i, block] of blocks.entries()) {
    context.report('blocks', i, blocks.length);
    const share = Math.ceil((states * block.dim) / total);
    found.push(await blockLevels(block, Math.min(states, share + 2), null, context));
  }
  for (;;) {
    const merged = Float64Array.from(found.flatMap((levels) => [...levels.values])).sort();
    const last = merged.length >= states ? merged[states - 1]! : Number.POSITIVE_INFINITY;
    const short = found.findIndex(
      (levels) => !levels.complete && levels.values.length < states && levels.values.at(-1)! <= last + 1e-9,
    );
    if (short === -1) {
      context.report('blocks', blocks.length, blocks.length);
      return {
        values: merged.slice(0, states),
        residual: found.reduce((largest, { residual }) => Math.max(largest, residual), 0),
      };
    }
    const more = Math.min(states, Math.ceil(1.6 * found[short]!.values.length));
    found[short] = await blockLevels(blocks[short]!, more, found[short]!.vectors, context);
  }
}

async function blockLevels(
  block: SparseHermitian,
  count: number,
  start: Planes | null,
  context: JobContext,
): Promise<BlockLevels> {
  await context.checkpoint();
  const complex = block.im.length > 0;
  if (block.dim <= (complex ? DENSE_COMPLEX : DENSE_REAL) || 4 * count > block.dim) {
    const { re, im } = denseMatrix(block);
    const values = complex
      ? hermitianEigenvalues({ n: block.dim, re, im })
      : symmetricEigenvalues(re, block.dim);
    // Backward-stable solver: a modest multiple of n·2⁻⁵²·‖H‖.
    const size = Math.max(Math.abs(values[0]!), Math.abs(values.at(-1)!));
    return { values, vectors: null, complete: true, residual: block.dim * 2 ** -52 * size };
  }
  const pairs = await lowestEigenpairs(
    (x, y) => multiplySparse(block, x, y),
    block.dim,
    count,
    { complex, tolerance: RESIDUAL, diagonal: block.diagonal, ...(start ? { start } : {}) },
    context,
  );
  const im = complex ? pairs.im : new Float64Array(0);
  const residual = Math.max(...pairs.residuals);
  return { values: pairs.values, vectors: { re: pairs.re, im }, complete: false, residual };
}

function denseMatrix(block: SparseHermitian): Planes {
  const { dim, diagonal, start, row } = block;
  const re = new Float64Array(dim * dim);
  const im = new Float64Array(block.im.length > 0 ? dim * dim : 0);
  for (let j = 0; j < dim; j++) {
    re[j * dim + j] = diagonal[j]!;
    for (let e = start[j]!; e < start[j + 1]!; e++) {
      const i = row[e]!;
      re[i * dim + j] = block.re[e]!;
      re[j * dim + i] = block.re[e]!;
      if (im.length > 0) {
        im[i * dim + j] = block.im[e]!;
        im[j * dim + i] = -block.im[e]!;
      }
    }
  }
  return { re, im };
}

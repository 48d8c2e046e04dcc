import type { JobContext } from '../job';
import {
  hermitianEigen,
  hermitianEigenvalues,
  lowestEigenpairs,
  type Planes,
  symmetricEigen,
  symmetricEigenvalues,
} from '../linalg';
import { denseMatrix, denseSubmatrix, multiplySparse } from './sparse';
import type { SparseHermitian } from './sparse-hermitian';

/** Up to here all eigenvalues of a block are computed at once; above, the lowest by iteration. */
const DENSE_REAL = 500;
const DENSE_COMPLEX = 240;
/** Determinants of the small problem whose vectors start the iteration. */
const START_SPACE = 200;
/** Residual of iterated eigenpairs, hartree. The error of a value is at most that and in practice its square. */
const RESIDUAL = 1e-7;

interface BlockLevels {
  readonly values: Float64Array;
  readonly vectors: Planes;
  /** True once every eigenvalue of the block is there. */
  readonly complete: boolean;
  readonly residual: number;
}

/**
 * The lowest `states` eigenvalues over all blocks, with their multiplicity. Small blocks are diagonalised. A large
 * one is asked for as many levels as its lowest determinants suggest, and for more as long as its highest
 * computed level still lies below the last one wanted.
 *
 * @returns values ascending and a bound on their error, hartree.
 */
export async function lowestLevels(
  blocks: readonly SparseHermitian[],
  states: number,
  context: JobContext,
): Promise<{ readonly values: Float64Array; readonly residual: number }> {
  const found: BlockLevels[] = [];
  for (const block of blocks) {
    await context.checkpoint();
    found.push(isSmall(block, states) ? allLevels(block) : firstGuess(block));
  }
  const guessed = lowestOf(found, states).at(-1)!;
  for (const [i, block] of blocks.entries()) {
    context.report('blocks', i, blocks.length);
    if (found[i]!.complete) continue;
    const below = found[i]!.values.filter((value) => value <= guessed).length;
    found[i] = await iterate(block, Math.min(states, below + 1), found[i]!.vectors, context);
  }
  for (;;) {
    const values = lowestOf(found, states);
    const last = values.length === states ? values.at(-1)! : Number.POSITIVE_INFINITY;
    const short = found.findIndex(
      (levels) => !levels.complete && levels.values.length < states && levels.values.at(-1)! <= last + 1e-9,
    );
    if (short === -1) {
      context.report('blocks', blocks.length, blocks.length);
      return { values, residual: found.reduce((largest, { residual }) => Math.max(largest, residual), 0) };
    }
    const more = Math.min(states, Math.ceil(1.3 * found[short]!.values.length) + 1);
    found[short] = await iterate(blocks[short]!, more, found[short]!.vectors, context);
  }
}

function lowestOf(found: readonly BlockLevels[], states: number): Float64Array {
  return Float64Array.from(found.flatMap(({ values }) => [...values]))
    .sort()
    .slice(0, states);
}

function isSmall(block: SparseHermitian, states: number): boolean {
  return block.dim <= (block.im.length > 0 ? DENSE_COMPLEX : DENSE_REAL) || 4 * states > block.dim;
}

const NO_VECTORS: Planes = { re: new Float64Array(0), im: new Float64Array(0) };

function allLevels(block: SparseHermitian): BlockLevels {
  const { re, im } = denseMatrix(block);
  const values =
    im.length > 0 ? hermitianEigenvalues({ n: block.dim, re, im }) : symmetricEigenvalues(re, block.dim);
  // Backward-stable solver: a modest multiple of n·2⁻⁵²·‖H‖.
  const size = Math.max(Math.abs(values[0]!), Math.abs(values.at(-1)!));
  return { values, vectors: NO_VECTORS, complete: true, residual: block.dim * 2 ** -52 * size };
}

/** Levels and vectors of the block among its lowest determinants alone. */
function firstGuess(block: SparseHermitian): BlockLevels {
  const { dim, diagonal } = block;
  const list = [...diagonal.keys()].sort((i, j) => diagonal[i]! - diagonal[j]!).slice(0, START_SPACE);
  const size = list.length;
  const { re, im } = denseSubmatrix(block, list);
  const complex = im.length > 0;
  const small = complex ? hermitianEigen({ n: size, re, im }) : symmetricEigen(re, size);
  const [smallRe, smallIm] = 'vectors' in small ? [small.vectors, im] : [small.re, small.im];
  const vectors = {
    re: new Float64Array(size * dim),
    im: new Float64Array(complex ? size * dim : 0),
  };
  for (let v = 0; v < size; v++) {
    for (const [i, to] of list.entries()) {
      vectors.re[v * dim + to] = smallRe[v * size + i]!;
      if (complex) vectors.im[v * dim + to] = smallIm[v * size + i]!;
    }
  }
  return { values: small.values, vectors, complete: false, residual: Number.POSITIVE_INFINITY };
}

async function iterate(
  block: SparseHermitian,
  count: number,
  start: Planes,
  context: JobContext,
): Promise<BlockLevels> {
  const complex = block.im.length > 0;
  const pairs = await lowestEigenpairs(
    (x, y) => multiplySparse(block, x, y),
    block.dim,
    count,
    { complex, tolerance: RESIDUAL, diagonal: block.diagonal, start },
    context,
  );
  const im = complex ? pairs.im : new Float64Array(0);
  return {
    values: pairs.values,
    vectors: { re: pairs.re, im },
    complete: false,
    residual: Math.max(...pairs.residuals),
  };
}

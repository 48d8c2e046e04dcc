import { zeroOperator } from '../hamiltonian';
import type { JobContext } from '../job';
import { antisymmetricNormsBatch, multiply } from '../linalg';
import { ZERO_WEIGHT } from './eigenvectors';
import { traceOfPairs } from './elements';
import type { Factorisation, SquareFactors, TripleFactors } from './factors';
import { type Choice, capped, centred } from './limit';
import { type FoldTarget, foldSquare, foldTriple } from './mean-field';
import { lcuNorms, squareOneNorms } from './one-norms';
import { selectFactors } from './select';

type SpatialBlock = SquareFactors | TripleFactors;

/** What the Cholesky decomposition itself left out: bounds and the one-body part that stays. */
export interface Remainder {
  /** Trace of the remainder, hartree. */
  readonly trace: number;
  /** Σ w τ L over the remainder, coordinates over symmetric pairs, hartree. */
  readonly oneBody: Float64Array;
  /** Σ w τ², hartree. */
  readonly traceSquare: number;
}

/** Which factors to keep: of all blocks together, the lightest are dropped while their sum stays ≤ budget. */
export function chooseKept(
  norms: readonly Float64Array[],
  sizes: readonly Float64Array[],
  budget: number,
): Choice {
  const kept: number[][] = norms.map(() => []);
  const dropped: number[][] = norms.map(() => []);
  const candidates = norms.flatMap((block, b) =>
    Array.from(block, (norm, t) => ({ norm, b, t })).filter(({ t }) => sizes[b]![t]! > ZERO_WEIGHT),
  );
  candidates.sort((x, y) => x.norm - y.norm || x.b - y.b || x.t - y.t);
  let sum = 0;
  let open = true;
  for (const { norm, b, t } of candidates) {
    if (open && sum + norm <= budget) {
      sum += norm;
      dropped[b]!.push(t);
    } else {
      open = false;
      kept[b]!.push(t);
    }
  }
  for (const list of [...kept, ...dropped]) list.sort((x, y) => x - y);
  return { kept, dropped, sum };
}

/** Sizes of the weights, |w_t| or s_t. */
export function weightSizes(block: SpatialBlock): Float64Array {
  return block.kind === 'triples' ? block.strengths : block.weights.map(Math.abs);
}

export interface TruncateOptions {
  /** Orbitals. */
  readonly n: number;
  /** Hartree, ≥ 0. */
  readonly threshold: number;
  /** Of the mean field, n numbers 0…2. */
  readonly occupations: ArrayLike<number>;
  readonly remainder: Remainder | null;
  /** Only Coulomb factors may be dropped. */
  readonly keepSpinParts: boolean;
  /** Coulomb factors have a part in the choice of what is dropped, but are all left out: something else stands for them. */
  readonly withoutCoulomb: boolean;
  /** Most factors of a block, but not of those that may not be dropped; null: no limit. */
  readonly most: number | null;
}

/** Factors between two checkpoints: some 10 ms for 50 orbitals. */
const FOLDED_AT_ONCE = 16;
/** Budgets tried until the replacement's share fits into the threshold. */
const TRIES = 6;

/**
 * Truncation: factors are dropped in ascending order of their LCU norm while the bound stays ≤ `threshold` (hartree), and
 * further ones while a block has more than `most`: then the bound says what that costs.
 *
 * Dropped are the unitaries, ½w(M² − ½Λ²) with M = L − τ; the one-body part and the constant of a factor stay, except
 * that its spin components become the mean field over `occupations` (mean-field.ts). The bound is the sum of the
 * dropped norms plus the one-norm of that replacement, which is small beside it.
 */
export async function truncate(
  blocks: readonly SpatialBlock[],
  { n, threshold, occupations, remainder, keepSpinParts, withoutCoulomb, most }: TruncateOptions,
  ctx: JobContext,
): Promise<
  Pick<Factorisation, 'residual' | 'foldedMeanField' | 'foldedConstant'> & { blocks: SpatialBlock[] }
> {
  // Nuclear norm ≤ √n · Frobenius norm, so the remainder's one-norm is at most ¼ n · trace.
  const leftOut = remainder ? 0.25 * n * remainder.trace : 0;
  const norms = blocks.map((block) =>
    keepSpinParts && block.part !== 'coulomb'
      ? new Float64Array(block.count).fill(Number.POSITIVE_INFINITY)
      : lcuNorms(block),
  );
  const sizes = blocks.map(weightSizes);
  const allowed = Math.max(0, threshold - leftOut);
  let budget = allowed;
  let choice = chooseKept(norms, sizes, budget);
  let fold = await foldDropped(blocks, choice.dropped, n, occupations, ctx);
  for (let i = 0; choice.sum + fold.replacement > allowed && i < TRIES; i++) {
    budget = i === TRIES - 1 ? 0 : Math.max(0, Math.min(budget, choice.sum) - fold.replacement);
    choice = chooseKept(norms, sizes, budget);
    fold = await foldDropped(blocks, choice.dropped, n, occupations, ctx);
  }
  let centre = { constant: 0, bound: 0 };
  if (most !== null) {
    const limited = capped(choice, norms, most);
    choice = limited;
    fold = await foldDropped(blocks, choice.dropped, n, occupations, ctx);
    if (!withoutCoulomb) centre = await centred(blocks, limited.beyond, occupations, ctx);
  }
  if (withoutCoulomb) {
    return onlySpinParts(blocks, choice, n, occupations, ctx);
  }
  const { folded } = fold;
  let constant = fold.constant + centre.constant;
  if (remainder) {
    addPairs(folded.planes, remainder.oneBody, n);
    constant += leftOut - 0.5 * remainder.traceSquare;
  }
  const count = choice.dropped.reduce((sum, list) => sum + list.length, 0);
  const square = blocks.reduce((sum, block, b) => sum + frobeniusSquareOf(block, choice.dropped[b]!), 0);
  return {
    blocks: blocks.map((block, b) =>
      choice.kept[b]!.length === block.count ? block : selectFactors(block, choice.kept[b]!),
    ),
    residual: {
      frobenius: Math.sqrt(square) + (remainder?.trace ?? 0),
      oneNormBound: choice.sum + centre.bound + leftOut + fold.replacement,
      dropped: count,
    },
    foldedMeanField: count > 0 || remainder ? folded : null,
    foldedConstant: constant,
  };
}

/** The same choice with the Coulomb block taken out. */
async function onlySpinParts(
  blocks: readonly SpatialBlock[],
  { kept, dropped }: Pick<Choice, 'kept' | 'dropped'>,
  n: number,
  occupations: ArrayLike<number>,
  ctx: JobContext,
) {
  const spin = [...blocks.keys()].filter((b) => blocks[b]!.part !== 'coulomb');
  const own = spin.map((b) => blocks[b]!);
  const out = spin.map((b) => dropped[b]!);
  const fold = await foldDropped(own, out, n, occupations, ctx);
  const sum = own.reduce((all, block, b) => {
    const norms = lcuNorms(block);
    return out[b]!.reduce((part, t) => part + norms[t]!, all);
  }, 0);
  const count = out.reduce((all, list) => all + list.length, 0);
  return {
    blocks: spin.map((b) => selectFactors(blocks[b]!, kept[b]!)),
    residual: {
      frobenius: Math.sqrt(own.reduce((all, block, b) => all + frobeniusSquareOf(block, out[b]!), 0)),
      oneNormBound: sum + fold.replacement,
      dropped: count,
    },
    foldedMeanField: count > 0 ? fold.folded : null,
    foldedConstant: fold.constant,
  };
}

/** One-body part, constant and one-norm of the replacement for the dropped factors. */
async function foldDropped(
  blocks: readonly SpatialBlock[],
  dropped: readonly (readonly number[])[],
  n: number,
  occupations: ArrayLike<number>,
  ctx: JobContext,
) {
  const target: FoldTarget = { folded: zeroOperator('even', n), difference: new Float64Array(3 * n * n) };
  let constant = 0;
  for (const [b, block] of blocks.entries()) {
    const lambdas = block.kind === 'squares' ? squareOneNorms(block) : null;
    for (const [i, t] of dropped[b]!.entries()) {
      if (i % FOLDED_AT_ONCE === 0) await ctx.checkpoint();
      if (block.kind === 'triples') {
        foldTriple(target, block, t, occupations);
        continue;
      }
      foldSquare(target, block, t, occupations);
      const charged = block.sector === 'even' && block.planes[0] === 0;
      const tau = charged ? traceOfPairs(block.vectors, t * block.dim, n) : 0;
      constant += block.weights[t]! * (0.25 * lambdas![t]! ** 2 - 0.5 * tau ** 2);
    }
  }
  const norms = antisymmetricNormsBatch(target.difference, 3, n);
  return { folded: target.folded, constant, replacement: norms.reduce((sum, a) => sum + 2 * a, 0) };
}

function addPairs(plane: Float64Array, pairs: Float64Array, n: number): void {
  for (let p = 0, i = 0; p < n; p++) {
    for (let q = 0; q < p; q++, i++) {
      plane[p * n + q]! += Math.SQRT1_2 * pairs[i]!;
      plane[q * n + p]! += Math.SQRT1_2 * pairs[i]!;
    }
    plane[p * n + p]! += pairs[i++]!;
  }
}

/** ‖Σ w v vᵀ‖² over the dropped factors; raw Cholesky columns are not orthogonal, hence the Gram matrix. */
function frobeniusSquareOf(block: SpatialBlock, dropped: readonly number[]): number {
  if (block.kind === 'triples') {
    // Each array stands twice in g, as g^{k0} and as g^{0k}.
    const scale = 2 * (block.sameScale ** 2 + block.otherScale ** 2);
    return dropped.reduce((sum, t) => sum + scale * block.strengths[t]! ** 2, 0);
  }
  const m = dropped.length;
  const { vectors, weights } = selectFactors(block, dropped);
  const gram = multiply(vectors, vectors, m, block.dim, m, { transposeB: true });
  let sum = 0;
  for (let i = 0; i < m; i++) {
    for (let j = 0; j < m; j++) sum += weights[i]! * weights[j]! * gram[i * m + j]! ** 2;
  }
  return Math.max(0, sum);
}

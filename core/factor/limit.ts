import type { JobContext } from '../job';
import { traceOfPairs } from './elements';
import type { SquareFactors, TripleFactors } from './factors';
import { squareOneNorms } from './one-norms';
import { referenceSquare } from './reference-mean';

type SpatialBlock = SquareFactors | TripleFactors;

/** Factors kept and dropped of each block, and the sum of the dropped LCU norms, hartree. */
export interface Choice {
  readonly kept: number[][];
  readonly dropped: number[][];
  readonly sum: number;
}

/** Factors between two checkpoints. */
const AT_ONCE = 64;

/** The same choice with at most `most` factors of a block: the heaviest stay. Infinite norms are not touched. */
export function capped(
  { kept, dropped, sum }: Choice,
  norms: readonly Float64Array[],
  most: number,
): Choice & { readonly beyond: readonly (readonly number[])[] } {
  let all = sum;
  const limited = kept.map((own, b) => {
    const byNorm = [...own].sort((s, t) => norms[b]![t]! - norms[b]![s]! || s - t);
    return byNorm.filter((t, i) => {
      if (i < most || norms[b]![t] === Number.POSITIVE_INFINITY) return true;
      all += norms[b]![t]!;
      return false;
    });
  });
  return {
    kept: limited.map((own) => own.sort((s, t) => s - t)),
    dropped: dropped.map((own, b) => {
      const staying = new Set(limited[b]);
      return [...own, ...kept[b]!.filter((t) => !staying.has(t))].sort((s, t) => s - t);
    }),
    sum: all,
    beyond: kept.map((own, b) => {
      const staying = new Set(limited[b]);
      return own.filter((t) => !staying.has(t));
    }),
  };
}

/**
 * Constants of the factors that the limit drops, hartree: ½wM² is not replaced by the middle of its range, ¼wΛ², but by its
 * mean over the reference, since these factors are many and the mean lies near one end. The bound grows to the farther end.
 */
export async function centred(
  blocks: readonly SpatialBlock[],
  beyond: readonly (readonly number[])[],
  occupations: ArrayLike<number>,
  ctx: JobContext,
) {
  let constant = 0;
  let bound = 0;
  for (const [b, block] of blocks.entries()) {
    if (block.kind === 'triples' || block.sector === 'odd' || block.planes[0] !== 0) continue;
    const lambdas = squareOneNorms(block);
    for (const [i, t] of beyond[b]!.entries()) {
      if (i % AT_ONCE === 0) await ctx.checkpoint();
      const w = block.weights[t]!;
      const most = 0.5 * Math.abs(w) * lambdas[t]! ** 2;
      const tau = traceOfPairs(block.vectors, t * block.dim, block.n);
      const mean = Math.min(most, 0.5 * Math.abs(w) * referenceSquare(block, t, tau, occupations));
      constant += Math.sign(w) * (mean - most / 2);
      bound += Math.max(mean, most - mean) - most / 2;
    }
  }
  return { constant, bound };
}

import { zeroOperator } from '../hamiltonian';
import type { JobContext } from '../job';
import { antisymmetricNormsBatch } from '../linalg';
import { type Compactible, compactibleSquares, compactibleTriples } from './compact';
import type { FactorBlock, Factorisation, SquareFactors, TripleFactors } from './factors';
import { type FoldTarget, foldSquare, foldTriple } from './mean-field';

type LightBlock = SquareFactors | TripleFactors;

/** Factors between two checkpoints: some 10 ms for 50 orbitals. */
const AT_ONCE = 16;

/** A factorisation whose spin-dependent two-electron parts can be thinned. */
export interface LightParts {
  /** Largest LCU one-norm of one of their factors, hartree; 0 where there are none. */
  readonly heaviest: number;
  /** What is left of them at a cut, and the mean field that takes the place of the rest. */
  readonly at: (cut: number, ctx: JobContext) => Promise<Thinned>;
}

export interface Thinned {
  readonly factorisation: Factorisation;
  /** The spin-dependent blocks of it. */
  readonly light: readonly LightBlock[];
  /** Even sector, hartree: only what stands for the rows taken out. */
  readonly meanField: FoldTarget['folded'];
}

const isLight = (block: FactorBlock): block is LightBlock =>
  block.kind === 'triples' || (block.kind === 'squares' && block.part === 'spin-spin');

/**
 * Spin–orbit triples and spin–spin squares of a separate grouping, made ready to lose light rows (compact.ts). Their
 * mean field over the reference stays in the one-body part, as truncation does it with whole factors; the residual
 * counts them: one-norms of what goes, and of how far its mean field is from what the Majorana form leaves.
 *
 * @param whole - with every factor of these parts
 * @param occupations - of the mean field, n numbers 0…2
 */
export async function lightParts(
  whole: Factorisation,
  n: number,
  occupations: ArrayLike<number>,
  ctx: JobContext,
): Promise<LightParts> {
  const blocks = whole.blocks.filter(isLight);
  await ctx.checkpoint();
  const compactible = new Map<FactorBlock, Compactible<LightBlock>>();
  for (const block of blocks) {
    compactible.set(
      block,
      await (block.kind === 'triples' ? compactibleTriples(block, ctx) : compactibleSquares(block, ctx)),
    );
  }
  const all = await fold(blocks, n, occupations, ctx);
  return {
    heaviest: Math.max(0, ...[...compactible.values()].map(({ heaviest }) => heaviest)),
    async at(cut, context) {
      const compacted = blocks.map((block) => compactible.get(block)!.at(cut));
      const light = compacted.map(({ block }) => block);
      const kept = await fold(light, n, occupations, context);
      const meanField = {
        ...all.folded,
        planes: all.folded.planes.map((x, i) => x - kept.folded.planes[i]!),
      };
      const difference = all.difference.map((x, i) => x - kept.difference[i]!);
      const replacement = antisymmetricNormsBatch(difference, 3, n).reduce((sum, a) => sum + 2 * a, 0);
      const bound = compacted.reduce((sum, own) => sum + own.bound, 0);
      const constant = compacted.reduce((sum, own) => sum + own.constant, 0);
      const given = whole.foldedMeanField;
      const planes = Float64Array.from(meanField.planes);
      if (given && 'planes' in given) for (let i = 0; i < planes.length; i++) planes[i]! += given.planes[i]!;
      const { residual } = whole;
      const factorisation: Factorisation = {
        ...whole,
        blocks: whole.blocks.map((block) => (isLight(block) ? light[blocks.indexOf(block)]! : block)),
        residual: {
          frobenius: Math.hypot(residual.frobenius, frobenius(blocks, light)),
          oneNormBound: residual.oneNormBound + Math.max(0, bound) + replacement,
          dropped: residual.dropped + compacted.reduce((sum, { changed }) => sum + changed, 0),
        },
        foldedMeanField: { ...meanField, planes },
        foldedConstant: whole.foldedConstant + constant,
      };
      return { factorisation, light, meanField };
    },
  };
}

async function fold(
  blocks: readonly LightBlock[],
  n: number,
  occupations: ArrayLike<number>,
  ctx: JobContext,
): Promise<FoldTarget> {
  const target: FoldTarget = { folded: zeroOperator('even', n), difference: new Float64Array(3 * n * n) };
  for (const block of blocks) {
    for (let t = 0; t < block.count; t++) {
      if (t % AT_ONCE === 0) await ctx.checkpoint();
      if (block.kind === 'triples') foldTriple(target, block, t, occupations);
      else foldSquare(target, block, t, occupations);
    }
  }
  return target;
}

/**
 * Frobenius norm of what the blocks lost. Rows of one factor are orthogonal to each other, and so are factors: squares
 * add up and differ. Spin–spin factors of lower rank overlap a little; that is left out.
 */
function frobenius(whole: readonly LightBlock[], light: readonly LightBlock[]): number {
  const squares = (blocks: readonly LightBlock[]) =>
    blocks.reduce((sum, block) => {
      if (block.kind === 'squares') return block.weights.reduce((all, w) => all + w * w, sum);
      // Each array stands twice in g, as g^{k0} and as g^{0k}.
      const scale = 2 * (block.sameScale ** 2 + block.otherScale ** 2);
      return block.strengths.reduce((all, s) => all + scale * s * s, sum);
    }, 0);
  return Math.sqrt(Math.max(0, squares(whole) - squares(light)));
}

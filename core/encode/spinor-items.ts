import type { SquareFactors, TripleFactors } from '../factor';
import type { JobContext } from '../job';
import type { BlockItems, TripleItem } from './items';
import { squareSpinorNorms, tripleSpinorNorms } from './spinor-norms';

/** A square as the spinor form sees it. */
export interface SpinorSquareItem {
  /** L is S ⊗ 1: real vectors over the orbitals serve both spins. */
  readonly real: boolean;
  /** c_t of L⁰, as in the triplet form. */
  readonly shift: number;
  /** ½‖M‖_*. */
  readonly norm: number;
  readonly rows: number;
}

/** One way a triple enters H: X = a⊗σ^k, Y = S⊗1 (even), or X = a⊗1, Y = S⊗σ^k (odd). */
export interface SpinorFace {
  readonly odd: boolean;
  readonly scale: number;
  readonly shift: number;
  /** ½‖cX + Y/c‖_*, that of both squares. */
  readonly norm: number;
}

/** Squares (cX ± Y/c)² of a triple over one set of vectors: eigenvectors of S/c + icA. */
export interface SpinorTripleItem {
  /** Number of the triple in its block. */
  readonly triple: number;
  /** c. */
  readonly balance: number;
  readonly faces: readonly SpinorFace[];
  readonly rows: number;
}

/** The items of a block in the spinor form. */
export type SpinorItems =
  | { readonly kind: 'squares'; readonly block: SquareFactors; readonly items: readonly SpinorSquareItem[] }
  | { readonly kind: 'triples'; readonly block: TripleFactors; readonly items: readonly SpinorTripleItem[] };

/** λ of a face in hartree: ¼ s |scale| Λ², both squares together. */
export const faceLambda = (strength: number, { scale, norm }: SpinorFace): number =>
  0.25 * strength * Math.abs(scale) * norm * norm;

export async function spinorItems(entry: BlockItems, ctx: JobContext): Promise<SpinorItems> {
  if (entry.kind === 'triples') {
    return { kind: 'triples', block: entry.block, items: await tripleItems(entry.block, entry.items, ctx) };
  }
  if (entry.kind === 'hypercontracted') throw new RangeError('spinor rows have no products of two vectors');
  const { block, items } = entry;
  if (block.sector === 'even' && block.planes.length === 1) {
    const own = items.map(({ shift, norm, rows }) => ({ real: true, shift, norm, rows }));
    return { kind: 'squares', block, items: own };
  }
  const { norms, pairs } = await squareSpinorNorms(block, items, ctx);
  const own = items.map(({ shift }, t) => ({ real: false, shift, norm: norms[t]!, rows: pairs[t]! }));
  return { kind: 'squares', block, items: own };
}

/** A face before its norm is known. */
interface OpenFace {
  readonly odd: boolean;
  readonly scale: number;
  readonly shift: (item: TripleItem) => number;
  readonly normY: (item: TripleItem) => number;
}

/**
 * Both faces share vectors if they share c: the one that minimises Σ |scale| (cΛ_X + Λ_Y/c)², c⁴ = Σ|scale|Λ_Y² /
 * Σ|scale|Λ_X². Where that takes a face above the triplet form's λ = |scale| s Λ_X Λ_Y, each has its own c² = Λ_Y/Λ_X,
 * which never does.
 */
async function tripleItems(
  block: TripleFactors,
  items: readonly TripleItem[],
  ctx: JobContext,
): Promise<SpinorTripleItem[]> {
  const open = [
    {
      odd: false,
      scale: block.sameScale,
      shift: (i: TripleItem) => i.shift,
      normY: (i: TripleItem) => i.normSame,
    },
    { odd: true, scale: block.otherScale, shift: () => 0, normY: (i: TripleItem) => i.normOther },
  ].filter((face): face is OpenFace => face.scale !== 0);
  const figures = async (faces: readonly OpenFace[]) => {
    const balances = Float64Array.from(items, (item) => commonBalance(item, faces));
    const shifts = faces.map(({ shift }) => Float64Array.from(items, shift));
    return { faces, balances, ...(await tripleSpinorNorms(block, balances, shifts, ctx)) };
  };
  const together = await figures(open);
  const apart = open.length > 1 ? await Promise.all(open.map((face) => figures([face]))) : [];
  return items.flatMap((item, t) => {
    const fits = open.every(
      ({ normY }, f) => 0.25 * together.norms[f]![t]! ** 2 <= item.normX * normY(item) * (1 + 1e-12),
    );
    return (fits || apart.length === 0 ? [together] : apart)
      .map(({ faces, balances, norms, rows }) => ({
        triple: t,
        balance: balances[t]!,
        faces: faces.map(({ odd, scale, shift }, f) => ({
          odd,
          scale,
          shift: shift(item),
          norm: norms[f]![t]!,
        })),
        rows: rows[t]!,
      }))
      .filter(({ rows }) => rows > 0);
  });
}

function commonBalance(item: TripleItem, faces: readonly OpenFace[]): number {
  let y = 0;
  let x = 0;
  for (const { scale, normY } of faces) {
    y += Math.abs(scale) * normY(item) ** 2;
    x += Math.abs(scale) * item.normX ** 2;
  }
  return (y / x) ** 0.25;
}

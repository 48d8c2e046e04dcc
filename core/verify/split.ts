import type { JobContext } from '../job';
import { type Block, connectedBlocks } from './blocks';
import { splitByMirror } from './mirror';
import type { SectorMatrix } from './sector-matrix';

/** From here on it pays to look for spin reversal in a block. */
const WORTH_SPLITTING = 600;

/**
 * The blocks of a sector that symmetry leaves: unconnected parts, large real ones halved by spin reversal.
 * @returns `bound`: what numerical zeros and rounding in the symmetry may shift any eigenvalue by, hartree.
 */
export async function splitSector(
  matrix: SectorMatrix,
  context: JobContext,
): Promise<{ readonly blocks: readonly Block[]; readonly bound: number }> {
  const blocks: Block[] = [];
  let rounding = 0;
  for (const block of await connectedBlocks(matrix, context)) {
    const split = block.dim >= WORTH_SPLITTING ? await splitByMirror(block, context) : null;
    blocks.push(...(split?.parts ?? [block]));
    rounding = Math.max(rounding, split?.bound ?? 0);
  }
  return { blocks, bound: matrix.droppedBound + rounding };
}

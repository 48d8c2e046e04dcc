import { sectorLayout } from './elements';
import type { FactorBlock } from './factors';

function rows(data: Float64Array, width: number, kept: readonly number[]): Float64Array {
  const out = new Float64Array(kept.length * width);
  kept.forEach((from, to) => {
    out.set(data.subarray(from * width, (from + 1) * width), to * width);
  });
  return out;
}

/**
 * The block with the factors `kept` alone, in that order.
 * @throws RangeError for a hypercontracted block, which is no list of factors
 */
export function selectFactors<Block extends FactorBlock>(block: Block, kept: readonly number[]): Block {
  const count = kept.length;
  if (block.kind === 'hypercontracted') throw new RangeError('a hypercontracted part is taken as a whole');
  if (block.kind === 'triples') {
    const width = block.antisymmetric.length / Math.max(1, block.count);
    return {
      ...block,
      count,
      component: Uint8Array.from(kept, (t) => block.component[t]!),
      strengths: rows(block.strengths, 1, kept),
      antisymmetric: rows(block.antisymmetric, width, kept),
      symmetric: rows(block.symmetric, block.symmetric.length / Math.max(1, block.count), kept),
      antisymmetricNorms: rows(block.antisymmetricNorms, block.n >> 1, kept),
      symmetricValues: rows(block.symmetricValues, block.n, kept),
      ...(block.shifts ? { shifts: rows(block.shifts, 1, kept) } : {}),
    };
  }
  const [dim, width] =
    block.kind === 'squares'
      ? [block.dim, sectorLayout(block.sector, block.planes, block.n).spectrumWidth]
      : [block.spinors * block.spinors, block.spinors];
  return {
    ...block,
    count,
    weights: rows(block.weights, 1, kept),
    vectors: rows(block.vectors, dim, kept),
    spectra: rows(block.spectra, width, kept),
    ...(block.shifts ? { shifts: rows(block.shifts, 1, kept) } : {}),
  };
}

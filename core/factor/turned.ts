import type { JobContext } from '../job';
import { canonicalVectors } from './clusters';
import { sectorLayout } from './elements';
import type { SquareFactors } from './factors';
import { squareOneNorms } from './one-norms';
import { selectFactors } from './select';
import { squareFactors } from './squares';

/**
 * The factors of a Hamiltonian whose spin axes are turned, from those of the given one: L'^l = Σ_k R_kl L^k, weights
 * unchanged. Degenerate levels take the basis that the cluster rule gives them in the new frame, so the result is what a
 * decomposition of the turned Hamiltonian finds, to rounding.
 *
 * @param rotation - 3×3 orthogonal with determinant +1, row-major
 */
export async function turnedFactors(
  block: SquareFactors,
  rotation: ArrayLike<number>,
  ctx: JobContext,
): Promise<SquareFactors> {
  const { n, planes, sector, dim, count } = block;
  const { slots } = sectorLayout(sector, planes, n);
  const spin = [1, 2, 3].map((mu) => slots.find((slot) => slot.mu === mu));
  if (spin.some((slot) => slot === undefined)) return block;
  const length = spin[0]!.length;
  const turned = Float64Array.from(block.vectors);
  for (let t = 0; t < count; t++) {
    for (let l = 0; l < 3; l++) {
      const to = t * dim + spin[l]!.offset;
      for (let i = 0; i < length; i++) {
        let sum = 0;
        for (let k = 0; k < 3; k++) {
          sum += rotation[3 * k + l]! * block.vectors[t * dim + spin[k]!.offset + i]!;
        }
        turned[to + i] = sum;
      }
    }
  }
  const { weights, vectors } = canonicalVectors(block.weights, turned, dim);
  return squareFactors(block.part, sector, planes, n, { weights, vectors }, ctx);
}

/**
 * The factors whose weight ¼|w|Λ² depends most on the norms of their spin planes, and the others.
 * @param most - how many of the first
 */
export function heaviestApart(block: SquareFactors, most: number): [SquareFactors, SquareFactors] {
  const { slots, spectrumWidth } = sectorLayout(block.sector, block.planes, block.n);
  const norms = squareOneNorms(block);
  const grip = norms.map((norm, t) => {
    let spin = 0;
    for (const slot of slots) {
      if (slot.mu === 0) continue;
      const from = t * spectrumWidth + slot.spectrumOffset;
      for (let i = from; i < from + slot.spectrumLength; i++) spin += Math.abs(block.spectra[i]!);
    }
    return Math.abs(block.weights[t]!) * norm * spin;
  });
  const order = Array.from(grip.keys()).sort((a, b) => grip[b]! - grip[a]! || a - b);
  const ascending = (list: number[]) => list.sort((a, b) => a - b);
  return [
    selectFactors(block, ascending(order.slice(0, most))),
    selectFactors(block, ascending(order.slice(most))),
  ];
}

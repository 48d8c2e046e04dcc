import { planeInto, sectorLayout } from '../factor';
import { type SpatialHamiltonian, type SymmetryShift, zeroOperator } from '../hamiltonian';
import { numAntisymmetricPairs } from '../integrals/integral-set';
import type { BlockItems } from './items';

/**
 * The ξ that all shifts of an encoding together amount to: what the encoding stands for is H + ξ (N̂ − η) on all of Fock
 * space, without anything else.
 *
 * With M = L − τ = M' + c(N̂ − N), ½wL² = ½wM'² + w T L − ½wT² with T = τ + c(N̂ − N), and the encoding writes η for N̂
 * in T: it differs from H by −w c (N̂ − η) [L − τ − ½c(N̂ + η − 2N)]. A triple differs by −s c (N̂ − η) X, κ⁰ by
 * −c₁(N̂ − η). So
 *
 *     ξ^μ = Σ_t w_t (½c_t² δ_μ0 − c_t L^{t,μ}) − Σ s c a,    scalar = Σ_t w_t c_t (τ_t + ½c_t(η − 2N)) − c₁.
 *
 * @param oneBodyShift - c₁, hartree
 */
export function explicitShift(
  { orbitals: n, electrons }: Pick<SpatialHamiltonian, 'orbitals' | 'electrons'>,
  blocks: readonly BlockItems[],
  oneBodyShift: number,
): SymmetryShift {
  const operator = zeroOperator('even', n);
  const { planes } = operator;
  let scalar = -oneBodyShift;
  const work = new Float64Array(n * n);
  const subtract = (mu: number, scale: number) => {
    for (let i = 0, at = mu * n * n; i < n * n; i++) planes[at + i]! -= scale * work[i]!;
  };
  for (const entry of blocks) {
    if (entry.kind === 'hypercontracted') {
      // The fit is of g + ξ⊗1 + 1⊗ξ, and κ lost ηξ.
      for (const [i, x] of entry.block.shift?.entries() ?? []) planes[i]! += x;
      continue;
    }
    if (entry.kind === 'triples') {
      const { block, items } = entry;
      items.forEach(({ shift }, t) => {
        if (shift === 0) return;
        planeInto(work, 0, block.antisymmetric, t * numAntisymmetricPairs(n), n, false);
        subtract(block.component[t]!, block.sameScale * block.strengths[t]! * shift);
      });
      continue;
    }
    const { block, items } = entry;
    const { slots } = sectorLayout(block.sector, block.planes, n);
    items.forEach(({ shift, trace }, t) => {
      if (shift === 0) return;
      const w = block.weights[t]!;
      for (const slot of slots) {
        planeInto(work, 0, block.vectors, t * block.dim + slot.offset, n, slot.symmetric);
        subtract(slot.mu, w * shift);
      }
      for (let p = 0; p < n; p++) planes[p * n + p]! += 0.5 * w * shift * shift;
      scalar += w * shift * (trace + 0.5 * shift * (electrons - 2 * n));
    });
  }
  return { scalar, operator };
}

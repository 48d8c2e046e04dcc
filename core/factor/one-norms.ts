import { sectorLayout } from './elements';
import type { FactorBlock, SpinorFactors, SquareFactors, TripleFactors } from './factors';
import { hypercontractedNorm } from './hypercontraction/one-body';

function sumOfSizes(values: Float64Array, from: number, to: number): number {
  let sum = 0;
  for (let i = from; i < to; i++) sum += Math.abs(values[i]!);
  return sum;
}

/** Λ_t = Σ_μ ‖L^{t,μ}‖_* of each factor, unshifted, triplet form. */
export function squareOneNorms(block: SquareFactors): Float64Array {
  const { slots, spectrumWidth } = sectorLayout(block.sector, block.planes, block.n);
  const norms = new Float64Array(block.count);
  for (let t = 0; t < block.count; t++) {
    for (const slot of slots) {
      const from = t * spectrumWidth + slot.spectrumOffset;
      // An antisymmetric plane has the eigenvalues ±a_j.
      const times = slot.symmetric ? 1 : 2;
      norms[t]! += times * sumOfSizes(block.spectra, from, from + slot.spectrumLength);
    }
  }
  return norms;
}

/** Λ_a and Λ_S of each triple, unshifted. */
export function tripleOneNorms(block: TripleFactors): { a: Float64Array; s: Float64Array } {
  const half = block.n >> 1;
  const { n, count, antisymmetricNorms, symmetricValues } = block;
  return {
    a: Float64Array.from(
      { length: count },
      (_, t) => 2 * sumOfSizes(antisymmetricNorms, t * half, (t + 1) * half),
    ),
    s: Float64Array.from({ length: count }, (_, t) => sumOfSizes(symmetricValues, t * n, (t + 1) * n)),
  };
}

/** ½‖L^t‖_* over the M spinors. */
export function spinorOneNorms(block: SpinorFactors): Float64Array {
  const m = block.spinors;
  return Float64Array.from(
    { length: block.count },
    (_, t) => sumOfSizes(block.spectra, t * m, (t + 1) * m) / 2,
  );
}

/**
 * LCU one-norm of each factor or triple, hartree: ¼|w|Λ² (the ¼ from qubitising the square), and for a triple
 * (sameScale + otherScale)·s·Λ_a·Λ_S. A hypercontracted part counts as one.
 */
export function lcuNorms(block: FactorBlock): Float64Array {
  if (block.kind === 'triples') {
    const { a, s } = tripleOneNorms(block);
    const scale = Math.abs(block.sameScale) + Math.abs(block.otherScale);
    return block.strengths.map((strength, t) => scale * strength * a[t]! * s[t]!);
  }
  if (block.kind === 'hypercontracted') return Float64Array.of(hypercontractedNorm(block));
  const norms = block.kind === 'squares' ? squareOneNorms(block) : spinorOneNorms(block);
  return norms.map((norm, t) => 0.25 * Math.abs(block.weights[t]!) * norm * norm);
}

import { type Factorisation, hermitianInto, type SpinorFactors } from '../factor';
import { type SpinorHamiltonian, spinorFromProductForm } from '../hamiltonian';
import { hermitianEigenvalues } from '../linalg';
import { sumLambda } from './assemble';
import type { Encoding, EncodingShape } from './encoding';
import { ROW_ZERO } from './items';
import { countAbove, median, shiftedNorm } from './shift';
import type { VariantName } from './variant';

interface Item {
  readonly shift: number;
  /** τ = ½ tr L, before the shift. */
  readonly trace: number;
  /** ½‖L'‖_*. */
  readonly norm: number;
  readonly rows: number;
}

/** One-norm, trace, shift and rows of each factor. Kramers pairs (even) and ± pairs (odd) share a row. */
function itemsOf(block: SpinorFactors, shifted: boolean): Item[] {
  const m = block.spinors;
  const { spectra } = block;
  return Array.from({ length: block.count }, (_, t) => {
    const from = t * m;
    const to = from + m;
    let trace = 0;
    for (let i = from; i < to; i++) trace += spectra[i]! / 2;
    const shift = shifted && block.part !== 'odd' ? median(spectra, from, to) : 0;
    const largest = Math.max(Math.abs(spectra[from]!), Math.abs(spectra[to - 1]!));
    const values = countAbove(spectra, from, to, shift, ROW_ZERO * largest);
    return {
      shift,
      trace,
      norm: shiftedNorm(spectra, from, to, shift) / 2,
      rows: block.part === 'mixed' ? values : Math.ceil(values / 2),
    };
  });
}

/**
 * Spinor encoding of complex spinor integrals over M modes: λ = ½‖κ‖_* + ¼ Σ |w| (½‖L^t‖_*)². T_PP has the identity
 * part ½, so M = L − τ with τ = ½ tr L, and N̂ − M/2 takes the place of N̂ − N in the shift.
 */
export function encodeSpinors(h: SpinorHamiltonian, factors: Factorisation, variant: VariantName): Encoding {
  const m = h.spinors;
  const size = m * m;
  const shifted = variant.shift === 'median';
  const excess = h.electrons - m / 2;
  const re = Float64Array.from(h.k.re);
  const im = Float64Array.from(h.k.im);
  const folded = factors.foldedMeanField;
  if (folded && 're' in folded) {
    for (let i = 0; i < size; i++) {
      re[i]! += folded.re[i]!;
      im[i]! += folded.im[i]!;
    }
  }
  const blocks = factors.blocks.map((block) => {
    if (block.kind !== 'spinor-squares') throw new RangeError('spatial factors for a spinor Hamiltonian');
    return { block, items: itemsOf(block, shifted) };
  });
  const lRe = new Float64Array(size);
  const lIm = new Float64Array(size);
  let constant = h.constant + factors.foldedConstant;
  const parts: Record<string, number> = {};
  let identity = 0;
  let rows = 0;
  let maxRows = 0;
  let count = 0;
  for (const { block, items } of blocks) {
    const part = block.part === 'odd' ? 'two-body.odd' : 'two-body.even';
    items.forEach(({ trace, shift, norm, rows: own }, t) => {
      const w = block.weights[t]!;
      const total = trace + shift * excess;
      hermitianInto(lRe, lIm, 0, block.vectors, t * size, m);
      for (let i = 0; i < size; i++) {
        re[i]! += w * total * lRe[i]!;
        im[i]! += w * total * lIm[i]!;
      }
      constant -= 0.5 * w * total * total;
      parts[part] = (parts[part] ?? 0) + 0.25 * Math.abs(w) * norm * norm;
      identity += 0.25 * w * norm * norm;
      rows += own;
      maxRows = Math.max(maxRows, own);
      count++;
    });
  }
  const values = hermitianEigenvalues({ n: m, re, im });
  const shift = shifted ? median(values) : 0;
  for (let i = 0; i < m; i++) {
    values[i]! -= shift;
    re[i * m + i]! -= shift;
  }
  constant += shift * h.electrons;
  const oneNorm = shiftedNorm(values, 0, m, 0) / 2;
  const largest = Math.max(Math.abs(values[0]!), Math.abs(values[m - 1]!));
  const nonZero = countAbove(values, 0, m, 0, 1e-13 * largest);
  const paired = blocks.every(({ block }) => block.part !== 'mixed');
  const oneBodyRows = paired ? Math.ceil(nonZero / 2) : nonZero;
  const shape: EncodingShape = {
    kind: 'spinor',
    orbitals: m / 2,
    factors: count,
    rows,
    pairRows: 0,
    oneBodyRows,
    oneBodyPairRows: 0,
    maxRowsPerFactor: Math.max(maxRows, oneBodyRows),
    spinDependent: true,
  };
  const trace = values.reduce((sum, x) => sum + x, 0) / 2;
  const rebuild = (): SpinorHamiltonian => {
    const k = { re: Float64Array.from(re), im: Float64Array.from(im) };
    const g = { re: new Float64Array(size * size), im: new Float64Array(size * size) };
    let own = constant;
    for (const { block, items } of blocks) {
      items.forEach((item, t) => {
        const w = block.weights[t]!;
        const tau = item.trace - (m / 2) * item.shift;
        hermitianInto(lRe, lIm, 0, block.vectors, t * size, m);
        for (let p = 0; p < m; p++) lRe[p * m + p]! -= item.shift;
        own += 0.5 * w * tau * tau;
        for (let i = 0; i < size; i++) {
          k.re[i]! -= w * tau * lRe[i]!;
          k.im[i]! -= w * tau * lIm[i]!;
          for (let j = 0; j < size; j++) {
            g.re[i * size + j]! += w * (lRe[i]! * lRe[j]! - lIm[i]! * lIm[j]!);
            g.im[i * size + j]! += w * (lRe[i]! * lIm[j]! + lIm[i]! * lRe[j]!);
          }
        }
      });
    }
    return spinorFromProductForm({ spinors: m, electrons: h.electrons, constant: own, k, g });
  };
  return {
    variant,
    shape,
    // A spinor file does not keep charge and spin apart: all of κ counts as charge.
    lambda: sumLambda({ charge: oneNorm, spin: 0 }, parts),
    constant: constant + trace + identity,
    residual: factors.residual,
    rebuild,
  };
}

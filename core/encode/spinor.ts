import { type Factorisation, hermitianInto, kramersPhases, type SpinorFactors } from '../factor';
import { type SpinorHamiltonian, type SpinorShift, spinorFromProductForm } from '../hamiltonian';
import { type ComplexMatrix, hermitianEigenvalues } from '../linalg';
import { sumLambda } from './assemble';
import type { Encoding, EncodingShape } from './encoding';
import { ROW_ZERO } from './items';
import { countAbove, median, shiftedNorm } from './shift';
import { SPINOR_KINDS, type SpinorSizes, spinorFileProgram, turnPhases } from './spinor-program';
import type { ShiftAxis, VariantName } from './variant';

interface Item {
  readonly shift: number;
  /** τ = ½ tr L, before the shift. */
  readonly trace: number;
  /** ½‖L'‖_*. */
  readonly norm: number;
  /** Eigenvalues that are not zero. */
  readonly values: number;
}

/** A one-body part that is odd by more than this part of its largest element has no Kramers pairs. */
const EVEN = 1e-7;

/** One-norm, trace and shift of each factor. */
function itemsOf(block: SpinorFactors, axis: ShiftAxis): Item[] {
  const m = block.spinors;
  const { spectra } = block;
  return Array.from({ length: block.count }, (_, t) => {
    const from = t * m;
    const to = from + m;
    let trace = 0;
    for (let i = from; i < to; i++) trace += spectra[i]! / 2;
    const shift = axis === 'none' || block.part === 'odd' ? 0 : shiftOf(block, t, axis);
    const largest = Math.max(Math.abs(spectra[from]!), Math.abs(spectra[to - 1]!));
    return {
      shift,
      trace,
      norm: shiftedNorm(spectra, from, to, shift) / 2,
      values: countAbove(spectra, from, to, shift, ROW_ZERO * largest),
    };
  });
}

/** What was optimised where the factors carry that, else the median. */
function shiftOf(block: SpinorFactors, t: number, axis: ShiftAxis): number {
  const m = block.spinors;
  return axis === 'optimised' && block.shifts ? block.shifts[t]! : median(block.spectra, t * m, (t + 1) * m);
}

/**
 * Spinor encoding of complex spinor integrals over M modes: λ = ½‖κ‖_* + ¼ Σ |w| (½‖L^t‖_*)². T_PP has the identity
 * part ½, so M = L − τ with τ = ½ tr L, and N̂ − M/2 takes the place of N̂ − N in the shift.
 */
export function encodeSpinors(h: SpinorHamiltonian, factors: Factorisation, variant: VariantName): Encoding {
  const m = h.spinors;
  const size = m * m;
  const shifted = variant.shift !== 'none';
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
    return { block, items: itemsOf(block, variant.shift) };
  });
  const lRe = new Float64Array(size);
  const lIm = new Float64Array(size);
  let constant = h.constant + factors.foldedConstant;
  const parts: Record<string, number> = {};
  let identity = 0;
  const values: number[] = [];
  for (const { block, items } of blocks) {
    const part = block.part === 'odd' ? 'two-body.odd' : 'two-body.even';
    items.forEach(({ trace, shift, norm, values: own }, t) => {
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
      values.push(own);
    });
  }
  const spectrum = hermitianEigenvalues({ n: m, re, im });
  const shift = shifted ? median(spectrum) : 0;
  for (let i = 0; i < m; i++) {
    spectrum[i]! -= shift;
    re[i * m + i]! -= shift;
  }
  constant += shift * h.electrons;
  const oneNorm = shiftedNorm(spectrum, 0, m, 0) / 2;
  const largest = Math.max(Math.abs(spectrum[0]!), Math.abs(spectrum[m - 1]!));
  values.push(countAbove(spectrum, 0, m, 0, 1e-13 * largest));
  const kappa = { n: m, re, im };
  const phases = pairPhases(h, factors, kappa);
  // Kramers pairs (even) and ± pairs (odd) share a row.
  const rows = Uint32Array.from(values, (own) => (phases ? Math.ceil(own / 2) : own));
  const last = rows.length - 1;
  const shape: EncodingShape = {
    kind: 'spinor',
    orbitals: m / 2,
    factors: last,
    rows: rows.subarray(0, last).reduce((sum, own) => sum + own, 0),
    pairRows: 0,
    oneBodyRows: rows[last]!,
    oneBodyPairRows: 0,
    maxRowsPerFactor: Math.max(...rows),
    spinDependent: true,
    // An odd number of spinors has no circuit over orbitals.
    ...(m % 2 === 0 ? { spinors: sizesOf(m, rows, phases !== null) } : {}),
  };
  const trace = spectrum.reduce((sum, x) => sum + x, 0) / 2;
  const total = constant + trace + identity;
  const program = () =>
    spinorFileProgram(
      total,
      blocks
        .flatMap(({ block, items }) => items.map((item, t) => ({ block, t, ...item })))
        .map((factor, t) => ({ ...factor, rows: rows[t]! })),
      kappa,
      rows[last]!,
      phases,
    );
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
    constant: total,
    residual: factors.residual,
    notes: factors.notes,
    rebuild,
    spinorShift: () => explicitSpinorShift(h, blocks, shift),
    ...(shape.spinors ? { spinorProgram: program } : {}),
  };
}

/** The ξ that all shifts together amount to: as in explicit-shift.ts with N̂ − M/2 for N̂ − N. */
function explicitSpinorShift(
  { spinors: m, electrons }: SpinorHamiltonian,
  blocks: readonly { readonly block: SpinorFactors; readonly items: readonly Item[] }[],
  oneBodyShift: number,
): SpinorShift {
  const operator = { n: m, re: new Float64Array(m * m), im: new Float64Array(m * m) };
  const [re, im] = [new Float64Array(m * m), new Float64Array(m * m)];
  let scalar = -oneBodyShift;
  for (const { block, items } of blocks) {
    items.forEach(({ shift, trace }, t) => {
      if (shift === 0) return;
      const w = block.weights[t]!;
      hermitianInto(re, im, 0, block.vectors, t * m * m, m);
      for (let i = 0; i < m * m; i++) {
        operator.re[i]! -= w * shift * re[i]!;
        operator.im[i]! -= w * shift * im[i]!;
      }
      for (let p = 0; p < m; p++) operator.re[p * m + p]! += 0.5 * w * shift * shift;
      scalar += w * shift * (trace + 0.5 * shift * (electrons - m));
    });
  }
  return { scalar, operator };
}

/** Phases that make spinors 2m, 2m + 1 partners of each other; null where the Hamiltonian has no Kramers pairs. */
function pairPhases(h: SpinorHamiltonian, factors: Factorisation, kappa: ComplexMatrix): Float64Array | null {
  if (factors.blocks.some((block) => block.kind === 'spinor-squares' && block.part === 'mixed')) return null;
  const phases = kramersPhases(h);
  const { n } = kappa;
  const { re, im } = turnPhases(kappa, phases);
  let largest = 0;
  let defect = 0;
  for (let p = 0; p < n; p++) {
    for (let q = 0; q < n; q++) {
      // κ_P̄Q̄ = s_P s_Q κ*_PQ, s = −1 for the second of a pair.
      const [i, j] = [p * n + q, (p ^ 1) * n + (q ^ 1)];
      const sign = (p & 1) === (q & 1) ? 1 : -1;
      largest = Math.max(largest, Math.hypot(re[i]!, im[i]!));
      defect = Math.max(defect, Math.hypot(re[j]! - sign * re[i]!, im[j]! + sign * im[i]!));
    }
  }
  return defect <= EVEN * largest ? phases : null;
}

const sizesOf = (m: number, rows: Uint32Array, partners: boolean): SpinorSizes => ({
  orbitals: m / 2,
  partners,
  oneBodyItems: 1,
  spared: 0,
  rows,
  kinds: new Uint8Array(rows.length).fill(SPINOR_KINDS.indexOf('full')),
  twoFaced: new Uint8Array(rows.length),
  hasPaired: false,
});

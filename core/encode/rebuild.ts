import {
  approximateCharge,
  type Factorisation,
  planeInto,
  type SquareFactors,
  sectorLayout,
} from '../factor';
import type { SpatialHamiltonian, SpinHamiltonian, TwoElectronTensor } from '../hamiltonian';
import { fromProductForm, spinorFromProductForm, toSpinOrbitals } from '../hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs, pairsTriangleLength } from '../integrals/integral-set';
import { InputError } from '../job';
import type { ComplexMatrix } from '../linalg';
import type { BlockItems } from './items';
import type { OneBody } from './one-body';
import { identityPart } from './products';

/** Largest number of orbitals for which a full spinor tensor is written out. */
const MAX_DENSE = 16;

/**
 * The Hamiltonian that an encoding stands for, from κ and the factors alone:
 * constant + κ + ½ Σ w (L' − τ')², L' the shifted factor with trace τ' (½ Σ ζ M M where hypercontracted).
 *
 * @returns the spatial form where the factors add up to such a tensor. A truncated list of factors over several spin
 * components does not (the full list cancels what has no place there): it comes as a Hamiltonian over 2N spin orbitals.
 * @throws InputError `too-large-to-rebuild` for such a list of more than 16 orbitals.
 */
export function rebuildSpatial(
  h: SpatialHamiltonian,
  factorisation: Factorisation,
  blocks: readonly BlockItems[],
  oneBody: OneBody,
): SpinHamiltonian {
  const { n } = oneBody.kappa;
  const planes = Float64Array.from(oneBody.kappa.planes);
  let constant = oneBody.constant;
  const work = new Float64Array(n * n);
  const subtract = (mu: number, scale: number) => {
    for (let i = 0, at = mu * n * n; i < n * n; i++) planes[at + i]! -= scale * work[i]!;
  };
  for (const entry of blocks) {
    if (entry.kind === 'hypercontracted') {
      const identity = identityPart(entry.block);
      constant -= identity.constant;
      work.set(identity.plane);
      subtract(0, 1);
      continue;
    }
    if (entry.kind === 'triples') {
      const { block, items } = entry;
      const nanti = numAntisymmetricPairs(n);
      items.forEach(({ trace, shift }, t) => {
        planeInto(work, 0, block.antisymmetric, t * nanti, n, false);
        subtract(block.component[t]!, block.sameScale * block.strengths[t]! * (trace - n * shift));
      });
      continue;
    }
    const { block, items } = entry;
    if (block.sector === 'odd') continue;
    const { slots } = sectorLayout(block.sector, block.planes, n);
    items.forEach(({ trace, shift }, t) => {
      const w = block.weights[t]!;
      const tau = trace - n * shift;
      constant += 0.5 * w * tau * tau;
      for (const slot of slots) {
        planeInto(work, 0, block.vectors, t * block.dim + slot.offset, n, slot.symmetric);
        if (slot.mu === 0) for (let p = 0; p < n; p++) work[p * n + p]! -= shift;
        subtract(slot.mu, w * tau);
      }
    });
  }
  const k = { ...oneBody.kappa, planes };
  const common = { electrons: h.electrons, constant };
  const mixed = blocks.some(({ block }) => block.kind === 'squares' && block.planes.length > 1);
  if (mixed && factorisation.residual.dropped > 0) {
    return rebuildDense(n, common, toSpinOrbitals(k), blocks);
  }
  return fromProductForm({ ...common, orbitals: n, terms: h.terms, k, g: tensorOf(n, blocks) });
}

/** Σ w L' L' as a two-electron tensor of the spatial form. */
function tensorOf(n: number, blocks: readonly BlockItems[]): TwoElectronTensor {
  const npair = numSymmetricPairs(n);
  const nanti = numAntisymmetricPairs(n);
  const length = pairsTriangleLength(n);
  let charge: Float64Array | null = null;
  let same: Float64Array | null = null;
  let other: Float64Array | null = null;
  let spinSpin: Float64Array | null = null;
  // Coordinates of the orthonormal elements → coefficients of T_pq: an off-diagonal pair loses 1/√2.
  const unscale = new Float64Array(npair).fill(Math.SQRT1_2);
  for (let p = 0, i = 0; p < n; p++, i += p + 1) unscale[i] = 1;
  const symmetric = (vector: Float64Array, from: number, shift: number) => {
    const out = Float64Array.from(unscale, (scale, i) => scale * vector[from + i]!);
    for (let p = 0, i = 0; p < n; p++, i += p + 1) out[i]! -= shift;
    return out;
  };
  const antisymmetric = (vector: Float64Array, from: number) =>
    Float64Array.from({ length: nanti }, (_, i) => Math.SQRT1_2 * vector[from + i]!);
  const outer = (out: Float64Array, at: number, a: Float64Array, s: Float64Array, scale: number) => {
    for (let i = 0, o = at; i < a.length; i++) {
      for (let j = 0; j < s.length; j++) out[o++]! += scale * a[i]! * s[j]!;
    }
  };
  const triangle = (out: Float64Array, at: number, u: Float64Array, v: Float64Array, scale: number) => {
    // Symmetrised: the sum over all factors is symmetric, a single one need not be.
    for (let i = 0, o = at; i < u.length; i++) {
      for (let j = 0; j <= i; j++) out[o++]! += (scale / 2) * (u[i]! * v[j]! + u[j]! * v[i]!);
    }
  };
  for (const entry of blocks) {
    if (entry.kind === 'hypercontracted') {
      // ζ contracted, any shift being part of it.
      const contracted = approximateCharge({ ...entry.block, shift: null });
      charge ??= new Float64Array(length);
      for (let i = 0; i < length; i++) charge[i]! += contracted[i]!;
      continue;
    }
    if (entry.kind === 'triples') {
      const { block, items } = entry;
      items.forEach(({ shift }, t) => {
        const a = antisymmetric(block.antisymmetric, t * nanti);
        const s = block.strengths[t]!;
        const at = (block.component[t]! - 1) * nanti * npair;
        same ??= new Float64Array(3 * nanti * npair);
        other ??= new Float64Array(3 * nanti * npair);
        outer(same, at, a, symmetric(block.symmetric, t * npair, shift), s * block.sameScale);
        outer(other, at, a, symmetric(block.symmetric, t * npair, 0), s * block.otherScale);
      });
      continue;
    }
    const { block, items } = entry;
    const { slots } = sectorLayout(block.sector, block.planes, n);
    items.forEach(({ shift }, t) => {
      const w = block.weights[t]!;
      const at = t * block.dim;
      const pairs = slots.map((slot) =>
        slot.symmetric
          ? symmetric(block.vectors, at + slot.offset, slot.mu === 0 ? shift : 0)
          : antisymmetric(block.vectors, at + slot.offset),
      );
      slots.forEach((slot, i) => {
        const u = pairs[i]!;
        if (slot.mu === 0 && slot.symmetric) {
          charge ??= new Float64Array(length);
          triangle(charge, 0, u, u, w);
          return;
        }
        if (slot.mu === 0) return;
        const zero = slots.findIndex((s) => s.mu === 0);
        if (zero >= 0) {
          const place = (slot.mu - 1) * nanti * npair;
          if (block.sector === 'even') {
            same ??= new Float64Array(3 * nanti * npair);
            outer(same, place, u, pairs[zero]!, w);
          } else {
            other ??= new Float64Array(3 * nanti * npair);
            outer(other, place, pairs[zero]!, u, w);
          }
        }
        if (block.sector === 'odd') {
          slots.forEach((second, j) => {
            if (second.mu < slot.mu || second.mu === 0) return;
            spinSpin ??= new Float64Array(6 * length);
            triangle(spinSpin, COMPONENT[slot.mu - 1]![second.mu - 1]! * length, u, pairs[j]!, w);
          });
        }
      });
    });
  }
  const spinOrbit =
    same || other
      ? {
          same: same ?? new Float64Array(3 * nanti * npair),
          other: other ?? { timesSame: 0 },
        }
      : null;
  return { charge, spinOrbit, spinSpin };
}

/** Position of kl among xx,xy,xz,yy,yz,zz, k ≤ l. */
const COMPONENT = [
  [0, 1, 2],
  [1, 3, 4],
  [2, 4, 5],
] as const;

/** Σ w L' ⊗ L' over 2N spin orbitals. */
function rebuildDense(
  n: number,
  common: { readonly electrons: number; readonly constant: number },
  k: { readonly re: Float64Array; readonly im: Float64Array },
  blocks: readonly BlockItems[],
): SpinHamiltonian {
  if (n > MAX_DENSE) {
    throw new InputError({
      code: 'too-large-to-rebuild',
      where: 'rebuilt Hamiltonian',
      found: `truncated factors over several spin components, ${n} orbitals`,
      expected: `at most ${MAX_DENSE} orbitals`,
      mend: 'Use an orbital window, or threshold 0.',
    });
  }
  const m = 2 * n;
  const size = m * m;
  const re = new Float64Array(size * size);
  const im = new Float64Array(size * size);
  /** g += w (x ⊗ y). */
  const addOuter = (x: ComplexMatrix, y: ComplexMatrix, w: number): void => {
    for (let i = 0; i < size; i++) {
      for (let j = 0; j < size; j++) {
        re[i * size + j]! += w * (x.re[i]! * y.re[j]! - x.im[i]! * y.im[j]!);
        im[i * size + j]! += w * (x.re[i]! * y.im[j]! + x.im[i]! * y.re[j]!);
      }
    }
  };
  for (const entry of blocks) {
    if (entry.kind === 'hypercontracted') throw new RangeError('a hypercontracted part is of charge alone');
    if (entry.kind === 'triples') {
      const { block } = entry;
      entry.items.forEach(({ shift }, t) => {
        const k = block.component[t]!;
        const s = block.strengths[t]!;
        const halves = [
          [block.sameScale, 'even', k, 0, shift],
          [block.otherScale, 'odd', 0, k, 0],
        ] as const;
        for (const [scale, sector, muX, muY, c] of halves) {
          if (scale === 0) continue;
          const x = { sector, n, planes: new Float64Array(4 * n * n) };
          const y = { sector, n, planes: new Float64Array(4 * n * n) };
          planeInto(x.planes, muX * n * n, block.antisymmetric, t * numAntisymmetricPairs(n), n, false);
          planeInto(y.planes, muY * n * n, block.symmetric, t * numSymmetricPairs(n), n, true);
          if (c !== 0) for (let p = 0; p < n; p++) y.planes[p * n + p]! -= c;
          const [xs, ys] = [toSpinOrbitals(x), toSpinOrbitals(y)];
          addOuter(xs, ys, s * scale);
          addOuter(ys, xs, s * scale);
        }
      });
      continue;
    }
    entry.items.forEach(({ shift }, t) => {
      const l = toSpinOrbitals(shiftedPlanes(entry.block, t, shift));
      addOuter(l, l, entry.block.weights[t]!);
    });
  }
  return spinorFromProductForm({ ...common, spinors: m, k: { re: k.re, im: k.im }, g: { re, im } });
}

function shiftedPlanes(block: SquareFactors, t: number, shift: number) {
  const { n, sector } = block;
  const planes = new Float64Array(4 * n * n);
  for (const slot of sectorLayout(sector, block.planes, n).slots) {
    planeInto(planes, slot.mu * n * n, block.vectors, t * block.dim + slot.offset, n, slot.symmetric);
  }
  if (shift !== 0) for (let p = 0; p < n; p++) planes[p * n + p]! -= shift;
  return { sector, n, planes };
}

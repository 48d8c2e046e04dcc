import {
  planeOf,
  type SpatialHamiltonian,
  type SpinHamiltonian,
  type SpinorHamiltonian,
} from '../../hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs } from '../../integrals/integral-set';
import type { JobContext } from '../../job';
import { sectorLayout, traceOfPairs } from '../elements';
import type { Factorisation, SpinorFactors, SquareFactors, TripleFactors } from '../factors';
import { tripleOneNorms } from '../one-norms';
import { addPairs } from '../smooth-norms';
import { modeSpectra } from './mode-spectra';
import { addHermitianPairs, type KappaPlane } from './one-body-norms';

/**
 * Factors of one block whose charge side has a spectrum to shift. Factor i costs scale_i·(rest_i + Σ_j|ε_ij − c_i|)^power and
 * adds c_i · coefficient_i · (its vector) to κ.
 */
export interface ShiftGroup {
  /** Position of the block in the factorisation, and of each factor in the block. */
  readonly block: number;
  readonly items: readonly number[];
  /** Spectra: `width` numbers from item·stride + offset, ascending. */
  readonly values: Float64Array;
  readonly valueLayout: { readonly stride: number; readonly offset: number; readonly width: number };
  readonly power: 1 | 2;
  readonly scale: Float64Array;
  readonly rest: Float64Array;
  readonly coefficient: Float64Array;
  readonly vectors: Float64Array;
  readonly stride: number;
  /** Which part of a vector goes to which plane of the problem. */
  readonly slots: readonly { readonly plane: number; readonly offset: number }[];
}

/**
 * λ as a function of the shifts: Σ over groups, plus the nuclear norms of the planes, the charge plane less its own c₁; or,
 * for `whole`, plus the norm of the four planes together over 2N modes.
 */
export interface ShiftProblem {
  readonly groups: readonly ShiftGroup[];
  readonly planes: readonly KappaPlane[];
  readonly whole: boolean;
}

/** Which form's λ is meant; of spinor integrals there is only one. */
export type ShiftForm = 'triplet' | 'spinor';

/**
 * The independent problems that the shifts of a factorisation make up: where factors keep to single planes, each
 * plane of κ and the factors that touch it by itself, else all together. Problems without factors are left out.
 *
 * In the spinor form κ counts as a whole, and factors over several planes by their eigenvalues over 2N modes. Triples count
 * as in the triplet form, whose λ bounds theirs.
 */
export async function shiftProblems(
  h: SpinHamiltonian,
  factorisation: Factorisation,
  form: ShiftForm,
  ctx: JobContext,
): Promise<ShiftProblem[]> {
  return h.kind === 'spinor'
    ? spinorProblem(h, factorisation)
    : spatialProblems(h, factorisation, form === 'spinor', ctx);
}

async function spatialProblems(
  h: SpatialHamiltonian,
  factorisation: Factorisation,
  whole: boolean,
  ctx: JobContext,
): Promise<ShiftProblem[]> {
  const n = h.orbitals;
  const planes = spatialPlanes(h, factorisation);
  const groups: ShiftGroup[] = [];
  for (const [b, block] of factorisation.blocks.entries()) {
    if (block.kind === 'squares' && block.sector === 'even' && block.planes.includes(0)) {
      const group = squareGroup(block, b, h.electrons - n);
      groups.push(whole && block.planes.length > 1 ? await overModes(group, block, ctx) : group);
    }
    if (block.kind !== 'triples' || block.sameScale === 0) continue;
    for (const k of [1, 2, 3]) groups.push(tripleGroup(block, b, k, h.electrons - n));
  }
  const filled = groups.filter(({ items }) => items.length > 0);
  if (filled.length === 0) return [];
  if (whole || filled.some(({ slots }) => slots.length > 1)) return [{ groups: filled, planes, whole }];
  return planes.flatMap((plane, mu) => {
    const own = filled.filter(({ slots }) => slots[0]!.plane === mu);
    if (own.length === 0) return [];
    const alone = own.map((g) => ({ ...g, slots: [{ ...g.slots[0]!, plane: 0 }] }));
    return [{ groups: alone, planes: [plane], whole }];
  });
}

/** The group with the 2N eigenvalues of Σ_μ L^μ⊗σ^μ: a shift of L⁰ moves them all alike. */
async function overModes(group: ShiftGroup, block: SquareFactors, ctx: JobContext): Promise<ShiftGroup> {
  const width = 2 * block.n;
  return {
    ...group,
    values: await modeSpectra(block, ctx),
    valueLayout: { stride: width, offset: 0, width },
    scale: group.scale.map((x) => 0.25 * x),
    rest: new Float64Array(block.count),
  };
}

function squareGroup(block: SquareFactors, b: number, excess: number): ShiftGroup {
  const { slots, spectrumWidth: stride } = sectorLayout(block.sector, block.planes, block.n);
  const charge = slots.find(({ mu }) => mu === 0)!;
  const rest = new Float64Array(block.count);
  for (const slot of slots) {
    if (slot === charge) continue;
    for (let t = 0; t < block.count; t++) {
      // An antisymmetric plane has the eigenvalues ±a_j.
      for (let j = 0; j < slot.spectrumLength; j++) {
        rest[t]! += 2 * Math.abs(block.spectra[t * stride + slot.spectrumOffset + j]!);
      }
    }
  }
  return {
    block: b,
    items: Array.from({ length: block.count }, (_, t) => t),
    values: block.spectra,
    valueLayout: { stride, offset: charge.spectrumOffset, width: charge.spectrumLength },
    power: 2,
    scale: block.weights.map((w) => 0.25 * Math.abs(w)),
    rest,
    coefficient: block.weights.map((w) => excess * w),
    vectors: block.vectors,
    stride: block.dim,
    slots: slots.map(({ mu, offset }) => ({ plane: mu, offset })),
  };
}

function tripleGroup(block: TripleFactors, b: number, k: number, excess: number): ShiftGroup {
  const items = Array.from(block.component.keys()).filter((t) => block.component[t] === k);
  const { a } = tripleOneNorms(block);
  return {
    block: b,
    items,
    values: block.symmetricValues,
    valueLayout: { stride: block.n, offset: 0, width: block.n },
    power: 1,
    scale: Float64Array.from(items, (t) => Math.abs(block.sameScale) * block.strengths[t]! * a[t]!),
    rest: new Float64Array(items.length),
    coefficient: Float64Array.from(items, (t) => excess * block.sameScale * block.strengths[t]!),
    vectors: block.antisymmetric,
    stride: numAntisymmetricPairs(block.n),
    slots: [{ plane: k, offset: 0 }],
  };
}

/** κ^μ = k^μ + folded mean field + Σ_t w_t τ_t L^{t,μ}, and s τ a for a triple. */
function spatialPlanes(h: SpatialHamiltonian, { blocks, foldedMeanField }: Factorisation): KappaPlane[] {
  const n = h.orbitals;
  const nanti = numAntisymmetricPairs(n);
  const npair = numSymmetricPairs(n);
  const planes = ([0, 1, 2, 3] as const).map((mu): KappaPlane => {
    const start = new Float64Array(mu === 0 ? npair : nanti);
    addPairs(start, 0, planeOf(h.k, mu), n, mu === 0, 1);
    if (foldedMeanField && 'planes' in foldedMeanField) {
      addPairs(start, 0, planeOf(foldedMeanField, mu), n, mu === 0, 1);
    }
    return { kind: mu === 0 ? 'symmetric' : 'antisymmetric', n, weight: 1, start };
  });
  const add = (mu: number, vectors: Float64Array, at: number, scale: number) => {
    const { start } = planes[mu]!;
    for (let i = 0; i < start.length; i++) start[i]! += scale * vectors[at + i]!;
  };
  for (const block of blocks) {
    if (block.kind === 'triples') {
      for (let t = 0; t < block.count; t++) {
        const scale = block.sameScale * block.strengths[t]! * traceOfPairs(block.symmetric, t * npair, n);
        add(block.component[t]!, block.antisymmetric, t * nanti, scale);
      }
    } else if (block.kind === 'squares' && block.sector === 'even') {
      const { slots } = sectorLayout(block.sector, block.planes, n);
      const charge = slots.find(({ mu }) => mu === 0);
      if (!charge) continue;
      for (let t = 0; t < block.count; t++) {
        const at = t * block.dim;
        const scale = block.weights[t]! * traceOfPairs(block.vectors, at + charge.offset, n);
        for (const { mu, offset } of slots) add(mu, block.vectors, at + offset, scale);
      }
    }
  }
  return planes;
}

/** λ = ½‖κ − c₁‖_* + ¼ Σ |w| (½ Σ|ε − c|)² over M spinors; N̂ − M/2 takes the place of N̂ − N, τ = ½ tr L. */
function spinorProblem(h: SpinorHamiltonian, { blocks, foldedMeanField }: Factorisation): ShiftProblem[] {
  const m = h.spinors;
  const start = new Float64Array(m * m);
  addHermitianPairs(start, 0, h.k, m, 1);
  if (foldedMeanField && 're' in foldedMeanField) addHermitianPairs(start, 0, foldedMeanField, m, 1);
  const groups: ShiftGroup[] = [];
  for (const [b, block] of blocks.entries()) {
    if (block.kind !== 'spinor-squares') continue;
    for (let t = 0; t < block.count; t++) {
      const scale = 0.5 * block.weights[t]! * traceOfPairs(block.vectors, t * m * m, m);
      for (let i = 0; i < m * m; i++) start[i]! += scale * block.vectors[t * m * m + i]!;
    }
    // The eigenvalues of odd factors come in ± pairs: there is nothing to shift.
    if (block.part !== 'odd' && block.count > 0) groups.push(spinorGroup(block, b, h.electrons - m / 2));
  }
  const planes: KappaPlane[] = [{ kind: 'hermitian', n: m, weight: 0.5, start }];
  return groups.length > 0 ? [{ groups, planes, whole: false }] : [];
}

function spinorGroup(block: SpinorFactors, b: number, excess: number): ShiftGroup {
  const m = block.spinors;
  return {
    block: b,
    items: Array.from({ length: block.count }, (_, t) => t),
    values: block.spectra,
    valueLayout: { stride: m, offset: 0, width: m },
    power: 2,
    scale: block.weights.map((w) => 0.0625 * Math.abs(w)),
    rest: new Float64Array(block.count),
    coefficient: block.weights.map((w) => excess * w),
    vectors: block.vectors,
    stride: m * m,
    slots: [{ plane: 0, offset: 0 }],
  };
}

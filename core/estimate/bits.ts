import { type EncodingShape, SPINOR_KINDS } from '../encode';
import type { ErrorBudget } from './target';

/** One bit width: what is used, and what the two formulas ask for. */
export interface BitChoice {
  readonly used: number;
  /** Bits that a worst-case bound asks for; null where the encoding has no such register. */
  readonly rigorous: number | null;
  /** Bits that the statistical estimate asks for, guard bits not included. */
  readonly estimate: number | null;
  readonly chosen:
    | 'given'
    | 'estimate plus guard bits'
    | 'measured plus a guard bit'
    | 'least sensible'
    | 'none needed';
}

export interface BitChoices {
  /** ℵ: bits of the keep value in alias sampling. */
  readonly keep: BitChoice;
  /** β: bits of an angle. */
  readonly rotation: BitChoice;
}

/** λ split as the bit formulas need it, hartree. */
export interface LambdaSplit {
  readonly oneBody: number;
  readonly twoBody: number;
}

/** Added to the estimate: it held within a factor 4 of exact norms on small molecules (computed, OH STO-3G). */
export const GUARD_BITS = 2;
/** Added where rounding was measured: samples of it differed by a factor 2 and less (CH2O, OH; 8 to 20 orbitals). */
export const MEASURED_GUARD_BITS = 1;
/** Below this a table is too coarse whatever the budget says. Common practice, no source. */
export const LEAST_BITS = 6;

/**
 * ℵ and β from the error budget. Rigorous: sums of worst cases. Estimate: independent rounding errors of many rows,
 * all rows taken to weigh alike. `auto` is the estimate and {@link GUARD_BITS}, or, if that is less, what the rounded
 * tables themselves do to low states where the shape carries that, and {@link MEASURED_GUARD_BITS}.
 */
export function chooseBits(
  shape: EncodingShape,
  lambda: LambdaSplit,
  budget: Pick<ErrorBudget, 'prepare' | 'rotation'>,
  given: { readonly keep: number | 'auto'; readonly rotation: number | 'auto' },
): BitChoices {
  const keep = keepErrors(shape, lambda);
  const rotation = rotationErrors(shape, lambda);
  return {
    keep: choose(keep, shape.measuredRounding?.keep, budget.prepare, given.keep),
    rotation:
      rotation === null
        ? NONE
        : choose(rotation, shape.measuredRounding?.rotation, budget.rotation, given.rotation),
  };
}

const NONE: BitChoice = { used: 0, rigorous: null, estimate: null, chosen: 'none needed' };

/** Energy error at one bit: with n bits it is 2^−n times that. */
interface ErrorAtZeroBits {
  readonly rigorous: number;
  readonly estimate: number;
}

function choose(
  error: ErrorAtZeroBits,
  measured: number | undefined,
  allowed: number,
  given: number | 'auto',
): BitChoice {
  const rigorous = bitsBelow(error.rigorous, allowed);
  const estimate = bitsBelow(error.estimate, allowed);
  if (given !== 'auto') return { used: given, rigorous, estimate, chosen: 'given' };
  const guarded = estimate + GUARD_BITS;
  const seen = measured === undefined ? guarded : bitsBelow(measured, allowed) + MEASURED_GUARD_BITS;
  const wanted = Math.min(guarded, seen);
  if (wanted < LEAST_BITS) return { used: LEAST_BITS, rigorous, estimate, chosen: 'least sensible' };
  const chosen = wanted < guarded ? 'measured plus a guard bit' : 'estimate plus guard bits';
  return { used: wanted, rigorous, estimate, chosen };
}

function bitsBelow(errorAtZeroBits: number, allowed: number): number {
  return errorAtZeroBits <= allowed ? 0 : Math.ceil(Math.log2(errorAtZeroBits / allowed));
}

/**
 * Energy error of a whole encoding at given bits, hartree: worst cases summed, and the statistical estimate. What the
 * tables of a program really do is core/verify/energy-error.ts.
 */
export function roundingError(
  shape: EncodingShape,
  lambda: LambdaSplit,
  bits: { readonly keep: number; readonly rotation: number },
): { readonly rigorous: number; readonly estimate: number } {
  const keep = keepErrors(shape, lambda);
  const rotation = rotationErrors(shape, lambda) ?? { rigorous: 0, estimate: 0 };
  const sum = (part: keyof ErrorAtZeroBits) =>
    keep[part] * 2 ** -bits.keep + rotation[part] * 2 ** -bits.rotation;
  return { rigorous: sum('rigorous'), estimate: sum('estimate') };
}

/**
 * Alias sampling over L rows rounds each probability to a multiple of 1/(L 2^ℵ). Outer table: λ 2^−ℵ, or with
 * independent signs λ 2^−ℵ/√(12 L). Inner tables: the square doubles twice, 4λ₂ 2^−ℵ; the one-body rows count once. The
 * vectors of a product are drawn for sure.
 */
function keepErrors(shape: EncodingShape, { oneBody, twoBody }: LambdaSplit): ErrorAtZeroBits {
  const lambda = oneBody + twoBody;
  if (shape.kind === 'sparse') {
    return { rigorous: lambda, estimate: lambda / Math.sqrt(12 * Math.max(shape.rows, 1)) };
  }
  const spread = (items: number) => Math.sqrt(12 * Math.max(items, 1));
  const { squares, rows } = apartFromProducts(shape, twoBody);
  return {
    rigorous: lambda + 4 * squares + oneBody,
    estimate:
      lambda / spread(shape.factors + 1) + (4 * squares) / spread(rows) + oneBody / spread(shape.oneBodyRows),
  };
}

/**
 * Angles on a grid of 2π/2^β move a unit vector by at most √n π/2^β for n angles: the metric of the sphere has
 * coefficients ≤ 1. A vector error δ costs 8δλ in a square and 2δλ in a one-body term; statistically δ is
 * (2π/2^β)/√12 · √((n + 2)/2), and rows add up like 1/√rows.
 *
 * A product ½{M_m, M_n} of two operators of norm 1 that change by 2δ each costs 4δλ. As Σ_m ½{ΔM_m, Y_m} with ‖Y_m‖ at most
 * the weights that vector m has a part in, 2λ/M on average, M vectors add up like 1/√M; signs within Y_m, which make it
 * less, are left out, and as for squares half the worst case is taken: exact norms of F, and of OH and CH2O in four orbitals,
 * were 0.6 to 1.9 times the estimate at 8 to 14 bits (squares: 0.1 to 2.1; computed).
 */
function rotationErrors(shape: EncodingShape, { oneBody, twoBody }: LambdaSplit): ErrorAtZeroBits | null {
  if (shape.kind === 'sparse') return null;
  const angles = anglesOf(shape);
  const worst = (n: number) => Math.PI * Math.sqrt(n);
  const typical = (n: number) => ((2 * Math.PI) / Math.sqrt(12)) * Math.sqrt((n + 2) / 2);
  // Of rows with fewer bits: half a coarse step, and the half step that all are off.
  const axial = shape.axialParts ?? { squares: 0, oneBody: 0 };
  const coarse = 2 ** (shape.spinors?.spared ?? 0) + 1;
  const mean = (size: (n: number) => number, n: number, part: number) =>
    (1 - part) * size(n) + part * coarse * size(shape.orbitals + 1);
  const { squares, products, rows, vectors } = apartFromProducts(shape, twoBody);
  return {
    rigorous:
      8 * mean(worst, angles.squares, axial.squares) * squares +
      4 * worst(angles.squares) * products +
      2 * mean(worst, angles.oneBody, axial.oneBody) * oneBody,
    estimate:
      (4 * mean(typical, angles.squares, axial.squares) * squares) / Math.sqrt(Math.max(rows, 1)) +
      (2 * typical(angles.squares) * products) / Math.sqrt(Math.max(vectors, 1)) +
      (2 * mean(typical, angles.oneBody, axial.oneBody) * oneBody) /
        Math.sqrt(Math.max(shape.oneBodyRows, 1)),
  };
}

/** λ₂ and rows of the squares by themselves, and of products of different vectors; hartree. */
function apartFromProducts({ rows, products }: EncodingShape, twoBody: number) {
  if (!products) return { squares: twoBody, products: 0, rows, vectors: 0 };
  const { vectors, part } = products;
  return { squares: (1 - part) * twoBody, products: part * twoBody, rows, vectors };
}

/**
 * n of the rows with most angles, those with fewer bits apart. The phases of a spinor's orbitals together count as two angles, for Σ r_p² dβ_p² is at
 * most one of them and on average one; with their spins as five: (|dβ| + |dδ|)² + dθ².
 */
function anglesOf({ kind, orbitals, spinors, axialParts }: EncodingShape): {
  squares: number;
  oneBody: number;
} {
  const chain = orbitals - 1;
  if (!spinors) {
    const all = chain + (kind === 'spinor' ? MORE_ANGLES.full : 0);
    return { squares: all, oneBody: all };
  }
  const more = axialParts ? { ...MORE_ANGLES, axial: 0 } : MORE_ANGLES;
  const first = spinors.kinds.length - spinors.oneBodyItems;
  const most = (kinds: Uint8Array) =>
    kinds.reduce((found, own) => Math.max(found, more[SPINOR_KINDS[own]!]), 0);
  return {
    squares: chain + most(spinors.kinds.subarray(0, first)),
    oneBody: chain + most(spinors.kinds.subarray(first)),
  };
}

const MORE_ANGLES = { real: 0, axial: 2, full: 5 } as const;

import { type SpatialHamiltonian, type SymmetryShift, zeroOperator } from '../../hamiltonian';
import type { JobContext } from '../../job';
import { minimiseSmooth } from '../../linalg';
import { type Diagonal, type Term, touchedStrings } from './strings';

/** Smoothing widths, relative to the largest value. */
const WIDTHS = [0.1, 0.03, 0.01, 3e-3, 1e-3, 3e-4, 1e-4, 1e-5];
const SWEEPS = 50;

/**
 * The ξ, charge and spin components and scalar, for which H + ξ (N̂ − η) has the least sum of |coefficient| over merged
 * Majorana strings. Every element off the diagonal of ξ meets strings of its own, so that its best value is a weighted
 * median. The diagonal elements of ξ⁰ share strings: their sum of |…| is smoothed by √(x² + δ²), δ lowered step by step,
 * and the kinks are then met exactly by weighted medians, coordinate after coordinate.
 */
export async function sparseShift(h: SpatialHamiltonian, ctx: JobContext): Promise<SymmetryShift> {
  const n = h.orbitals;
  const { offDiagonal, diagonal } = await touchedStrings(h, ctx);
  const operator = zeroOperator('even', n);
  for (const { mu, p, q, terms } of offDiagonal) {
    const x = weightedMedian(terms);
    operator.planes[(mu * n + p) * n + q] = x;
    operator.planes[(mu * n + q) * n + p] = mu === 0 ? x : -x;
  }
  const { scalar, elements } = await bestDiagonal(diagonal, ctx);
  for (let p = 0; p < n; p++) operator.planes[p * n + p] = elements[p]!;
  return { scalar, operator };
}

/** The x that makes Σ weight·|value + x| least, 0 where that does as well. */
export function weightedMedian(terms: readonly Term[]): number {
  const kinks = terms
    .filter(({ weight }) => weight > 0)
    .map(({ value, weight }) => ({ at: -value, weight }))
    .sort((a, b) => a.at - b.at);
  const total = kinks.reduce((sum, { weight }) => sum + weight, 0);
  const below = (x: number) => kinks.reduce((sum, { at, weight }) => sum + (at < x ? weight : 0), 0);
  const above = (x: number) => kinks.reduce((sum, { at, weight }) => sum + (at > x ? weight : 0), 0);
  const half = 0.5 * total * (1 + 1e-12);
  if (below(0) <= half && above(0) <= half) return 0;
  let sum = 0;
  for (const { at, weight } of kinks) {
    sum += weight;
    if (sum >= 0.5 * total) return at;
  }
  return 0;
}

async function bestDiagonal(diagonal: Diagonal, ctx: JobContext) {
  const { n, pairs, single } = diagonal;
  let largest = 0;
  for (const { value } of [...pairs, ...single]) largest = Math.max(largest, Math.abs(value));
  let x: Float64Array = new Float64Array(n + 1);
  let least = smoothed(diagonal, x, 0).value;
  const keep = (candidate: Float64Array) => {
    const { value } = smoothed(diagonal, candidate, 0);
    if (value >= least) return false;
    least = value;
    x = candidate;
    return true;
  };
  let from = x;
  for (const width of largest > 0 ? WIDTHS : []) {
    const found = await minimiseSmooth((y) => smoothed(diagonal, y, width * largest), from, {
      steps: 300,
      settled: 1e-9,
      checkpoint: () => ctx.checkpoint(),
    });
    from = found.x;
    keep(from);
  }
  for (let sweep = 0; sweep < SWEEPS; sweep++) {
    await ctx.checkpoint();
    const before = least;
    for (let i = 0; i <= n; i++) {
      const moved = x.slice();
      moved[i]! += weightedMedian(along(diagonal, x, i));
      keep(moved);
    }
    if (before - least <= 1e-12 * least) break;
  }
  return { elements: x.subarray(0, n), scalar: x[n]! };
}

/** Sum over the strings and its gradient; coordinates: ξ_pp, then the scalar. */
export function smoothed({ n, excess, pairs, single }: Diagonal, x: Float64Array, delta: number) {
  const gradient = new Float64Array(n + 1);
  let value = 0;
  const visit = (weight: number, y: number): number => {
    const size = Math.sqrt(y * y + delta * delta);
    value += weight * size;
    return size > 0 ? (weight * y) / size : 0;
  };
  for (const { p, r, value: v, weight } of pairs) {
    const slope = visit(weight, v + x[p]! + x[r]!);
    gradient[p]! += slope;
    gradient[r]! += slope;
  }
  let trace = 0;
  for (let p = 0; p < n; p++) trace += x[p]!;
  let common = 0;
  for (const { p, value: v, weight } of single) {
    const slope = visit(weight, v + excess * x[p]! + trace + x[n]!);
    gradient[p]! += excess * slope;
    common += slope;
  }
  for (let i = 0; i <= n; i++) gradient[i]! += common;
  return { value, gradient };
}

/** The strings as functions of a step of coordinate i alone. */
function along({ n, excess, pairs, single }: Diagonal, x: Float64Array, i: number): Term[] {
  const terms: Term[] = [];
  const add = (weight: number, value: number, slope: number) => {
    if (slope !== 0) terms.push({ weight: weight * Math.abs(slope), value: value / slope });
  };
  for (const { p, r, value, weight } of pairs) {
    add(weight, value + x[p]! + x[r]!, (p === i ? 1 : 0) + (r === i ? 1 : 0));
  }
  let trace = 0;
  for (let p = 0; p < n; p++) trace += x[p]!;
  for (const { p, value, weight } of single) {
    add(weight, value + excess * x[p]! + trace + x[n]!, (p === i ? excess : 0) + 1);
  }
  return terms;
}

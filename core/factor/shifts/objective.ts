import { planeNorm, wholeNorm } from './one-body-norms';
import type { ShiftGroup, ShiftProblem } from './problem';
import { leastWithSlope } from './spectrum-cost';

/** λ of a shift problem at one point. Hartree. */
export interface ShiftValue {
  /** Smoothed by √(x² + δ²). */
  readonly value: number;
  readonly exact: number;
  /** Of `value`, one number a factor, groups one after another. */
  readonly gradient: Float64Array;
  /** No choice of shifts has a smaller exact λ. */
  readonly lowerBound: number;
}

/** λ as a function of all shifts, groups one after another, and its smoothing. */
export class ShiftObjective {
  readonly #problem: ShiftProblem;
  readonly count: number;
  /** The shifts that make each factor's norm least by itself. */
  readonly medians: Float64Array;
  /** Size of a spectrum about its median, per value. */
  readonly #spreads: Float64Array;
  readonly #planeSizes: readonly number[];

  constructor(problem: ShiftProblem) {
    this.#problem = problem;
    this.count = problem.groups.reduce((sum, { items }) => sum + items.length, 0);
    this.medians = new Float64Array(this.count);
    this.#spreads = new Float64Array(this.count);
    forEachFactor(problem, (group, i, at) => {
      const values = spectrumOf(group, i);
      const half = values.length >> 1;
      const c = values.length % 2 === 1 ? values[half]! : (values[half - 1]! + values[half]!) / 2;
      this.medians[at] = c;
      this.#spreads[at] = values.reduce((sum, x) => sum + Math.abs(x - c), 0) / values.length;
    });
    this.#planeSizes = this.#kappa(this.medians).map(
      (x) => Math.sqrt(x.reduce((sum, y) => sum + y * y, 0)) || Number.MIN_VALUE,
    );
  }

  /** Coordinates of every plane of κ. */
  #kappa(shifts: Float64Array): Float64Array[] {
    const kappa = this.#problem.planes.map(({ start }) => start.slice());
    forEachFactor(this.#problem, (group, i, at) => {
      const scale = shifts[at]! * group.coefficient[i]!;
      if (scale === 0) return;
      const from = group.items[i]! * group.stride;
      for (const { plane, offset } of group.slots) {
        const target = kappa[plane]!;
        for (let j = 0, v = from + offset; j < target.length; j++, v++)
          target[j]! += scale * group.vectors[v]!;
      }
    });
    return kappa;
  }

  /** @param width - smoothing, relative to the size of each spectrum; > 0 */
  at(shifts: Float64Array, width: number): ShiftValue {
    const { planes, whole } = this.#problem;
    const kappa = this.#kappa(shifts);
    let value = 0;
    let exact = 0;
    const delta = (p: number) => (width * this.#planeSizes[p]!) / Math.sqrt(planes[p]!.n);
    const norms = whole
      ? wholeNorm(planes[0]!.n, kappa, delta(0))
      : planes.map((plane, p) => planeNorm(plane, kappa[p]!, delta(p)));
    for (const norm of norms) {
      value += norm.smooth;
      exact += norm.exact;
    }
    // Slopes of ⟨Z, κ⟩ along each shift; a linear cost bounds those for which the bound below is finite.
    const pull = new Float64Array(this.count);
    let inside = 1;
    forEachFactor(this.#problem, (group, i, at) => {
      pull[at] = group.coefficient[i]! * overlap(group, i, norms);
      const most = group.scale[i]! * group.valueLayout.width;
      if (group.power === 1 && Math.abs(pull[at]!) > most)
        inside = Math.min(inside, most / Math.abs(pull[at]!));
    });
    let lowerBound = 0;
    for (const [p, { dual }] of norms.entries()) {
      const { start } = planes[p]!;
      for (let i = 0; i < dual.length; i++) lowerBound += inside * dual[i]! * start[i]!;
    }
    const gradient = pull.slice();
    forEachFactor(this.#problem, (group, i, at) => {
      const { power, scale, rest } = group;
      const values = spectrumOf(group, i);
      const c = shifts[at]!;
      const delta = width * this.#spreads[at]!;
      let norm = rest[i]!;
      let sharp = rest[i]!;
      let slope = 0;
      for (const x of values) {
        const size = Math.hypot(x - c, delta);
        norm += size;
        sharp += Math.abs(x - c);
        slope += size > 0 ? (c - x) / size : 0;
      }
      value += scale[i]! * (power === 2 ? norm * norm : norm);
      exact += scale[i]! * (power === 2 ? sharp * sharp : sharp);
      gradient[at]! += scale[i]! * slope * (power === 2 ? 2 * norm : 1);
      lowerBound += leastWithSlope(values, { power, scale: scale[i]!, rest: rest[i]! }, inside * pull[at]!);
    });
    return { value, exact, gradient, lowerBound };
  }

  /** Every shift moved to the next value of its spectrum where that is no farther than `reach` times the spectrum's size. */
  snapped(shifts: Float64Array, reach: number): Float64Array {
    const out = shifts.slice();
    forEachFactor(this.#problem, (group, i, at) => {
      let next = Number.POSITIVE_INFINITY;
      for (const x of spectrumOf(group, i)) {
        if (Math.abs(x - shifts[at]!) < Math.abs(next - shifts[at]!)) next = x;
      }
      if (Math.abs(next - shifts[at]!) <= reach * this.#spreads[at]!) out[at] = next;
    });
    return out;
  }

  /** √ of the smoothed cost's second derivative along each shift, κ left out: what makes steps alike. */
  stiffness(shifts: Float64Array, width: number): Float64Array {
    const out = new Float64Array(this.count);
    forEachFactor(this.#problem, (group, i, at) => {
      const delta = width * this.#spreads[at]!;
      let norm = group.rest[i]!;
      let slope = 0;
      let bend = 0;
      for (const x of spectrumOf(group, i)) {
        const y = shifts[at]! - x;
        const size = Math.hypot(y, delta);
        norm += size;
        slope += size > 0 ? y / size : 0;
        bend += size > 0 ? (delta * delta) / size ** 3 : 0;
      }
      const second = group.power === 2 ? 2 * (slope * slope + norm * bend) : bend;
      out[at] = Math.sqrt(group.scale[i]! * second);
    });
    const most = out.reduce((a, b) => Math.max(a, b), 0) || 1;
    // A factor of next to no weight must not get steps without bounds.
    return out.map((x) => Math.max(x, 1e-6 * most));
  }
}

function spectrumOf({ values, valueLayout, items }: ShiftGroup, i: number): Float64Array {
  const from = items[i]! * valueLayout.stride + valueLayout.offset;
  return values.subarray(from, from + valueLayout.width);
}

function overlap(group: ShiftGroup, i: number, norms: readonly { readonly dual: Float64Array }[]): number {
  const from = group.items[i]! * group.stride;
  let sum = 0;
  for (const { plane, offset } of group.slots) {
    const { dual } = norms[plane]!;
    for (let j = 0, v = from + offset; j < dual.length; j++, v++) sum += dual[j]! * group.vectors[v]!;
  }
  return sum;
}

/** Calls `visit(group, number in the group, number of the shift)`. */
export function forEachFactor(
  { groups }: ShiftProblem,
  visit: (group: ShiftGroup, i: number, at: number) => void,
): void {
  let at = 0;
  for (const group of groups) for (let i = 0; i < group.items.length; i++) visit(group, i, at++);
}

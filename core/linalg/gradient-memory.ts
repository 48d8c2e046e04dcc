import { addScaledTo, dot } from './vectors';

interface Pair {
  readonly step: Float64Array;
  readonly change: Float64Array;
  /** The inverse of their scalar product. */
  readonly inverse: number;
}

/** Pairs whose directions differ so much that their scalar product is rounding say nothing about a minimum. */
const STRAIGHT = 1e-10;

/**
 * The last steps of a descent and what they did to the gradient: limited-memory BFGS by the two-loop recursion
 * (J. Nocedal, Math. Comp. 35, 773 (1980); D. C. Liu, J. Nocedal, Math. Programming 45, 503 (1989); quoted from memory).
 *
 * On a matrix group, generators of successive steps are treated as vectors of one space; what that neglects is of
 * second order in the step. Which point a step leads to is the caller's affair.
 */
export class GradientMemory {
  readonly #pairs: Pair[] = [];
  readonly #most: number;

  /** @param most - pairs that are remembered */
  constructor(most: number) {
    this.#most = most;
  }

  get size(): number {
    return this.#pairs.length;
  }

  forget(): void {
    this.#pairs.length = 0;
  }

  /** Books a step and the change of the gradient along it, unless the slope did not rise. Neither may be changed later. */
  learn(step: Float64Array, change: Float64Array): void {
    const curvature = dot(step, change);
    if (!(curvature > STRAIGHT * Math.sqrt(dot(step, step) * dot(change, change)))) return;
    this.#pairs.push({ step, change, inverse: 1 / curvature });
    if (this.#pairs.length > this.#most) this.#pairs.shift();
  }

  /**
   * −(inverse Hessian as the pairs know it) · gradient. Where that does not descend, the pairs are forgotten, and it is
   * −gradient, which has no length of its own.
   */
  direction(gradient: Float64Array): Float64Array {
    const out = gradient.map((value) => -value);
    const last = this.#pairs.at(-1);
    if (!last) return out;
    const weights = new Float64Array(this.#pairs.length);
    for (let i = this.#pairs.length - 1; i >= 0; i--) {
      const { step, change, inverse } = this.#pairs[i]!;
      weights[i] = inverse * dot(step, out);
      addScaledTo(out, change, -weights[i]!);
    }
    const scale = 1 / (last.inverse * dot(last.change, last.change));
    for (let i = 0; i < out.length; i++) out[i]! *= scale;
    for (const [i, { step, change, inverse }] of this.#pairs.entries()) {
      addScaledTo(out, step, weights[i]! - inverse * dot(change, out));
    }
    if (dot(out, gradient) < 0) return out;
    this.forget();
    return gradient.map((value) => -value);
  }
}

/** Value and gradient at a point of the orthogonal group; whoever asks keeps the point. */
export interface GroupValue {
  readonly lambda: number;
  /** Antisymmetric n×n: dλ = Σ_{p>q} gradient_pq X_pq for U → e^X U. */
  readonly gradient: Float64Array;
}

/** Quasi-Newton memory. */
const PAIRS = 12;

/**
 * Limited-memory quasi-Newton directions on the orthogonal group: generators of successive steps are treated as
 * vectors of one space (J. Nocedal, Math. Comp. 35, 773 (1980), two-loop recursion). What that neglects is of second
 * order in the step, and a direction that would not descend is replaced by the steepest one.
 */
export class Directions {
  readonly #steps: Float64Array[] = [];
  readonly #changes: Float64Array[] = [];

  /** Next generator: a descent direction, without a length that is right in itself. */
  next(gradient: Float64Array): Float64Array {
    const direction = gradient.map((x) => -x);
    const alphas: number[] = [];
    for (let i = this.#steps.length - 1; i >= 0; i--) {
      const [s, y] = [this.#steps[i]!, this.#changes[i]!];
      const alpha = dot(s, direction) / dot(s, y);
      alphas[i] = alpha;
      addScaled(direction, y, -alpha);
    }
    const last = this.#steps.length - 1;
    if (last >= 0) {
      const [s, y] = [this.#steps[last]!, this.#changes[last]!];
      const scale = dot(s, y) / dot(y, y);
      for (let i = 0; i < direction.length; i++) direction[i]! *= scale;
    }
    for (let i = 0; i < this.#steps.length; i++) {
      const [s, y] = [this.#steps[i]!, this.#changes[i]!];
      addScaled(direction, s, alphas[i]! - dot(y, direction) / dot(s, y));
    }
    if (dot(direction, gradient) < 0) return direction;
    this.forget();
    return gradient.map((x) => -x);
  }

  /** Books a step and what it did to the gradient. */
  learn(step: Float64Array, change: Float64Array): void {
    if (dot(step, change) <= 1e-12 * Math.sqrt(dot(step, step) * dot(change, change))) return;
    this.#steps.push(step);
    this.#changes.push(change);
    if (this.#steps.length > PAIRS) {
      this.#steps.shift();
      this.#changes.shift();
    }
  }

  forget(): void {
    this.#steps.length = 0;
    this.#changes.length = 0;
  }
}

export function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i]! * b[i]!;
  return sum;
}

function addScaled(a: Float64Array, b: Float64Array, scale: number): void {
  for (let i = 0; i < a.length; i++) a[i]! += scale * b[i]!;
}

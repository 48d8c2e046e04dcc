import type { GateKind, GateSink } from '../gates/machine';

/**
 * State vector of at most 14 wires as a plain array of amplitudes: slow, obvious, and written on other lines of
 * thought than {@link SparseState}, which it checks. Every gate is a small matrix applied over all indices.
 * Measurements are not simulated: `UNAND` is the inverse of `AND`, which is what its two branches amount to.
 */
export class DenseState implements GateSink {
  readonly wires: number;
  readonly re: Float64Array;
  readonly im: Float64Array;

  constructor(wires: number, basisState = 0) {
    if (wires > 14) throw new RangeError(`${wires} wires; a dense state is meant for at most 14`);
    this.wires = wires;
    this.re = new Float64Array(2 ** wires);
    this.im = new Float64Array(2 ** wires);
    this.re[basisState] = 1;
  }

  gate(kind: GateKind, a: number, b: number, c: number, condition: number): void {
    if (condition >= 0) throw new Error('a dense state has no classical bits');
    const r = Math.SQRT1_2;
    switch (kind) {
      case 'X':
        this.#apply([], a, [0, 0, 1, 0, 1, 0, 0, 0]);
        break;
      case 'H':
        this.#apply([], a, [r, 0, r, 0, r, 0, -r, 0]);
        break;
      case 'Z':
        this.#apply([], a, [1, 0, 0, 0, 0, 0, -1, 0]);
        break;
      case 'S':
        this.#apply([], a, [1, 0, 0, 0, 0, 0, 0, 1]);
        break;
      case 'SDG':
        this.#apply([], a, [1, 0, 0, 0, 0, 0, 0, -1]);
        break;
      case 'T':
        this.#apply([], a, [1, 0, 0, 0, 0, 0, r, r]);
        break;
      case 'TDG':
        this.#apply([], a, [1, 0, 0, 0, 0, 0, r, -r]);
        break;
      case 'CX':
        this.#apply([a], b, [0, 0, 1, 0, 1, 0, 0, 0]);
        break;
      case 'CZ':
        this.#apply([a], b, [1, 0, 0, 0, 0, 0, -1, 0]);
        break;
      case 'SWAP':
        for (const [x, y] of [
          [a, b],
          [b, a],
          [a, b],
        ] as const) {
          this.#apply([x], y, [0, 0, 1, 0, 1, 0, 0, 0]);
        }
        break;
      case 'CCX':
      case 'AND':
      case 'UNAND':
        this.#apply([a, b], c, [0, 0, 1, 0, 1, 0, 0, 0]);
        break;
      case 'CCZ':
        this.#apply([a, b], c, [1, 0, 0, 0, 0, 0, -1, 0]);
        break;
    }
  }

  rotateZ(wire: number, angle: number): void {
    const c = Math.cos(angle / 2);
    const s = Math.sin(angle / 2);
    this.#apply([], wire, [c, -s, 0, 0, 0, 0, c, s]);
  }

  measureX(): void {
    throw new Error('a dense state does not measure');
  }

  allocate(): void {}

  release(): void {}

  enter(): void {}

  leave(): void {}

  /** `m` = [re00, im00, re01, im01, re10, im10, re11, im11] on `target` where all controls are 1. */
  #apply(controls: readonly number[], target: number, m: readonly number[]): void {
    const bit = 2 ** target;
    for (let i = 0; i < this.re.length; i++) {
      if ((i & bit) !== 0 || controls.some((w) => ((i >> w) & 1) === 0)) continue;
      const j = i | bit;
      const [x, xi, y, yi] = [this.re[i]!, this.im[i]!, this.re[j]!, this.im[j]!];
      this.re[i] = m[0]! * x - m[1]! * xi + m[2]! * y - m[3]! * yi;
      this.im[i] = m[0]! * xi + m[1]! * x + m[2]! * yi + m[3]! * y;
      this.re[j] = m[4]! * x - m[5]! * xi + m[6]! * y - m[7]! * yi;
      this.im[j] = m[4]! * xi + m[5]! * x + m[6]! * yi + m[7]! * y;
    }
  }
}

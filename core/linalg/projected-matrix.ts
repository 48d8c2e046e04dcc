import { hermitianEigen } from './hermitian';
import type { Planes } from './planes';
import { symmetricEigen } from './symmetric';
import type { HermitianEigen } from './types';

/** T_ij = ⟨v_i|H|v_j⟩ for a growing basis, kept so that only new elements are ever computed. */
export class ProjectedMatrix {
  readonly #capacity: number;
  readonly #re: Float64Array;
  readonly #im: Float64Array;

  constructor(capacity: number, complex: boolean) {
    this.#capacity = capacity;
    this.#re = new Float64Array(capacity * capacity);
    this.#im = new Float64Array(complex ? capacity * capacity : 0);
  }

  /** Adds columns size…size+fresh from their overlaps, (size+fresh)×fresh, with all basis vectors. */
  append(size: number, fresh: number, columns: Planes): void {
    for (let i = 0; i < size + fresh; i++) {
      for (let j = 0; j < fresh; j++) {
        const upper = i * this.#capacity + size + j;
        const lower = (size + j) * this.#capacity + i;
        this.#re[upper] = this.#re[lower] = columns.re[i * fresh + j];
        if (this.#im.length > 0) {
          this.#im[upper] = columns.im[i * fresh + j];
          this.#im[lower] = -columns.im[i * fresh + j];
        }
      }
    }
  }

  /** The basis was replaced by the first `keep` Ritz vectors, with these values. */
  restart(values: Float64Array, keep: number): void {
    this.#re.fill(0);
    this.#im.fill(0);
    for (let i = 0; i < keep; i++) this.#re[i * (this.#capacity + 1)] = values[i];
  }

  eigen(size: number): HermitianEigen {
    const re = this.#leading(this.#re, size);
    if (this.#im.length > 0) return hermitianEigen({ n: size, re, im: this.#leading(this.#im, size) });
    const { values, vectors } = symmetricEigen(re, size);
    return { n: size, values, re: vectors, im: new Float64Array(0) };
  }

  #leading(plane: Float64Array, size: number): Float64Array {
    const out = new Float64Array(size * size);
    for (let i = 0; i < size; i++) {
      out.set(plane.subarray(i * this.#capacity, i * this.#capacity + size), i * size);
    }
    return out;
  }
}

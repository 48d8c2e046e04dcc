import { type SpatialHamiltonian, type SpinHamiltonian, toSpinOrbitals } from '../hamiltonian';
import { symmetricPair } from '../integrals/integral-set';

/** (PQ|RS) over spin orbitals 2p + σ or spinors, read into `re` and `im`: no allocation in the loops over excitations. */
export interface ModeIntegrals {
  readonly modes: number;
  re: number;
  im: number;
  read(P: number, Q: number, R: number, S: number): void;
}

export function modeIntegrals(hamiltonian: SpinHamiltonian): ModeIntegrals {
  if (hamiltonian.kind === 'spatial') return new SpatialModes(hamiltonian);
  const { spinors: m, g } = hamiltonian;
  return {
    modes: m,
    re: 0,
    im: 0,
    read(P, Q, R, S) {
      const i = ((P * m + Q) * m + R) * m + S;
      this.re = g.re[i]!;
      this.im = g.im[i]!;
    },
  };
}

/** Σ_μν g^μν_pqrs σ^μ ⊗ σ^ν, element by element of the two spin matrices. */
class SpatialModes implements ModeIntegrals {
  readonly modes: number;
  re = 0;
  im = 0;
  readonly #charge: Float64Array | null;
  readonly #spinSpin: Float64Array | null;
  readonly #same: Float64Array | null;
  readonly #other: Float64Array | null;
  readonly #otherScale: number;
  readonly #npair: number;
  readonly #nanti: number;

  constructor({ orbitals: n, g }: SpatialHamiltonian) {
    this.modes = 2 * n;
    this.#charge = g.charge;
    this.#spinSpin = g.spinSpin;
    this.#same = g.spinOrbit?.same ?? null;
    const other = g.spinOrbit?.other ?? null;
    this.#other = other instanceof Float64Array ? other : this.#same;
    this.#otherScale = other === null || other instanceof Float64Array ? 1 : other.timesSame;
    this.#npair = (n * (n + 1)) / 2;
    this.#nanti = (n * (n - 1)) / 2;
  }

  read(P: number, Q: number, R: number, S: number): void {
    const flips = ((P ^ Q) & 1) + 2 * ((R ^ S) & 1);
    if (flips === 2) {
      // (PQ|RS) = (RS|PQ).
      this.read(R, S, P, Q);
      return;
    }
    const [p, q, r, s] = [P >> 1, Q >> 1, R >> 1, S >> 1];
    // σ^z of the diagonal elements, σ^y = −i·sign of the others.
    const first = P & 1 ? -1 : 1;
    const second = R & 1 ? -1 : 1;
    if (flips === 0) {
      this.re = this.#chargeOf(p, q, r, s) + first * second * this.#spin(5, p, q, r, s);
      this.im = first * this.#orbit(2, p, q, r, s) + second * this.#orbit(2, r, s, p, q);
    } else if (flips === 1) {
      this.re = first * this.#orbit(1, p, q, r, s) + second * this.#spin(2, p, q, r, s);
      this.im = this.#orbit(0, p, q, r, s) - first * second * this.#spin(4, p, q, r, s);
    } else {
      this.re = this.#spin(0, p, q, r, s) - first * second * this.#spin(3, p, q, r, s);
      this.im = -(first + second) * this.#spin(1, p, q, r, s);
    }
  }

  #chargeOf(p: number, q: number, r: number, s: number): number {
    return this.#charge === null ? 0 : this.#charge[symmetricPair(symmetricPair(p, q), symmetricPair(r, s))]!;
  }

  /** Component among xx,xy,xz,yy,yz,zz. */
  #spin(component: number, p: number, q: number, r: number, s: number): number {
    const values = this.#spinSpin;
    if (values === null) return 0;
    return values[(component * values.length) / 6 + symmetricPair(symmetricPair(p, q), symmetricPair(r, s))]!;
  }

  /** Im g^{k0}_pqrs = same_{pq,rs} + other_{rs,pq}, k from 0. */
  #orbit(k: number, p: number, q: number, r: number, s: number): number {
    if (this.#same === null) return 0;
    return (
      this.#element(this.#same, k, p, q, r, s) + this.#otherScale * this.#element(this.#other!, k, r, s, p, q)
    );
  }

  #element(w: Float64Array, k: number, p: number, q: number, r: number, s: number): number {
    if (p === q) return 0;
    const pair = p > q ? (p * (p - 1)) / 2 + q : (q * (q - 1)) / 2 + p;
    const value = w[(k * this.#nanti + pair) * this.#npair + symmetricPair(r, s)]!;
    return p > q ? value : -value;
  }
}

/** A determinant's expectation value and its Fock operator F_PQ = h_PQ + Σ_R n_R [(PQ|RR) − (PR|RQ)], hartree. */
export interface FockOperator {
  readonly energy: number;
  /** F_PP of all modes. */
  readonly diagonal: Float64Array;
  /** |F_ia|², filled modes by empty ones. */
  readonly couplings: Float64Array;
}

/** The part of the Fock operator that perturbation theory asks for, from O(modes·η²) integrals. */
export function fockOperator(
  hamiltonian: SpinHamiltonian,
  integrals: ModeIntegrals,
  filled: readonly number[],
  empty: readonly number[],
): FockOperator {
  const m = integrals.modes;
  const h = hamiltonian.kind === 'spatial' ? toSpinOrbitals(hamiltonian.h) : hamiltonian.h;
  let [re, im] = [0, 0];
  const element = (P: number, Q: number): void => {
    re = h.re[P * m + Q]!;
    im = h.im[P * m + Q]!;
    for (const R of filled) {
      integrals.read(P, Q, R, R);
      re += integrals.re;
      im += integrals.im;
      integrals.read(P, R, R, Q);
      re -= integrals.re;
      im -= integrals.im;
    }
  };
  const diagonal = Float64Array.from({ length: m }, (_, P) => {
    element(P, P);
    return re;
  });
  let energy = hamiltonian.constant;
  for (const i of filled) energy += 0.5 * (h.re[i * m + i]! + diagonal[i]!);
  const couplings = new Float64Array(filled.length * empty.length);
  filled.forEach((i, x) => {
    empty.forEach((a, z) => {
      element(i, a);
      couplings[x * empty.length + z] = re * re + im * im;
    });
  });
  return { energy, diagonal, couplings };
}

import type { SparseProgram, TermKind } from '../encode';
import {
  type Mu,
  type OrbitalWindow,
  PAULI_ENTRIES,
  type SpinHamiltonian,
  spinorFromStoredForm,
} from '../hamiltonian';
import type { JobContext } from '../job';

/** Rows between two checkpoints. */
const AT_ONCE = 2 ** 16;

/**
 * The Hamiltonian that a sparse program stands for, restricted to a window of orbitals as windowOfProgram does it for
 * triplet programs, row by row: rows are many, but have few elements each.
 *
 * With {…} normal ordered against the frozen density γ and A = Σ a_PQ a†_P a_Q − ½ tr a, likewise B,
 * AB + BA = 2αβ + 2α{B} + 2β{A} + 2{AB} + {a(1 − 2γ)b + b(1 − 2γ)a} + tr[γa(1 − γ)b + γb(1 − γ)a], α = tr γa − ½ tr a.
 *
 * @param window - orbitals 0-based. A window of all orbitals rebuilds the whole Hamiltonian of a small system.
 */
export async function windowOfSparseProgram(
  program: SparseProgram,
  window: OrbitalWindow,
  context: JobContext,
): Promise<SpinHamiltonian> {
  const target = new SparseWindow(program, window);
  const count = program.weights.length;
  for (let row = 0; row < count; row++) {
    if (row % AT_ONCE === 0) {
      context.report('window of the encoding', row, count);
      await context.checkpoint();
    }
    target.addRow(row);
  }
  const { constant, h, g } = target;
  return spinorFromStoredForm({
    spinors: 2 * window.orbitals.length,
    electrons: window.electrons,
    constant,
    h,
    g,
  });
}

/** x + iy at (P, Q) of a Hermitian matrix over modes. */
interface Element {
  readonly P: number;
  readonly Q: number;
  readonly x: number;
  readonly y: number;
}

class SparseWindow {
  constant: number;
  readonly h: { readonly re: Float64Array; readonly im: Float64Array };
  readonly g: { readonly re: Float64Array; readonly im: Float64Array };
  readonly #program: SparseProgram;
  readonly #size: number;
  /** Place in the window of each mode, −1 outside, and γ. */
  readonly #place: Int32Array;
  readonly #gamma: Float64Array;

  constructor(program: SparseProgram, { orbitals, occupations }: OrbitalWindow) {
    const modes = 2 * program.orbitals;
    const size = 2 * orbitals.length;
    this.#program = program;
    this.#size = size;
    this.#place = Int32Array.from({ length: modes }, (_, P) => {
      const at = orbitals.indexOf(P >> 1);
      return at < 0 ? -1 : 2 * at + (P & 1);
    });
    this.#gamma = Float64Array.from({ length: modes }, (_, P) =>
      this.#place[P]! < 0 ? occupations[P >> 1]! / 2 : 0,
    );
    this.constant = program.constant;
    this.h = { re: new Float64Array(size ** 2), im: new Float64Array(size ** 2) };
    this.g = { re: new Float64Array(size ** 4), im: new Float64Array(size ** 4) };
  }

  addRow(row: number): void {
    const { kinds, kindOf, orbitalsOf, weights, negative } = this.#program;
    const [p, q, r, s] = [0, 1, 2, 3].map((i) => orbitalsOf[4 * row + i]!) as [
      number,
      number,
      number,
      number,
    ];
    const kind = kinds[kindOf[row]!]!;
    const weight = negative[row] ? -weights[row]! : weights[row]!;
    if (kind.form === 'pairs' && kind.nu === null) {
      this.#addOneBody(elements(kind.antisymmetric, kind.mu, p, q), weight);
      return;
    }
    const contracts = p === q || r === s || p === r || p === s || q === r || q === s;
    const inside = [p, q, r, s].every((orbital) => this.#place[2 * orbital]! >= 0);
    if (contracts || inside) this.#addProducts(kind, [p, q, r, s], weight);
  }

  #addProducts(
    kind: TermKind,
    [p, q, r, s]: readonly [number, number, number, number],
    weight: number,
  ): void {
    if (kind.form === 'strings') {
      const bit = (i: number) => (kind.flags >>> i) & 1;
      const [s1, s2, t, r1, r2] = [bit(0), bit(1), bit(2), bit(3), bit(4)];
      const flips = s1 ^ s2 ^ r1 ^ r2;
      for (const sigma of [0, 1]) {
        const first = modeElements(2 * p + sigma, 2 * q + (sigma ^ s1), r1);
        const second = modeElements(2 * r + (sigma ^ t), 2 * s + (sigma ^ t ^ s2), r2);
        this.#addAnticommutator(first, second, ((flips & sigma ? -1 : 1) * weight) / 4);
      }
      return;
    }
    const { antisymmetric, mu, shared, exchanged } = kind;
    const nu = kind.nu!;
    const { otherShare, otherSign } = this.#program;
    const own = shared ? 1 - otherShare : exchanged ? 0.5 : 1;
    const other = shared ? otherSign * otherShare : exchanged ? 0.5 : 0;
    const add = (first: Mu, second: Mu, share: number) =>
      this.#addAnticommutator(
        elements(antisymmetric, first, p, q),
        elements(false, second, r, s),
        (share * weight) / 2,
      );
    add(mu, nu, own);
    if (other !== 0) add(nu, mu, other);
  }

  /** w (AB + BA). */
  #addAnticommutator(a: readonly Element[], b: readonly Element[], w: number): void {
    const [alpha, beta] = [this.#mean(a), this.#mean(b)];
    this.constant += 2 * w * alpha * beta;
    if (alpha !== 0) this.#addRestricted(b, 2 * w * alpha);
    if (beta !== 0) this.#addRestricted(a, 2 * w * beta);
    for (const first of a) {
      for (const second of b) {
        this.#addPair(first, second, w);
        this.#addContraction(first, second, w);
        this.#addContraction(second, first, w);
      }
    }
  }

  #addOneBody(a: readonly Element[], w: number): void {
    this.constant += w * this.#mean(a);
    this.#addRestricted(a, w);
  }

  /** tr γa − ½ tr a. */
  #mean(a: readonly Element[]): number {
    let sum = 0;
    for (const { P, Q, x } of a) if (P === Q) sum += (this.#gamma[P]! - 0.5) * x;
    return sum;
  }

  #addRestricted(a: readonly Element[], w: number): void {
    for (const { P, Q, x, y } of a) this.#addTo(this.#place[P]!, this.#place[Q]!, w * x, w * y);
  }

  #addTo(i: number, j: number, x: number, y: number): void {
    if (i < 0 || j < 0) return;
    this.h.re[i * this.#size + j]! += x;
    this.h.im[i * this.#size + j]! += y;
  }

  /** 2w {a b} is ½ g with 2w of both orders. */
  #addPair(a: Element, b: Element, w: number): void {
    const m = this.#size;
    const [P, Q, R, S] = [a.P, a.Q, b.P, b.Q].map((mode) => this.#place[mode]!) as [
      number,
      number,
      number,
      number,
    ];
    if (P < 0 || Q < 0 || R < 0 || S < 0) return;
    const [x, y] = [2 * w * (a.x * b.x - a.y * b.y), 2 * w * (a.x * b.y + a.y * b.x)];
    for (const at of [((P * m + Q) * m + R) * m + S, ((R * m + S) * m + P) * m + Q]) {
      this.g.re[at]! += x;
      this.g.im[at]! += y;
    }
  }

  /** w a_PR (1 − 2γ_R) b_RQ, and the trace of it where P = Q. */
  #addContraction(a: Element, b: Element, w: number): void {
    if (a.Q !== b.P) return;
    const gamma = this.#gamma;
    const [x, y] = [w * (a.x * b.x - a.y * b.y), w * (a.x * b.y + a.y * b.x)];
    const share = 1 - 2 * gamma[a.Q]!;
    this.#addTo(this.#place[a.P]!, this.#place[b.Q]!, share * x, share * y);
    if (a.P === b.Q) this.constant += gamma[a.P]! * (1 - gamma[a.Q]!) * x;
  }
}

/** ½(T_pq + T_qp) of a symmetric element, (i/2)(T_pq − T_qp) of an antisymmetric one, T = Σ (σ^μ)_στ a†_pσ a_qτ. */
function elements(antisymmetric: boolean, mu: Mu, p: number, q: number): Element[] {
  return PAULI_ENTRIES[mu]!.flatMap(({ row, column, re: x, im: y }) =>
    antisymmetric
      ? [
          { P: 2 * p + row, Q: 2 * q + column, x: -y / 2, y: x / 2 },
          { P: 2 * q + row, Q: 2 * p + column, x: y / 2, y: -x / 2 },
        ]
      : [
          { P: 2 * p + row, Q: 2 * q + column, x: x / 2, y: y / 2 },
          { P: 2 * q + row, Q: 2 * p + column, x: x / 2, y: y / 2 },
        ],
  );
}

/** a†_P a_Q + a†_Q a_P, or i(a†_P a_Q − a†_Q a_P). */
const modeElements = (P: number, Q: number, isReal: number): Element[] =>
  isReal === 1
    ? [
        { P, Q, x: 1, y: 0 },
        { P: Q, Q: P, x: 1, y: 0 },
      ]
    : [
        { P, Q, x: 0, y: 1 },
        { P: Q, Q: P, x: 0, y: -1 },
      ];

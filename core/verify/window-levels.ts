import type { TripletProgram, VectorProducts } from '../encode';
import {
  type OrbitalWindow,
  type SpinHamiltonian,
  spinorFromStoredForm,
  toSpinOrbitals,
} from '../hamiltonian';
import type { JobContext } from '../job';
import { type ComplexMatrix, symmetricEigen } from '../linalg';
import { operatorOfRows, type RowsOperator } from './energy-error-rows';
import { exactSpectrum } from './spectrum';

/** Items between two checkpoints. */
const AT_ONCE = 8;

/**
 * The Hamiltonian that a program of rows stands for, restricted to a window of orbitals as restrictToWindow does it with
 * integrals: the others are frozen with their occupations. Rows are enough: g is formed over the window alone.
 *
 * With {…} normal ordered against the frozen density γ, (L̂ − τ)² = ℓ² + 2ℓ{L̂} + {L̂L̂} + {L(1 − 2γ)L} + tr γL(1 − γ)L,
 * ℓ = tr γL − τ (generalised Wick theorem).
 *
 * @param window - orbitals 0-based. A window of all orbitals rebuilds the whole Hamiltonian of a small system.
 * @returns over the window's 2m spin orbitals, 2p + σ; (2m)⁴ complex numbers, so m is a dozen at most.
 */
export async function windowOfProgram(program: TripletProgram, window: OrbitalWindow, context: JobContext) {
  const n = program.orbitals;
  const size = 2 * window.orbitals.length;
  const target = new WindowSum(n, window);
  const one = spinMatrix(operatorOfRows(n, program.oneBody, 0, 1));
  target.addOneBody(one);
  target.constant += program.constant;
  for (const [t, { rows, lambda, paired, sign }] of program.items.entries()) {
    if (t % AT_ONCE === 0) {
      context.report('window of the encoding', t, program.items.length);
      await context.checkpoint();
    }
    for (const [face, total] of lambda.entries()) {
      const weight = rows.reduce((sum, row) => sum + row.faces[face]!.weight, 0);
      if (total === 0 || weight === 0) continue;
      if (!paired) {
        const square = operatorOfRows(n, rows, face, 1 / weight);
        target.addSquare(spinMatrix(square), 4 * sign * total);
        target.constant += sign * total * (2 * square.scalar ** 2 - 1);
        continue;
      }
      // Two squares of opposite sign: their constants cancel.
      const y = spinMatrix(operatorOfRows(n, rows, face, 1 / weight, 'S'));
      const x = spinMatrix(operatorOfRows(n, rows, face, 1 / weight, 'A'));
      target.addSquare(sum(y, x, 1), 2 * sign * total);
      target.addSquare(sum(y, x, -1), -2 * sign * total);
    }
  }
  if (program.products) addProducts(target, n, program.products);
  const { constant, h, g } = target;
  return spinorFromStoredForm({ spinors: size, electrons: window.electrons, constant, h, g });
}

/** Accumulates constant, h and g of the window. */
export class WindowSum {
  constant = 0;
  readonly h: { readonly re: Float64Array; readonly im: Float64Array };
  readonly g: { readonly re: Float64Array; readonly im: Float64Array };
  /** Spin orbitals of the window, and γ of all. */
  readonly #modes: readonly number[];
  readonly #gamma: Float64Array;

  constructor(n: number, { orbitals, occupations }: OrbitalWindow) {
    this.#modes = orbitals.flatMap((p) => [2 * p, 2 * p + 1]);
    this.#gamma = Float64Array.from({ length: 2 * n }, (_, P) =>
      orbitals.includes(P >> 1) ? 0 : occupations[P >> 1]! / 2,
    );
    const m = this.#modes.length;
    this.h = { re: new Float64Array(m ** 2), im: new Float64Array(m ** 2) };
    this.g = { re: new Float64Array(m ** 4), im: new Float64Array(m ** 4) };
  }

  /** L̂ − ½ tr L. */
  addOneBody(l: ComplexMatrix): void {
    this.constant += this.#mean(l);
    this.#addRestricted(l, 1);
  }

  /** ½ w (L̂ − ½ tr L)². */
  addSquare(l: ComplexMatrix, w: number): void {
    const { n: dim, re, im } = l;
    const gamma = this.#gamma;
    const mean = this.#mean(l);
    let variance = 0;
    for (let P = 0; P < dim; P++) {
      if (gamma[P] === 0) continue;
      for (let Q = 0; Q < dim; Q++) {
        const i = P * dim + Q;
        variance += gamma[P]! * (1 - gamma[Q]!) * (re[i]! ** 2 + im[i]! ** 2);
      }
    }
    this.constant += 0.5 * w * (mean * mean + variance);
    this.#addRestricted(l, w * mean);
    const { h, g } = this;
    const modes = this.#modes;
    const m = modes.length;
    const own = { n: m, re: new Float64Array(m * m), im: new Float64Array(m * m) };
    const filled: number[] = [];
    for (let a = 0; a < m; a++) {
      const row = modes[a]! * dim;
      for (let b = 0; b < m; b++) {
        const column = modes[b]! * dim;
        const at = a * m + b;
        own.re[at] = re[row + modes[b]!]!;
        own.im[at] = im[row + modes[b]!]!;
        if (own.re[at] !== 0 || own.im[at] !== 0) filled.push(at);
        // Σ_R L_aR (1 − 2γ_R) L*_bR, L Hermitian.
        let [x, y] = [0, 0];
        for (let R = 0; R < dim; R++) {
          const share = 1 - 2 * gamma[R]!;
          const [ar, ai, br, bi] = [re[row + R]!, im[row + R]!, re[column + R]!, im[column + R]!];
          x += share * (ar * br + ai * bi);
          y += share * (ai * br - ar * bi);
        }
        h.re[at]! += 0.5 * w * x;
        h.im[at]! += 0.5 * w * y;
      }
    }
    for (const i of filled) {
      const [x, y] = [w * own.re[i]!, w * own.im[i]!];
      const base = i * m * m;
      for (const j of filled) {
        g.re[base + j]! += x * own.re[j]! - y * own.im[j]!;
        g.im[base + j]! += x * own.im[j]! + y * own.re[j]!;
      }
    }
  }

  /** tr γL − ½ tr L. */
  #mean({ n, re }: ComplexMatrix): number {
    let sum = 0;
    for (let P = 0; P < n; P++) sum += (this.#gamma[P]! - 0.5) * re[P * n + P]!;
    return sum;
  }

  #addRestricted({ n, re, im }: ComplexMatrix, scale: number): void {
    const m = this.#modes.length;
    this.#modes.forEach((P, a) => {
      this.#modes.forEach((Q, b) => {
        this.h.re[a * m + b]! += scale * re[P * n + Q]!;
        this.h.im[a * m + b]! += scale * im[P * n + Q]!;
      });
    });
  }
}

/** Σ C_mn M_m M_n as squares of M(y) = Σ y_m M_m over the eigenvectors y of C. */
function addProducts(target: WindowSum, n: number, products: VectorProducts): void {
  const { vectors, first, second, lambda, sign } = products;
  const count = vectors.length;
  const c = new Float64Array(count * count);
  for (const [i, own] of lambda.entries()) {
    const [a, b] = [first[i]!, second[i]!];
    const x = sign[i]! * own;
    if (a === b) target.constant -= x;
    // Twice ½ on the diagonal: 2M² − 1.
    const share = a === b ? x : x / 2;
    c[a * count + b]! += share;
    c[b * count + a]! += share;
  }
  const { values, vectors: y } = symmetricEigen(c, count);
  for (const [k, value] of values.entries()) {
    if (value === 0) continue;
    const rows = vectors.map((u, m) => ({
      kind: 'S' as const,
      u,
      v: u,
      faces: [{ mu: 0 as const, weight: y[k * count + m]!, sign: 1 as const }],
    }));
    target.addSquare(spinMatrix(operatorOfRows(n, rows, 0, 1)), 2 * value);
  }
}

function spinMatrix({ even, odd }: RowsOperator): ComplexMatrix {
  return sum(toSpinOrbitals(even), toSpinOrbitals(odd), 1);
}

function sum(a: ComplexMatrix, b: ComplexMatrix, scale: number): ComplexMatrix {
  return {
    n: a.n,
    re: a.re.map((x, i) => x + scale * b.re[i]!),
    im: a.im.map((x, i) => x + scale * b.im[i]!),
  };
}

/** Lowest levels of two Hamiltonians of the same sector side by side, hartree. */
export interface LevelShifts {
  readonly given: Float64Array;
  readonly changed: Float64Array;
  /** Largest difference of a level in ascending order. */
  readonly largest: number;
  /** Largest difference of a distance to the lowest level: what splittings and gaps are off by. */
  readonly largestGap: number;
  /** Determinants of the sector. */
  readonly dim: number;
  /** What the diagonalisations themselves may be off by. */
  readonly errorBound: number;
}

/**
 * Exact diagonalisation of both.
 * @throws InputError `sector-too-large`
 */
export async function levelShifts(
  given: SpinHamiltonian,
  changed: SpinHamiltonian,
  states: number,
  context: JobContext,
): Promise<LevelShifts> {
  const [a, b] = [
    await exactSpectrum(given, { states }, context),
    await exactSpectrum(changed, { states }, context),
  ];
  let [largest, largestGap] = [0, 0];
  for (const [i, value] of a.values.entries()) {
    const shift = b.values[i]! - value;
    largest = Math.max(largest, Math.abs(shift));
    largestGap = Math.max(largestGap, Math.abs(shift - (b.values[0]! - a.values[0]!)));
  }
  return {
    given: a.values,
    changed: b.values,
    largest,
    largestGap,
    dim: a.dim,
    errorBound: a.errorBound + b.errorBound,
  };
}

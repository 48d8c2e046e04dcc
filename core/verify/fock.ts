import { MUS, type SpatialHamiltonian, type SpinorHamiltonian, tensorElement } from '../hamiltonian';
import type { ComplexMatrix } from '../linalg/types';

/*
 * Full Fock-space matrices by literal Jordan–Wigner operators: no Slater–Condon rules, no symmetry, nothing
 * shared with the fast routes, so that these matrices can judge them. Basis state = bit string, bit P set
 * where spin orbital P = 2p + σ is occupied, |b⟩ = Π_P (a†_P)^{b_P} |0⟩ with ascending P from left to right.
 */

/** The matrix under construction, 2^M × 2^M. */
interface Accumulator extends ComplexMatrix {
  readonly modes: number;
}

/** Ladder operator on one basis state: [sign, state], sign 0 where it annihilates the state. */
function ladder(create: boolean, mode: number, state: number): readonly [number, number] {
  const bit = 1 << mode;
  if (((state & bit) !== 0) === create) return [0, 0];
  let parity = 0;
  for (let below = state & (bit - 1); below !== 0; below &= below - 1) parity ^= 1;
  return [parity ? -1 : 1, state ^ bit];
}

/** Adds (x + iy) · Π operators; each operator is [creates, mode], the rightmost acts first. */
function addProduct(
  target: Accumulator,
  operators: readonly (readonly [boolean, number])[],
  x: number,
  y: number,
): void {
  if (x === 0 && y === 0) return;
  for (let column = 0; column < target.n; column++) {
    let sign = 1;
    let state = column;
    for (let i = operators.length - 1; i >= 0 && sign !== 0; i--) {
      const [factor, next] = ladder(operators[i]![0], operators[i]![1], state);
      sign *= factor;
      state = next;
    }
    if (sign === 0) continue;
    target.re[state * target.n + column]! += sign * x;
    target.im[state * target.n + column]! += sign * y;
  }
}

function accumulator(modes: number, constant: number): Accumulator {
  if (modes > 8) throw new RangeError(`dense Fock space of ${modes} modes asked for; at most 8`);
  const n = 1 << modes;
  const re = new Float64Array(n * n);
  for (let i = 0; i < n; i++) re[i * n + i] = constant;
  return { modes, n, re, im: new Float64Array(n * n) };
}

const SIGMA: readonly (readonly (readonly [number, number, number, number])[])[] = [
  // Entries of σ^μ that are not zero: [row spin, column spin, re, im].
  [
    [0, 0, 1, 0],
    [1, 1, 1, 0],
  ],
  [
    [0, 1, 1, 0],
    [1, 0, 1, 0],
  ],
  [
    [0, 1, 0, -1],
    [1, 0, 0, 1],
  ],
  [
    [0, 0, 1, 0],
    [1, 1, -1, 0],
  ],
];

/** Which of the two equal forms is evaluated. */
export type Form = 'stored' | 'product';

/**
 * H on the whole Fock space of N ≤ 4 spatial orbitals, dense, from the definition
 * T^μ_pq = Σ_στ (σ^μ)_στ a†_pσ a_qτ, evaluated literally.
 *
 * @param form - `stored`: h and :TT: (normal ordered); `product`: k and plain products TT.
 * @returns 4^N × 4^N, Hermitian. Hartree.
 */
export function fockMatrix(hamiltonian: SpatialHamiltonian, form: Form): ComplexMatrix {
  const { orbitals: n, g } = hamiltonian;
  const target = accumulator(2 * n, hamiltonian.constant);
  const oneBody = form === 'stored' ? hamiltonian.h : hamiltonian.k;
  for (const mu of MUS) {
    // Even sector: plane 0 is real, planes 1…3 are coefficients of i.
    const imaginary = (mu === 0) === (oneBody.sector === 'odd');
    for (let p = 0; p < n; p++) {
      for (let q = 0; q < n; q++) {
        const value = oneBody.planes[(mu * n + p) * n + q]!;
        for (const [a, b, x, y] of SIGMA[mu]!) {
          const operators = [
            [true, 2 * p + a],
            [false, 2 * q + b],
          ] as const;
          if (imaginary) addProduct(target, operators, -y * value, x * value);
          else addProduct(target, operators, x * value, y * value);
        }
      }
    }
  }
  for (const mu of MUS) {
    for (const nu of MUS) {
      for (let i = 0; i < n ** 4; i++) {
        const [p, q, r, s] = [
          Math.floor(i / n ** 3),
          Math.floor(i / n ** 2) % n,
          Math.floor(i / n) % n,
          i % n,
        ];
        const [x, y] = tensorElement(g, n, mu, nu, p, q, r, s);
        if (x === 0 && y === 0) continue;
        for (const [a, b, ar, ai] of SIGMA[mu]!) {
          for (const [c, d, cr, ci] of SIGMA[nu]!) {
            const [sr, si] = [ar * cr - ai * ci, ar * ci + ai * cr];
            const [P, Q, R, S] = [2 * p + a, 2 * q + b, 2 * r + c, 2 * s + d];
            addTwoBody(target, form, P, Q, R, S, 0.5 * (sr * x - si * y), 0.5 * (sr * y + si * x));
          }
        }
      }
    }
  }
  return target;
}

function addTwoBody(
  target: Accumulator,
  form: Form,
  P: number,
  Q: number,
  R: number,
  S: number,
  x: number,
  y: number,
): void {
  const [P1, R1, S0, Q0] = [
    [true, P],
    [true, R],
    [false, S],
    [false, Q],
  ] as const;
  addProduct(target, form === 'stored' ? [P1, R1, S0, Q0] : [P1, Q0, R1, S0], x, y);
}

/** H of a spinor Hamiltonian on the whole Fock space of M ≤ 8 modes, dense, evaluated literally. Hartree. */
export function spinorFockMatrix(hamiltonian: SpinorHamiltonian, form: Form): ComplexMatrix {
  const { spinors: m, g } = hamiltonian;
  const target = accumulator(m, hamiltonian.constant);
  const oneBody = form === 'stored' ? hamiltonian.h : hamiltonian.k;
  for (let P = 0; P < m; P++) {
    for (let Q = 0; Q < m; Q++) {
      addProduct(
        target,
        [
          [true, P],
          [false, Q],
        ],
        oneBody.re[P * m + Q]!,
        oneBody.im[P * m + Q]!,
      );
      for (let R = 0; R < m; R++) {
        for (let S = 0; S < m; S++) {
          const i = ((P * m + Q) * m + R) * m + S;
          addTwoBody(target, form, P, Q, R, S, 0.5 * g.re[i]!, 0.5 * g.im[i]!);
        }
      }
    }
  }
  return target;
}

/**
 * Second-quantised one-body operator Σ_PQ M_PQ a†_P a_Q on the whole Fock space, dense.
 * @param matrix - M×M over spin orbitals, M ≤ 8.
 */
export function oneBodyFockMatrix(matrix: ComplexMatrix): ComplexMatrix {
  const m = matrix.n;
  const target = accumulator(m, 0);
  for (let P = 0; P < m; P++) {
    for (let Q = 0; Q < m; Q++) {
      addProduct(
        target,
        [
          [true, P],
          [false, Q],
        ],
        matrix.re[P * m + Q]!,
        matrix.im[P * m + Q]!,
      );
    }
  }
  return target;
}

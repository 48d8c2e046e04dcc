import { type SpatialHamiltonian, spinorForm } from '../hamiltonian';
import type { ComplexMatrix } from '../linalg';

/**
 * H among a determinant and all its single excitations, (1 + η(M − η)) states over M spin orbitals; hartree.
 *
 *     ⟨0|H|0⟩ = E,  ⟨0|H|Φ_j^b⟩ = F_jb,
 *     ⟨Φ_i^a|H|Φ_j^b⟩ = δ_ij δ_ab E + δ_ij F_ab − δ_ab F_ji + (ai|jb) − (ab|ji)
 *
 * with the Fock operator F_PQ = h_PQ + Σ_k [(PQ|kk) − (Pk|kQ)] (Slater–Condon rules; A. Szabo, N. S. Ostlund, Modern
 * Quantum Chemistry (1989), ch. 2 and 4, quoted from memory).
 *
 * @param occupied - 0 or 1 for each spin orbital 2p + σ
 */
export function singleExcitations(hamiltonian: SpatialHamiltonian, occupied: Uint8Array): ComplexMatrix {
  const { spinors: m, h, g, constant } = spinorForm(hamiltonian);
  const filled: number[] = [];
  const empty: number[] = [];
  for (const [P, x] of occupied.entries()) (x ? filled : empty).push(P);
  const at = (P: number, Q: number, R: number, S: number) => ((P * m + Q) * m + R) * m + S;
  const fock = { re: h.re.slice(), im: h.im.slice() };
  let energy = constant;
  for (const P of filled) energy += h.re[P * m + P]!;
  for (let P = 0; P < m; P++) {
    for (let Q = 0; Q < m; Q++) {
      for (const k of filled) {
        const [direct, exchange] = [at(P, Q, k, k), at(P, k, k, Q)];
        fock.re[P * m + Q]! += g.re[direct]! - g.re[exchange]!;
        fock.im[P * m + Q]! += g.im[direct]! - g.im[exchange]!;
      }
    }
  }
  for (const P of filled) energy += (fock.re[P * m + P]! - h.re[P * m + P]!) / 2;
  const states = filled.flatMap((i) => empty.map((a) => ({ i, a })));
  const n = 1 + states.length;
  const out = { n, re: new Float64Array(n * n), im: new Float64Array(n * n) };
  const put = (row: number, column: number, x: number, y: number) => {
    out.re[row * n + column] = x;
    out.im[row * n + column] = y;
  };
  put(0, 0, energy, 0);
  for (const [s, { i, a }] of states.entries()) {
    put(0, s + 1, fock.re[i * m + a]!, fock.im[i * m + a]!);
    put(s + 1, 0, fock.re[i * m + a]!, -fock.im[i * m + a]!);
    for (const [t, { i: j, a: b }] of states.entries()) {
      const [direct, exchange] = [at(a, i, j, b), at(a, b, j, i)];
      let x = g.re[direct]! - g.re[exchange]!;
      let y = g.im[direct]! - g.im[exchange]!;
      if (i === j) {
        x += fock.re[a * m + b]! + (a === b ? energy : 0);
        y += fock.im[a * m + b]!;
      }
      if (a === b) {
        x -= fock.re[j * m + i]!;
        y -= fock.im[j * m + i]!;
      }
      put(s + 1, t + 1, x, y);
    }
  }
  return out;
}

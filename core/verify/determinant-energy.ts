import {
  type Mu,
  type SpatialHamiltonian,
  type SpinHamiltonian,
  type SpinorHamiltonian,
  tensorElement,
} from '../hamiltonian';

/** Determinant energies over M modes: E(n) = constant + Σ_P e_P n_P + ½ Σ_PQ v_PQ n_P n_Q. Hartree. */
export interface DeterminantEnergies {
  readonly modes: number;
  readonly constant: number;
  readonly e: Float64Array;
  /** M×M symmetric, v_PQ = (PP|QQ) − (PQ|QP), zero on the diagonal. */
  readonly v: Float64Array;
}

/** The diagonal of H among determinants; O(N²) integrals, so also for large sets. */
export function determinantEnergies(hamiltonian: SpinHamiltonian): DeterminantEnergies {
  return hamiltonian.kind === 'spatial' ? spatialEnergies(hamiltonian) : spinorEnergies(hamiltonian);
}

function spinorEnergies({ spinors: m, constant, h, g }: SpinorHamiltonian): DeterminantEnergies {
  const e = new Float64Array(m);
  const v = new Float64Array(m * m);
  for (let P = 0; P < m; P++) {
    e[P] = h.re[P * m + P]!;
    for (let Q = 0; Q < m; Q++) {
      if (P === Q) continue;
      v[P * m + Q] = g.re[((P * m + P) * m + Q) * m + Q]! - g.re[((P * m + Q) * m + Q) * m + P]!;
    }
  }
  return { modes: m, constant, e, v };
}

function spatialEnergies({ orbitals: n, constant, h, g }: SpatialHamiltonian): DeterminantEnergies {
  const m = 2 * n;
  const e = new Float64Array(m);
  const v = new Float64Array(m * m);
  const element = (mu: Mu, nu: Mu, p: number, q: number, r: number, s: number) =>
    tensorElement(g, n, mu, nu, p, q, r, s)[0];
  for (let p = 0; p < n; p++) {
    e[2 * p] = h.planes[p * n + p]!;
    e[2 * p + 1] = h.planes[p * n + p]!;
    for (let q = 0; q < n; q++) {
      // Spin–orbit integrals have no diagonal: Im g_ppqq and the sum of both orders of Im g_pqqp vanish.
      const [charge, zz] = [element(0, 0, p, p, q, q), element(3, 3, p, p, q, q)];
      const [chargeX, zzX] = [element(0, 0, p, q, q, p), element(3, 3, p, q, q, p)];
      const flipX = element(1, 1, p, q, q, p) + element(2, 2, p, q, q, p);
      const alike = p === q ? 0 : charge + zz - chargeX - zzX;
      v[2 * p * m + 2 * q] = alike;
      v[(2 * p + 1) * m + 2 * q + 1] = alike;
      v[2 * p * m + 2 * q + 1] = charge - zz - flipX;
      v[(2 * p + 1) * m + 2 * q] = charge - zz - flipX;
    }
  }
  return { modes: m, constant, e, v };
}

export interface FoundDeterminant {
  readonly energy: number;
  readonly occupied: Uint8Array;
}

/**
 * A determinant of low (sign = 1) or high (sign = −1) energy by greedy filling and steepest single moves. Not
 * necessarily the extreme one, but its energy is an expectation value of H, so what follows from it is rigorous.
 *
 * @param electrons - fixed number of electrons, or null for any.
 */
export function extremeDeterminant(
  energies: DeterminantEnergies,
  electrons: number | null,
  sign: 1 | -1,
): FoundDeterminant {
  const { modes: m, constant, e, v } = energies;
  const occupied = new Uint8Array(m);
  /** Energy of adding an electron to P, or of what P's electron contributes. */
  const field = e.slice();
  let energy = constant;
  const toggle = (P: number) => {
    const step = occupied[P] ? -1 : 1;
    energy += step * field[P]!;
    occupied[P] = occupied[P] ? 0 : 1;
    for (let Q = 0; Q < m; Q++) field[Q]! += step * v[Q * m + P]!;
  };
  const best = (candidates: (P: number) => boolean, gain: (P: number) => number): number => {
    let found = -1;
    for (let P = 0; P < m; P++) {
      if (candidates(P) && (found < 0 || gain(P) < gain(found))) found = P;
    }
    return found;
  };
  // With a free number the filling runs to the end and the search goes on from the best state on the way:
  // repulsion makes the energy of filling neither fall nor rise steadily.
  const filled: number[] = [];
  let [bestEnergy, bestCount] = [energy, 0];
  for (let count = 0; count < (electrons ?? m); count++) {
    const P = best(
      (Q) => !occupied[Q],
      (Q) => sign * field[Q]!,
    );
    toggle(P);
    filled.push(P);
    if (sign * energy < sign * bestEnergy) [bestEnergy, bestCount] = [energy, count + 1];
  }
  if (electrons === null) while (filled.length > bestCount) toggle(filled.pop()!);
  for (;;) {
    // Steepest exchange of an electron, or addition or removal where the number is free.
    let [gain, from, to] = [-1e-12, -1, -1];
    for (let P = 0; P < m; P++) {
      if (electrons === null) {
        const single = sign * (occupied[P] ? -field[P]! : field[P]!);
        if (single < gain) [gain, from, to] = [single, P, -1];
      }
      if (!occupied[P]) continue;
      for (let Q = 0; Q < m; Q++) {
        if (occupied[Q]) continue;
        const exchange = sign * (field[Q]! - field[P]! - v[P * m + Q]!);
        if (exchange < gain) [gain, from, to] = [exchange, P, Q];
      }
    }
    if (from < 0) return { energy, occupied };
    toggle(from);
    if (to >= 0) toggle(to);
  }
}

import { type SpinHamiltonian, toSpinOrbitals } from '../hamiltonian';
import { hermitianEigenvalues } from '../linalg';
import { determinantEnergies } from './determinant-energy';
import type { ModeIntegrals } from './second-order-integrals';

/** A determinant as excitation of the reference: filled modes left, empty modes entered, ascending, 0…2 each. */
export interface Excitation {
  readonly from: readonly number[];
  readonly to: readonly number[];
}

/** Most determinants that are taken for degenerate with the reference. */
const MOST_DETERMINANTS = 60;

/**
 * The determinant and its single and double excitations whose own energies ⟨D'|H|D'⟩ lie less than `gap` above it: a
 * degenerate term, within which spin–orbit coupling acts to first order. The lowest {@link MOST_DETERMINANTS} of them.
 */
export function degenerateSpace(
  hamiltonian: SpinHamiltonian,
  occupied: Uint8Array,
  gap: number,
): Excitation[] {
  const { modes: m, e, v } = determinantEnergies(hamiltonian);
  const field = e.slice();
  const filled: number[] = [];
  const empty: number[] = [];
  for (const [P, x] of occupied.entries()) {
    (x ? filled : empty).push(P);
    if (x) for (let Q = 0; Q < m; Q++) field[Q]! += v[Q * m + P]!;
  }
  const found: (Excitation & { readonly energy: number })[] = [];
  const consider = (energy: number, from: number[], to: number[]): void => {
    if (energy < gap) found.push({ energy, from, to });
  };
  for (const [x, i] of filled.entries()) {
    for (const [z, a] of empty.entries()) {
      const one = field[a]! - field[i]! - v[i * m + a]!;
      consider(one, [i], [a]);
      for (const j of filled.slice(x + 1)) {
        for (let w = z + 1; w < empty.length; w++) {
          const b = empty[w]!;
          const two =
            field[b]! -
            field[j]! -
            v[j * m + b]! +
            v[a * m + b]! +
            v[i * m + j]! -
            v[i * m + b]! -
            v[j * m + a]!;
          consider(one + two, [i, j], [a, b]);
        }
      }
    }
  }
  found.sort((p, q) => p.energy - q.energy);
  return [{ from: [], to: [] }, ...found.slice(0, MOST_DETERMINANTS - 1)];
}

/** Lowest eigenvalue of H among the determinants of a space, hartree. */
export function lowestInSpace(
  hamiltonian: SpinHamiltonian,
  integrals: ModeIntegrals,
  occupied: Uint8Array,
  space: readonly Excitation[],
): number {
  const m = integrals.modes;
  const h = hamiltonian.kind === 'spatial' ? toSpinOrbitals(hamiltonian.h) : hamiltonian.h;
  const lists = space.map(({ from, to }) => {
    const own = occupied.slice();
    for (const i of from) own[i] = 0;
    for (const a of to) own[a] = 1;
    return own;
  });
  const dim = lists.length;
  const matrix = { n: dim, re: new Float64Array(dim * dim), im: new Float64Array(dim * dim) };
  const put = (x: number, y: number, re: number, im: number): void => {
    matrix.re[x * dim + y] = matrix.re[y * dim + x] = re;
    matrix.im[x * dim + y] = im;
    matrix.im[y * dim + x] = -im;
  };
  let [re, im] = [0, 0];
  const add = (P: number, Q: number, R: number, S: number, scale: number): void => {
    integrals.read(P, Q, R, S);
    re += scale * integrals.re;
    im += scale * integrals.im;
    integrals.read(P, S, R, Q);
    re -= scale * integrals.re;
    im -= scale * integrals.im;
  };
  for (let y = 0; y < dim; y++) {
    for (let x = 0; x <= y; x++) {
      // ⟨x|H|y⟩ by the Slater–Condon rules, a†_P… a_Q…
      const [bra, ket] = [lists[x]!, lists[y]!];
      const created = modesWhere(m, (P) => bra[P]! > ket[P]!);
      const removed = modesWhere(m, (P) => ket[P]! > bra[P]!);
      [re, im] = [0, 0];
      if (created.length > 2) continue;
      if (created.length === 0) {
        re = hamiltonian.constant;
        for (let P = 0; P < m; P++) {
          if (!ket[P]) continue;
          re += h.re[P * m + P]!;
          for (let R = 0; R < P; R++) if (ket[R]) add(P, P, R, R, 1);
        }
        im = 0;
      } else if (created.length === 1) {
        const [P, Q] = [created[0]!, removed[0]!];
        re = h.re[P * m + Q]!;
        im = h.im[P * m + Q]!;
        for (let R = 0; R < m; R++) if (ket[R] && R !== Q) add(P, Q, R, R, 1);
      } else {
        add(created[0]!, removed[0]!, created[1]!, removed[1]!, 1);
      }
      const sign = between(ket, created, removed);
      put(x, y, sign * re, sign * im);
    }
  }
  return hermitianEigenvalues(matrix)[0]!;
}

const modesWhere = (m: number, holds: (P: number) => boolean): number[] =>
  Array.from({ length: m }, (_, P) => P).filter(holds);

/** Sign of Π a†_P a_Q (pairs in order) on a determinant with ascending modes. */
function between(ket: Uint8Array, created: readonly number[], removed: readonly number[]): number {
  const own = ket.slice();
  let sign = 1;
  const pass = (P: number): void => {
    for (let R = 0; R < P; R++) if (own[R]) sign = -sign;
  };
  for (const [n, Q] of removed.entries()) {
    pass(Q);
    own[Q] = 0;
    pass(created[n]!);
    own[created[n]!] = 1;
  }
  return sign;
}

import type { SpinHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import { fockOperator, type ModeIntegrals, modeIntegrals } from './second-order-integrals';
import { degenerateSpace, type Excitation, lowestInSpace } from './second-order-space';

/** Energy to second order from one determinant, hartree. */
export interface SecondOrder {
  /** ⟨D|H|D⟩, or the lowest level of H among the determinants degenerate with D. */
  readonly reference: number;
  /** These determinants, D itself first. */
  readonly space: readonly Excitation[];
  /** Second-order energy. */
  readonly correlation: number;
  /** Excitations that couple and are left out because they lie too close to the determinant. */
  readonly omitted: number;
  /** Diagonal of the Fock operator. */
  readonly levels: Float64Array;
}

/**
 * Determinants nearer than this are degenerate with the reference: they are diagonalised together with it. Excitations
 * with smaller denominators are left out. Hartree; common practice, no source.
 */
const LEAST_GAP = 0.1;
/** |coupling|² below which nothing is lost by leaving it out: 1e-10 Eh. */
const NO_COUPLING = 1e-20;

/**
 * Møller–Plesset-like second order, E₂ = Σ_ia |F_ia|²/(ε_i − ε_a) + Σ_{i<j,a<b} |(ia|jb) − (ib|ja)|²/(ε_i + ε_j − ε_a − ε_b)
 * (C. Møller, M. S. Plesset, Phys. Rev. 46, 618 (1934)), over spin orbitals with the full spin-dependent integrals.
 *
 * Assumed: zeroth order is the diagonal of the determinant's own Fock operator, for open shells that of the general
 * determinant with its spin density. Orbitals need not be canonical: couplings i–a count as singles; i–j and a–b are
 * left out. Where determinants are degenerate with D (open shells: spin–orbit coupling splits them to first order), the
 * lowest level among them stands in for ⟨D|H|D⟩, and E₂ is that of D alone.
 *
 * @param occupied - 0 or 1 for each mode, 2p + σ
 * @param like - decides which determinants are degenerate and which excitations are left out; null: H itself. Two
 *   Hamiltonians are comparable where the second is told the result of the first.
 */
export async function secondOrder(
  hamiltonian: SpinHamiltonian,
  occupied: Uint8Array,
  like: Pick<SecondOrder, 'levels' | 'space'> | null,
  context: JobContext,
): Promise<SecondOrder> {
  const integrals = modeIntegrals(hamiltonian);
  const filled: number[] = [];
  const empty: number[] = [];
  for (const [P, x] of occupied.entries()) (x ? filled : empty).push(P);
  const fock = fockOperator(hamiltonian, integrals, filled, empty);
  const e = fock.diagonal;
  const given = like?.levels ?? e;
  const space = like?.space ?? degenerateSpace(hamiltonian, occupied, LEAST_GAP);
  const inSpace = new Set(space.map(({ from, to }) => [...from, ...to].join()));
  let [correlation, omitted] = [0, 0];
  for (const [x, i] of filled.entries()) {
    context.report('second order', x, filled.length);
    for (const [z, a] of empty.entries()) {
      const coupling = fock.couplings[x * empty.length + z]!;
      if (space.length > 1 && inSpace.has([i, a].join())) continue;
      if (given[i]! - given[a]! <= -LEAST_GAP) correlation += coupling / (e[i]! - e[a]!);
      else if (coupling > NO_COUPLING) omitted++;
    }
    for (let y = x + 1; y < filled.length; y++) {
      // Some 1000 doubles each for a large set.
      await context.checkpoint();
      const j = filled[y]!;
      for (const [z, a] of empty.entries()) {
        for (let w = z + 1; w < empty.length; w++) {
          const b = empty[w]!;
          const coupling = doubleCoupling(integrals, i, j, a, b);
          if (coupling === 0 || (space.length > 1 && inSpace.has([i, j, a, b].join()))) continue;
          if (given[i]! + given[j]! - given[a]! - given[b]! <= -LEAST_GAP) {
            correlation += coupling / (e[i]! + e[j]! - e[a]! - e[b]!);
          } else if (coupling > NO_COUPLING) omitted++;
        }
      }
    }
  }
  return {
    reference: space.length > 1 ? lowestInSpace(hamiltonian, integrals, occupied, space) : fock.energy,
    correlation,
    omitted,
    levels: e,
    space,
  };
}

/** |(ia|jb) − (ib|ja)|². */
function doubleCoupling(integrals: ModeIntegrals, i: number, j: number, a: number, b: number): number {
  integrals.read(i, a, j, b);
  const { re, im } = integrals;
  integrals.read(i, b, j, a);
  return (re - integrals.re) ** 2 + (im - integrals.im) ** 2;
}

/**
 * A determinant for occupations 0…2 of spatial orbitals: ↑ before ↓, the fullest orbitals first.
 * @returns 0 or 1 for each spin orbital 2p + σ
 */
export function referenceDeterminant(occupations: ArrayLike<number>, electrons: number): Uint8Array {
  const order = Array.from({ length: 2 * occupations.length }, (_, P) => P).sort(
    (P, Q) => occupations[Q >> 1]! - (Q & 1) - (occupations[P >> 1]! - (P & 1)) || P - Q,
  );
  const occupied = new Uint8Array(order.length);
  for (const P of order.slice(0, electrons)) occupied[P] = 1;
  return occupied;
}

import type { SpinHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import { type FockOperator, fockOperator, type ModeIntegrals, modeIntegrals } from './second-order-integrals';

/** Energy to second order from one determinant, and what a changed Hamiltonian makes of it. Hartree. */
export interface SecondOrderChange {
  /** ⟨D|H|D⟩ and the second-order energy with H itself. */
  readonly reference: number;
  readonly correlation: number;
  /** Changed minus given: of ⟨D|H|D⟩, and of the second-order energy. */
  readonly firstOrder: number;
  readonly secondOrder: number;
  /** Excitations that couple and are left out because H puts them too close to the determinant. */
  readonly omitted: number;
}

/**
 * Excitations nearer than this belong to a (nearly) degenerate reference, about which a series from one determinant
 * says nothing. Hartree; common practice, no source.
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
 * left out. Each Hamiltonian has its own ε; which excitations are left out is decided by the given one.
 *
 * @param occupied - 0 or 1 for each mode, 2p + σ
 */
export async function secondOrderChange(
  given: SpinHamiltonian,
  changed: SpinHamiltonian,
  occupied: Uint8Array,
  context: JobContext,
): Promise<SecondOrderChange> {
  const [before, after] = [fockOperator(given, occupied), fockOperator(changed, occupied)];
  await context.checkpoint();
  const [old, now] = [modeIntegrals(given), modeIntegrals(changed)];
  const m = old.modes;
  const filled: number[] = [];
  const empty: number[] = [];
  for (let P = 0; P < m; P++) (occupied[P] ? filled : empty).push(P);
  const [e, f] = [diagonal(before, m), diagonal(after, m)];
  let [oldSum, newSum, omitted] = [0, 0, 0];
  for (const [x, i] of filled.entries()) {
    context.report('second order', x, filled.length);
    for (const a of empty) {
      const gap = e[i]! - e[a]!;
      const at = i * m + a;
      if (gap > -LEAST_GAP) {
        if (size(before, at) + size(after, at) > NO_COUPLING) omitted++;
        continue;
      }
      oldSum += size(before, at) / gap;
      newSum += size(after, at) / (f[i]! - f[a]!);
    }
    for (let y = x + 1; y < filled.length; y++) {
      // Some 1000 doubles between two checkpoints of a large set.
      if (y % 4 === 0) await context.checkpoint();
      const j = filled[y]!;
      for (const [z, a] of empty.entries()) {
        for (let w = z + 1; w < empty.length; w++) {
          const b = empty[w]!;
          const v = coupling(old, i, j, a, b);
          const u = coupling(now, i, j, a, b);
          if (v === 0 && u === 0) continue;
          const gap = e[i]! + e[j]! - e[a]! - e[b]!;
          if (gap > -LEAST_GAP) {
            if (v + u > NO_COUPLING) omitted++;
            continue;
          }
          oldSum += v / gap;
          newSum += u / (f[i]! + f[j]! - f[a]! - f[b]!);
        }
      }
    }
  }
  return {
    reference: before.energy,
    correlation: oldSum,
    firstOrder: after.energy - before.energy,
    secondOrder: newSum - oldSum,
    omitted,
  };
}

/** |(ia|jb) − (ib|ja)|². */
function coupling(integrals: ModeIntegrals, i: number, j: number, a: number, b: number): number {
  integrals.read(i, a, j, b);
  const { re, im } = integrals;
  integrals.read(i, b, j, a);
  return (re - integrals.re) ** 2 + (im - integrals.im) ** 2;
}

const size = ({ re, im }: FockOperator, at: number): number => re[at]! ** 2 + im[at]! ** 2;

const diagonal = ({ re }: FockOperator, m: number): Float64Array =>
  Float64Array.from({ length: m }, (_, P) => re[P * m + P]!);

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

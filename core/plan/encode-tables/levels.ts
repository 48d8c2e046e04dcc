import {
  type OrbitalWindow,
  restrictToWindow,
  type SpatialHamiltonian,
  type SpinHamiltonian,
} from '../../hamiltonian';
import type { JobContext } from '../../job';
import { levelShifts } from '../../verify';

/** What an encoding does to the lowest levels of an orbital window, hartree. */
export interface WindowEffect {
  /** 1-based. */
  readonly orbitals: readonly number[];
  readonly electrons: number;
  readonly states: number;
  /** Exact levels of the window, ascending. */
  readonly exact: readonly number[];
  /** Truncation and rounding together: largest shift of a level, and of a distance to the lowest. */
  readonly largestShift: number;
  readonly largestGapShift: number;
  /** Of these, what truncation alone does. */
  readonly truncationShift: number;
}

/** C(12, 6) = 924 determinants at most. */
const ORBITALS = 6;
const STATES = 6;

/**
 * The orbitals nearest to the Fermi level, everything else frozen: those of fractional or single occupation first, then
 * from the occupied and the empty side in turn, by their order in the files.
 *
 * @returns null where more orbitals than the window holds are neither empty nor doubly filled, or the occupations are
 * not those of the electrons.
 */
export function fermiWindow(electrons: number, occupations: ArrayLike<number>): OrbitalWindow | null {
  const n = occupations.length;
  const all = Array.from({ length: n }, (_, p) => p);
  const open = all.filter((p) => occupations[p] !== 0 && occupations[p] !== 2);
  if (open.length > ORBITALS) return null;
  const filled = all.filter((p) => occupations[p] === 2).reverse();
  const empty = all.filter((p) => occupations[p] === 0);
  const chosen = [...open];
  for (let i = 0; chosen.length < Math.min(ORBITALS, n); i++) {
    const side = i % 2 === 0 ? filled : empty;
    const next = side[i >> 1];
    if (next !== undefined) chosen.push(next);
  }
  const orbitals = chosen.sort((p, q) => p - q);
  const inside = electrons - 2 * filled.filter((p) => !orbitals.includes(p)).length;
  return inside < 0 || inside > 2 * orbitals.length ? null : { orbitals, electrons: inside, occupations };
}

/** What programs stand for over a window of orbitals. */
export interface Windowed {
  /** Of the encoding before rounding. */
  given(window: OrbitalWindow): Promise<SpinHamiltonian>;
  encoded(window: OrbitalWindow): Promise<SpinHamiltonian>;
  /** Whether anything was dropped. */
  readonly truncated: boolean;
}

/** The lowest levels of the window under H, under the program of the encoding, and under its rounded tables. */
export async function windowEffect(
  hamiltonian: SpatialHamiltonian,
  { given, encoded, truncated }: Windowed,
  occupations: ArrayLike<number>,
  context: JobContext,
): Promise<WindowEffect | null> {
  const window = fermiWindow(hamiltonian.electrons, occupations);
  if (!window) return null;
  const exact = restrictToWindow(hamiltonian, window);
  const both = await levelShifts(exact, await encoded(window), STATES, context);
  const truncation = truncated ? (await levelShifts(exact, await given(window), STATES, context)).largest : 0;
  return {
    orbitals: window.orbitals.map((p) => p + 1),
    electrons: window.electrons,
    states: both.given.length,
    exact: Array.from(both.given),
    largestShift: both.largest,
    largestGapShift: both.largestGap,
    truncationShift: truncation,
  };
}

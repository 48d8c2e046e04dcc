import { normalOrder, type OrbitalWindow, restrictToWindow, type SpatialHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import type { ComplexMatrix } from '../linalg';
import {
  denseSector,
  type StateChange,
  singleExcitations,
  type WatchedStates,
  watchedStates,
} from '../verify';

/** Orbitals in which all determinants are taken: at most 252 of them, diagonalised in a second. */
const ALL = 5;
/** Orbitals in which a closed shell and its single excitations are taken: at most 257 determinants. */
const SINGLES = 16;
/** States that are watched in each of the two, counted with multiplicity. */
export const STATES = { all: 12, singles: 40 } as const;

/** Low states of a Hamiltonian near the Fermi level; see {@link LowStatesFinder}. */
export interface LowStates {
  /** In words, for a note. */
  readonly description: string;
  /**
   * How much the levels and couplings of these states change from one operator to another, to first order: at most, over
   * both spaces. Both operators are over all orbitals of the set.
   */
  readonly change: (
    a: SpatialHamiltonian,
    b: SpatialHamiltonian,
    context: JobContext,
  ) => Promise<StateChange>;
}

interface Space {
  readonly matrixOf: (h: SpatialHamiltonian, context: JobContext) => Promise<ComplexMatrix>;
  readonly states: number;
}

/** Low states of the Hamiltonians of one job, found once each. */
export class LowStatesFinder {
  readonly #occupations: readonly number[];
  readonly #found = new Map<SpatialHamiltonian, LowStates>();

  /** @param occupations - of the reference, 0…2 each */
  constructor(occupations: readonly number[]) {
    this.#occupations = occupations;
  }

  async of(h: SpatialHamiltonian, context: JobContext): Promise<LowStates> {
    let found = this.#found.get(h);
    if (!found) {
      found = await lowStates(h, this.#occupations, context);
      this.#found.set(h, found);
    }
    return found;
  }
}

/**
 * The lowest states among all determinants of five orbitals about the Fermi level and, where the reference is a closed
 * shell, among the single excitations of sixteen. Other orbitals are frozen with their occupations.
 */
async function lowStates(
  h: SpatialHamiltonian,
  occupations: readonly number[],
  context: JobContext,
): Promise<LowStates> {
  const order = orderAboutFermiLevel(h, occupations);
  const few = windowOf(h, order.slice(0, ALL), occupations);
  const spaces: Space[] = [
    { matrixOf: (a, own) => denseSector(restrictToWindow(a, few), own), states: STATES.all },
  ];
  let description = `all determinants of ${few.orbitals.length} orbitals`;
  if (occupations.every((x) => x === 0 || x === 2) && h.orbitals > ALL) {
    const many = windowOf(h, order.slice(0, SINGLES), occupations);
    const occupied = Uint8Array.from(
      many.orbitals.flatMap((p) => [occupations[p]! / 2, occupations[p]! / 2]),
    );
    spaces.push({
      matrixOf: async (a) => singleExcitations(restrictToWindow(a, many), occupied),
      states: STATES.singles,
    });
    description += ` and single excitations of ${many.orbitals.length}`;
  }
  const watched: (WatchedStates & Pick<Space, 'matrixOf'>)[] = [];
  for (const { matrixOf, states } of spaces) {
    context.report('low states near the Fermi level', watched.length, spaces.length);
    await context.checkpoint();
    watched.push({ matrixOf, ...watchedStates(await matrixOf(h, context), states) });
  }
  return {
    description,
    async change(a, b, own) {
      const most = { norm: 0, centred: 0 };
      for (const { matrixOf, change } of watched) {
        await own.checkpoint();
        const { norm, centred } = change(await matrixOf(a, own), await matrixOf(b, own));
        most.norm = Math.max(most.norm, norm);
        most.centred = Math.max(most.centred, centred);
      }
      return most;
    },
  };
}

/** The orbitals about the Fermi level in which all determinants can be taken. */
export function fewOrbitals(h: SpatialHamiltonian, occupations: readonly number[]): OrbitalWindow {
  return windowOf(h, orderAboutFermiLevel(h, occupations).slice(0, ALL), occupations);
}

/** Partly filled orbitals first, then in turn the next below and the next above, by the diagonal of the Fock operator. */
function orderAboutFermiLevel(h: SpatialHamiltonian, occupations: readonly number[]): number[] {
  const { orbitals: n } = h;
  const half = Float64Array.from(occupations, (x) => x / 2);
  const { even } = normalOrder({ ...h, g: { ...h.g, spinOrbit: null, spinSpin: null } }, half, half);
  const level = (p: number) => even.planes[p * n + p]!;
  const byEnergy = Array.from({ length: n }, (_, p) => p).sort((p, q) => level(p) - level(q) || p - q);
  const filled = byEnergy.filter((p) => occupations[p] === 2).reverse();
  const empty = byEnergy.filter((p) => occupations[p] === 0);
  const order = byEnergy.filter((p) => occupations[p] !== 0 && occupations[p] !== 2);
  for (let below = true; order.length < n; below = !below) {
    const next = (below ? filled : empty).shift() ?? (below ? empty : filled).shift();
    if (next !== undefined) order.push(next);
  }
  return order;
}

function windowOf(
  h: SpatialHamiltonian,
  chosen: readonly number[],
  occupations: readonly number[],
): OrbitalWindow {
  const orbitals = [...chosen].sort((p, q) => p - q);
  const frozen = occupations.reduce((sum, x, p) => (orbitals.includes(p) ? sum : sum + x), 0);
  return { orbitals, electrons: Math.round(h.electrons - frozen), occupations };
}

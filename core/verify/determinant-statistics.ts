import { type SpinHamiltonian, toSpinOrbitals } from '../hamiltonian';
import type { JobContext } from '../job';
import { determinantEnergies } from './determinant-energy';
import { modeIntegrals } from './second-order-integrals';

/** What ΔH = changed − given does to determinants drawn at random, hartree. */
export interface DeterminantStatistics {
  readonly samples: number;
  /** Of ⟨D|ΔH|D⟩: a common shift, and how differently determinants are shifted (standard deviation). */
  readonly mean: number;
  readonly spread: number;
  /** Root mean square of ⟨D'|ΔH|D⟩ over random single and double excitations. */
  readonly singles: number;
  readonly doubles: number;
}

/** Numbers in [0, 1) from a 32-bit seed (mulberry32), the same on every machine. */
function uniform(seed: number): () => number {
  let state = seed | 0;
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 2 ** 32;
  };
}

/**
 * Determinants of the sector, all equally likely, each with one random single and one random double excitation.
 *
 * @param samples - determinants, ≥ 2
 */
export async function determinantStatistics(
  given: SpinHamiltonian,
  changed: SpinHamiltonian,
  electrons: number,
  options: { readonly samples: number },
  context: JobContext,
): Promise<DeterminantStatistics> {
  const random = uniform(context.seed);
  const [old, now] = [elementsOf(given), elementsOf(changed)];
  const m = old.modes;
  const modes = Array.from({ length: m }, (_, P) => P);
  const shifts = new Float64Array(options.samples);
  let [singles, doubles, numSingles, numDoubles] = [0, 0, 0, 0];
  for (let n = 0; n < options.samples; n++) {
    context.report('random determinants', n, options.samples);
    await context.checkpoint();
    // A random partial shuffle: the first η modes are filled, and in random order.
    for (let i = 0; i < electrons; i++) {
      const other = i + Math.floor(random() * (m - i));
      [modes[i], modes[other]] = [modes[other]!, modes[i]!];
    }
    const filled = modes.slice(0, electrons);
    const empty = modes.slice(electrons);
    shifts[n] = now.energy(filled) - old.energy(filled);
    if (filled.length >= 1 && empty.length >= 1) {
      const a = empty[Math.floor(random() * empty.length)]!;
      singles += squaredDifference(now.single(filled, a), old.single(filled, a));
      numSingles++;
    }
    if (filled.length >= 2 && empty.length >= 2) {
      const a = Math.floor(random() * empty.length);
      const b = (a + 1 + Math.floor(random() * (empty.length - 1))) % empty.length;
      const [i, j] = filled as [number, number];
      doubles += squaredDifference(
        now.double(i, j, empty[a]!, empty[b]!),
        old.double(i, j, empty[a]!, empty[b]!),
      );
      numDoubles++;
    }
  }
  const mean = shifts.reduce((sum, x) => sum + x, 0) / options.samples;
  return {
    samples: options.samples,
    mean,
    spread: Math.sqrt(shifts.reduce((sum, x) => sum + (x - mean) ** 2, 0) / (options.samples - 1)),
    singles: numSingles === 0 ? 0 : Math.sqrt(singles / numSingles),
    doubles: numDoubles === 0 ? 0 : Math.sqrt(doubles / numDoubles),
  };
}

type Complex = readonly [re: number, im: number];

const squaredDifference = ([a, b]: Complex, [c, d]: Complex): number => (a - c) ** 2 + (b - d) ** 2;

/** Matrix elements between determinants, up to a sign that both Hamiltonians share. */
function elementsOf(hamiltonian: SpinHamiltonian) {
  const integrals = modeIntegrals(hamiltonian);
  const m = integrals.modes;
  const h = hamiltonian.kind === 'spatial' ? toSpinOrbitals(hamiltonian.h) : hamiltonian.h;
  const { constant, e, v } = determinantEnergies(hamiltonian);
  const antisymmetrised = (P: number, Q: number, R: number, S: number): Complex => {
    integrals.read(P, Q, R, S);
    const { re, im } = integrals;
    integrals.read(P, S, R, Q);
    return [re - integrals.re, im - integrals.im];
  };
  return {
    modes: m,
    energy(filled: readonly number[]): number {
      let sum = constant;
      for (const P of filled) {
        sum += e[P]!;
        for (const Q of filled) sum += 0.5 * v[P * m + Q]!;
      }
      return sum;
    },
    /** From the first filled mode to `a`, in the field of the others. */
    single(filled: readonly number[], a: number): Complex {
      const i = filled[0]!;
      let [re, im] = [h.re[i * m + a]!, h.im[i * m + a]!];
      for (const R of filled) {
        const [x, y] = antisymmetrised(i, a, R, R);
        re += x;
        im += y;
      }
      return [re, im];
    },
    double: (i: number, j: number, a: number, b: number): Complex => antisymmetrised(i, a, j, b),
  };
}

import { describe, expect, it } from 'vitest';
import { type SpatialHamiltonian, spinorForm } from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';
import { hermitianEigenvalues } from '../../../core/linalg';
import { determinantEnergies, extremeDeterminant, fockMatrix, spectralRange } from '../../../core/verify';
import { ALL_KINDS, randomHamiltonian } from '../hamiltonian/random-hamiltonian';

const context = inlineContext();

/** Extremes of the literal Fock-space matrix, of one electron number or of all. */
function extremes(hamiltonian: SpatialHamiltonian, electrons: number | null) {
  const full = fockMatrix(hamiltonian, 'stored');
  const states = [...Array(full.n).keys()].filter(
    (state) => electrons === null || state.toString(2).replaceAll('0', '').length === electrons,
  );
  const n = states.length;
  const pick = (plane: Float64Array) =>
    Float64Array.from(states.flatMap((i) => states.map((j) => plane[i * full.n + j]!)));
  const values = hermitianEigenvalues({ n, re: pick(full.re), im: pick(full.im) });
  const diagonal = states.map((i) => full.re[i * full.n + i]!);
  return {
    half: (values.at(-1)! - values[0]!) / 2,
    diagonalHalf: (Math.max(...diagonal) - Math.min(...diagonal)) / 2,
  };
}

describe('half the spectral range', () => {
  it.each(['eta', 'all'] as const)('is exact where it fits (%s)', async (sector) => {
    const hamiltonian = randomHamiltonian(3, 12, ALL_KINDS, 2);
    const found = await spectralRange(hamiltonian, sector, {}, context);
    expect(found.kind).toBe('exact');
    expect(found.value).toBeCloseTo(extremes(hamiltonian, sector === 'eta' ? 2 : null).half, 10);
  });

  it.each(['eta', 'all'] as const)(
    'is bracketed from below by determinants where it does not (%s)',
    async (sector) => {
      for (let seed = 1; seed <= 20; seed++) {
        const hamiltonian = randomHamiltonian(3, seed, ALL_KINDS, 3);
        const found = await spectralRange(hamiltonian, sector, { maxDeterminants: 1 }, context);
        const { diagonalHalf, half } = extremes(hamiltonian, sector === 'eta' ? 3 : null);
        expect(found).toMatchObject({ value: null, kind: 'bracket', high: null });
        expect(found.low).toBeLessThanOrEqual(diagonalHalf + 1e-12);
        expect(found.low).toBeLessThan(half);
        // The search is local, so it may miss the extreme determinant, but not by much.
        expect(found.low).toBeGreaterThan(0.6 * diagonalHalf);
      }
    },
  );

  it('of a constant is zero', async () => {
    const hamiltonian = randomHamiltonian(1, 4, ALL_KINDS, 2);
    expect((await spectralRange(hamiltonian, 'eta', {}, context)).value).toBe(0);
  });
});

describe('determinant energies', () => {
  it('are the diagonal of the Fock-space matrix, from both kinds of Hamiltonian', () => {
    const hamiltonian = randomHamiltonian(3, 6, ALL_KINDS);
    const full = fockMatrix(hamiltonian, 'product');
    for (const { modes, constant, e, v } of [
      determinantEnergies(hamiltonian),
      determinantEnergies(spinorForm(hamiltonian)),
    ]) {
      for (let state = 0; state < 64; state++) {
        let energy = constant;
        for (let P = 0; P < modes; P++) {
          if (!((state >> P) & 1)) continue;
          energy += e[P]!;
          for (let Q = 0; Q < P; Q++) if ((state >> Q) & 1) energy += v[P * modes + Q]!;
        }
        expect(energy).toBeCloseTo(full.re[state * 64 + state]!, 12);
      }
    }
  });

  it('of the found extremes belong to the found occupations', () => {
    const hamiltonian = randomHamiltonian(3, 9, ALL_KINDS);
    const full = fockMatrix(hamiltonian, 'product');
    for (const sign of [1, -1] as const) {
      const { energy, occupied } = extremeDeterminant(determinantEnergies(hamiltonian), 3, sign);
      const state = occupied.reduce((bits, x, P) => bits | (x << P), 0);
      expect(occupied.reduce((sum, x) => sum + x, 0)).toBe(3);
      expect(energy).toBeCloseTo(full.re[state * 64 + state]!, 12);
    }
  });
});

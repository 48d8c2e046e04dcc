import { describe, expect, it } from 'vitest';
import { type SpinorHamiltonian, spinorForm } from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';
import { binomial, exactSpectrum, fockMatrix, sectorBasis, sectorMatrix } from '../../../core/verify';
import { connectedBlocks } from '../../../core/verify/blocks';
import { ALL_KINDS, randomHamiltonian } from '../hamiltonian/random-hamiltonian';

const bits = (state: number) => state.toString(2).replaceAll('0', '').length;

describe('sector basis', () => {
  it.each([
    [4, 2],
    [16, 8],
    [20, 3],
    [32, 2],
    [32, 31],
    [5, 0],
    [32, 32],
  ])('lists and ranks all determinants of %i modes and %i electrons', (modes, electrons) => {
    const basis = sectorBasis(modes, electrons);
    expect(basis.dim).toBe(binomial(modes, electrons));
    for (let i = 0; i < basis.dim; i++) {
      const state = basis.states[i]!;
      const ascends = i === 0 || state > basis.states[i - 1]!;
      if (!ascends || bits(state) !== electrons || basis.rank(state) !== i) {
        expect.fail(`state ${state} at ${i}`);
      }
    }
  });
});

describe('matrix of a sector', () => {
  it.each(['product', 'stored'] as const)(
    'is that part of the Fock-space matrix, from the %s form',
    async (form) => {
      const hamiltonian = randomHamiltonian(3, 77, ALL_KINDS);
      const full = fockMatrix(hamiltonian, form === 'product' ? 'stored' : 'product');
      for (let electrons = 0; electrons <= 6; electrons++) {
        const matrix = await sectorMatrix(hamiltonian, electrons, form, inlineContext());
        const { states } = matrix.basis;
        const seen = new Set<string>();
        for (let j = 0; j < matrix.dim; j++) {
          const at = states[j]! * full.n + states[j]!;
          expect(matrix.diagonal[j]).toBeCloseTo(full.re[at]!, 12);
          for (let e = matrix.start[j]!; e < matrix.start[j + 1]!; e++) {
            const i = matrix.row[e]!;
            expect(i).toBeGreaterThan(j);
            seen.add(`${i},${j}`);
            expect(matrix.re[e]).toBeCloseTo(full.re[states[i]! * full.n + states[j]!]!, 12);
            expect(matrix.im[e] ?? 0).toBeCloseTo(full.im[states[i]! * full.n + states[j]!]!, 12);
          }
        }
        for (let i = 0; i < matrix.dim; i++) {
          for (let j = 0; j < i; j++) {
            if (seen.has(`${i},${j}`)) continue;
            const at = states[i]! * full.n + states[j]!;
            expect(Math.hypot(full.re[at]!, full.im[at]!)).toBeLessThan(1e-14);
          }
        }
      }
    },
  );

  it('has the same spectrum from the spatial and the spinor Hamiltonian, dense and iterated', async () => {
    // 5 orbitals, 5 electrons: 252 determinants without any symmetry but time reversal, so the iteration runs.
    const hamiltonian = randomHamiltonian(5, 3, ALL_KINDS, 5);
    const context = inlineContext();
    const few = await exactSpectrum(hamiltonian, { states: 8 }, context);
    const all = await exactSpectrum(spinorForm(hamiltonian), { states: 252, form: 'stored' }, context);
    expect(few.dim).toBe(252);
    expect(all.values).toHaveLength(252);
    for (let i = 0; i < 8; i++) expect(few.values[i]).toBeCloseTo(all.values[i]!, 10);
    // Kramers pairs of an odd electron number: degenerate to rounding.
    for (let i = 0; i < 252; i += 2) expect(all.values[i]).toBeCloseTo(all.values[i + 1]!, 10);
  });

  it.each([
    ['k', (h: SpinorHamiltonian) => h.k.im, 1],
    ['g against its conjugate', (h: SpinorHamiltonian) => h.g.im, 17],
    ['g against its exchange', (h: SpinorHamiltonian) => h.g.re, 300],
  ])('refuses integrals that are not Hermitian: %s', async (_, plane, at) => {
    const spinor = spinorForm(randomHamiltonian(3, 2, ALL_KINDS, 3));
    plane(spinor)[at]! += 1e-3;
    await expect(sectorMatrix(spinor, 3, 'product', inlineContext())).rejects.toThrow(
      /miss H = H† .* by 1\.0e-3 Eh/,
    );
  });

  it('refuses a sector that does not fit, with the cure', async () => {
    const hamiltonian = randomHamiltonian(9, 1, { charge: true, spinOrbit: 'none', spinSpin: false }, 9);
    await expect(sectorMatrix(hamiltonian, 9, 'product', inlineContext())).rejects.toThrow(
      /9 electrons in 18 spin orbitals; expected at most 32 spin orbitals and 20000 determinants. Choose a smaller window/,
    );
  });
});

describe('blocks', () => {
  it('of a spin-free Hamiltonian are at least the spin projections, and keep the spectrum', async () => {
    const hamiltonian = randomHamiltonian(3, 5, { charge: true, spinOrbit: 'none', spinSpin: false }, 3);
    // One-electron spin–orbit is random in this generator: take it out.
    hamiltonian.h.planes.fill(0, 9);
    hamiltonian.k.planes.fill(0, 9);
    const matrix = await sectorMatrix(hamiltonian, 3, 'product', inlineContext());
    const blocks = await connectedBlocks(matrix, inlineContext());
    expect(matrix.im).toHaveLength(0);
    // 3 electrons: projections 3/2, 1/2, −1/2, −3/2 with 1, 9, 9, 1 determinants.
    expect(blocks.map(({ dim }) => dim).sort((a, b) => a - b)).toEqual([1, 1, 9, 9]);
  });
});

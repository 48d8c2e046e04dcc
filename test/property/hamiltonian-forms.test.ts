import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { fromProductForm, hermiticityDefect, spinorForm, spinorFromStoredForm } from '../../core/hamiltonian';
import { fockMatrix, spinorFockMatrix } from '../../core/verify/fock';
import { largestDifference, randomHamiltonian } from '../unit/hamiltonian/random-hamiltonian';

const seeds = fc.integer({ min: 0, max: 2 ** 31 });
const kinds = fc.record({
  charge: fc.boolean(),
  spinOrbit: fc.constantFrom('none', 'independent', 'multiple'),
  spinSpin: fc.boolean(),
} as const);

describe('stored form and product form are one operator on the whole Fock space', () => {
  it.each([
    [1, 10],
    [2, 30],
    [3, 6],
  ])('for %i orbitals, literal Jordan–Wigner matrices', (n, numRuns) => {
    fc.assert(
      fc.property(seeds, kinds, (seed, which) => {
        const hamiltonian = randomHamiltonian(n, seed, which);
        const stored = fockMatrix(hamiltonian, 'stored');
        const product = fockMatrix(hamiltonian, 'product');
        expect(largestDifference(stored.re, product.re)).toBeLessThan(1e-12);
        expect(largestDifference(stored.im, product.im)).toBeLessThan(1e-12);
        expect(hermitian(stored)).toBeLessThan(1e-12);
        expect(hermiticityDefect(hamiltonian.k)).toBeLessThan(1e-12);
      }),
      { numRuns },
    );
  });

  it('and so is the form over 2N spin orbitals', () => {
    fc.assert(
      fc.property(seeds, kinds, (seed, which) => {
        const hamiltonian = randomHamiltonian(2, seed, which);
        const spinor = spinorForm(hamiltonian);
        const expected = fockMatrix(hamiltonian, 'stored');
        for (const form of ['stored', 'product'] as const) {
          const found = spinorFockMatrix(spinor, form);
          expect(largestDifference(found.re, expected.re)).toBeLessThan(1e-12);
          expect(largestDifference(found.im, expected.im)).toBeLessThan(1e-12);
        }
        // k from the contraction over spinors, without the spin algebra of the packed route.
        const again = spinorFromStoredForm(spinor);
        expect(largestDifference(again.k.re, spinor.k.re)).toBeLessThan(1e-12);
        expect(largestDifference(again.k.im, spinor.k.im)).toBeLessThan(1e-12);
      }),
      { numRuns: 20 },
    );
  });

  it('product form leads back to the stored form', () => {
    fc.assert(
      fc.property(seeds, fc.integer({ min: 1, max: 6 }), (seed, n) => {
        const hamiltonian = randomHamiltonian(n, seed);
        const again = fromProductForm(hamiltonian);
        expect(largestDifference(again.h.planes, hamiltonian.h.planes)).toBeLessThan(1e-12);
      }),
      { numRuns: 20 },
    );
  });
});

function hermitian(matrix: { n: number; re: Float64Array; im: Float64Array }): number {
  let defect = 0;
  for (let i = 0; i < matrix.n; i++) {
    for (let j = 0; j <= i; j++) {
      defect = Math.max(
        defect,
        Math.abs(matrix.re[i * matrix.n + j]! - matrix.re[j * matrix.n + i]!),
        Math.abs(matrix.im[i * matrix.n + j]! + matrix.im[j * matrix.n + i]!),
      );
    }
  }
  return defect;
}

import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  MUS,
  type SpatialHamiltonian,
  type SymmetryShift,
  shiftedHamiltonian,
  toSpinOrbitals,
  zeroOperator,
} from '../../core/hamiltonian';
import { type ComplexMatrix, hermitianEigenvalues } from '../../core/linalg';
import { fockMatrix, oneBodyFockMatrix } from '../../core/verify';
import { restrict } from '../unit/encode/fock-space';
import {
  largestDifference,
  type RandomKinds,
  randomHamiltonian,
  uniform,
} from '../unit/hamiltonian/random-hamiltonian';

const seeds = fc.integer({ min: 0, max: 2 ** 31 });
const kinds: fc.Arbitrary<RandomKinds> = fc.record({
  charge: fc.boolean(),
  spinOrbit: fc.constantFrom('none', 'independent', 'multiple'),
  spinSpin: fc.boolean(),
});

/** ξ with all four components. */
function randomShift(n: number, seed: number): SymmetryShift {
  const random = uniform(seed);
  const operator = zeroOperator('even', n);
  for (const mu of MUS) {
    for (let p = 0; p < n; p++) {
      for (let q = 0; q <= p; q++) {
        if (mu > 0 && p === q) continue;
        const value = random();
        operator.planes[(mu * n + p) * n + q] = value;
        operator.planes[(mu * n + q) * n + p] = mu === 0 || p === q ? value : -value;
      }
    }
  }
  return { scalar: random(), operator };
}

const electronsOf = (state: number): number => {
  let count = 0;
  for (let x = state; x !== 0; x &= x - 1) count++;
  return count;
};

/** H + ξ (N̂ − η) by matrices over Fock space, where N̂ is the number of bits of a state. */
function literal(h: SpatialHamiltonian, { scalar, operator }: SymmetryShift): ComplexMatrix {
  const matrix = fockMatrix(h, 'stored');
  const xi = oneBodyFockMatrix(toSpinOrbitals(operator));
  for (let i = 0; i < matrix.n; i++) {
    for (let j = 0; j < matrix.n; j++) {
      const excess = electronsOf(j) - h.electrons;
      matrix.re[i * matrix.n + j]! += (xi.re[i * matrix.n + j]! + (i === j ? scalar : 0)) * excess;
      matrix.im[i * matrix.n + j]! += xi.im[i * matrix.n + j]! * excess;
    }
  }
  return matrix;
}

describe('H + ξ (N̂ − η) with a one-body operator ξ of all spin components', () => {
  it('is the Hamiltonian of the shifted tensors, in both forms', () => {
    fc.assert(
      fc.property(seeds, kinds, fc.integer({ min: 0, max: 4 }), (seed, kind, electrons) => {
        const h = randomHamiltonian(2, seed, kind, electrons);
        const shift = randomShift(2, seed + 1);
        const shifted = shiftedHamiltonian(h, shift);
        const expected = literal(h, shift);
        for (const form of ['stored', 'product'] as const) {
          const found = fockMatrix(shifted, form);
          expect(largestDifference(found.re, expected.re)).toBeLessThan(1e-12);
          expect(largestDifference(found.im, expected.im)).toBeLessThan(1e-12);
        }
      }),
      { numRuns: 40 },
    );
  });

  it('leaves the spectrum of its sector and changes that of every other', () => {
    fc.assert(
      fc.property(seeds, fc.constantFrom(1, 2, 3), fc.integer({ min: 0, max: 6 }), (seed, n, asked) => {
        const h = randomHamiltonian(n, seed, undefined, Math.min(asked, 2 * n));
        const before = fockMatrix(h, 'product');
        const after = fockMatrix(shiftedHamiltonian(h, randomShift(n, seed + 1)), 'product');
        for (let electrons = 0; electrons <= 2 * n; electrons++) {
          const moved = largestDifference(
            hermitianEigenvalues(restrict(after, electrons)),
            hermitianEigenvalues(restrict(before, electrons)),
          );
          if (electrons === h.electrons) expect(moved).toBeLessThan(1e-9);
          else expect(moved).toBeGreaterThan(1e-6);
        }
      }),
      { numRuns: 12 },
    );
  });

  it('changes the same-orbit array alone where one array served both spin–orbit parts', () => {
    const h = randomHamiltonian(3, 5, { charge: true, spinOrbit: 'multiple', spinSpin: false });
    const shifted = shiftedHamiltonian(h, randomShift(3, 6));
    const before = h.g.spinOrbit!;
    expect(shifted.g.spinOrbit!.other).toEqual(before.same.map((value) => 2 * value));
    expect(largestDifference(shifted.g.spinOrbit!.same, before.same)).toBeGreaterThan(0.1);
  });

  it('shares what it does not change, and leaves the given arrays as they were', () => {
    const h = randomHamiltonian(2, 7);
    const { charge, spinOrbit } = h.g;
    const [ownCharge, ownSame] = [charge!.slice(), spinOrbit!.same.slice()];
    const still = shiftedHamiltonian(h, { scalar: 0.3, operator: zeroOperator('even', 2) });
    expect(still.g.charge).toBe(charge);
    expect(still.g.spinOrbit).toBe(spinOrbit);
    shiftedHamiltonian(h, randomShift(2, 8));
    expect(charge).toEqual(ownCharge);
    expect(spinOrbit!.same).toEqual(ownSame);
  });

  it('refuses an operator that does not fit', () => {
    const h = randomHamiltonian(2, 1);
    const lopsided = zeroOperator('even', 2);
    lopsided.planes[1] = 1;
    for (const operator of [lopsided, zeroOperator('even', 3), zeroOperator('odd', 2)]) {
      expect(() => shiftedHamiltonian(h, { scalar: 0, operator })).toThrowError(
        expect.objectContaining({ code: 'bad-shift' }),
      );
    }
  });
});

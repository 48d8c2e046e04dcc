import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { smoothed, sparseShift, weightedMedian } from '../../core/encode/sparse-shift/optimise';
import { touchedStrings } from '../../core/encode/sparse-shift/strings';
import {
  addScaled,
  MUS,
  type SpatialHamiltonian,
  type SymmetryShift,
  shiftedHamiltonian,
  zeroOperator,
} from '../../core/hamiltonian';
import { inlineContext } from '../../core/job';
import { fockMatrix } from '../../core/verify';
import { type RandomKinds, randomHamiltonian, uniform } from '../unit/hamiltonian/random-hamiltonian';

const ctx = inlineContext();
const seeds = fc.integer({ min: 0, max: 2 ** 31 });
const kinds: fc.Arbitrary<RandomKinds> = fc.record({
  charge: fc.boolean(),
  spinOrbit: fc.constantFrom('none', 'independent', 'multiple'),
  spinSpin: fc.boolean(),
});

/**
 * Σ|coefficient| over all Pauli strings but the identity, from the matrix of H over Fock space. A Majorana string is a
 * Pauli string up to a phase, so this is the one-norm of merged Majorana strings.
 */
function pauliOneNorm(h: SpatialHamiltonian): number {
  const { n, re, im } = fockMatrix(h, 'stored');
  let sum = 0;
  const [a, b] = [new Float64Array(n), new Float64Array(n)];
  for (let flip = 0; flip < n; flip++) {
    for (let s = 0; s < n; s++) {
      a[s] = re[(s ^ flip) * n + s]!;
      b[s] = im[(s ^ flip) * n + s]!;
    }
    for (let bit = 1; bit < n; bit *= 2) {
      for (const x of [a, b]) {
        for (let s = 0; s < n; s++) {
          if (s & bit) continue;
          const [y, z] = [x[s]!, x[s | bit]!];
          x[s] = y + z;
          x[s | bit] = y - z;
        }
      }
    }
    for (let s = 0; s < n; s++) if (flip !== 0 || s !== 0) sum += Math.hypot(a[s]!, b[s]!) / n;
  }
  return sum;
}

function randomShift(n: number, random: () => number, scale: number): SymmetryShift {
  const operator = zeroOperator('even', n);
  for (const mu of MUS) {
    for (let p = 0; p < n; p++) {
      for (let q = 0; q <= p; q++) {
        if (mu > 0 && p === q) continue;
        const value = scale * random() * (random() > 0 ? 1 : 0);
        operator.planes[(mu * n + p) * n + q] = value;
        operator.planes[(mu * n + q) * n + p] = mu === 0 || p === q ? value : -value;
      }
    }
  }
  return { scalar: scale * random(), operator };
}

/** Σ|…| over the strings that the shift touches, as the optimiser sees them. */
async function touchedNorm(h: SpatialHamiltonian, { scalar, operator }: SymmetryShift): Promise<number> {
  const { orbitals: n } = h;
  const { offDiagonal, diagonal } = await touchedStrings(h, ctx);
  const x = Float64Array.from({ length: n + 1 }, (_, p) => (p < n ? operator.planes[p * n + p]! : scalar));
  let sum = smoothed(diagonal, x, 0).value;
  for (const { mu, p, q, terms } of offDiagonal) {
    const own = operator.planes[(mu * n + p) * n + q]!;
    for (const { value, weight } of terms) sum += weight * Math.abs(value + own);
  }
  return sum;
}

describe('symmetry shift of the sparse form', () => {
  it('knows what a shift does to the one-norm of merged Majorana strings', async () => {
    await fc.assert(
      fc.asyncProperty(
        seeds,
        kinds,
        fc.constantFrom(1, 2, 3),
        fc.integer({ min: 0, max: 6 }),
        async (seed, kind, n, asked) => {
          const h = randomHamiltonian(n, seed, kind, Math.min(2 * n, asked));
          const shift = randomShift(n, uniform(seed + 1), 0.7);
          const change = pauliOneNorm(shiftedHamiltonian(h, shift)) - pauliOneNorm(h);
          const none = { scalar: 0, operator: zeroOperator('even', n) };
          expect(
            Math.abs((await touchedNorm(h, shift)) - (await touchedNorm(h, none)) - change),
          ).toBeLessThan(1e-10);
        },
      ),
      { numRuns: 25 },
    );
  });

  it('is the best: no step from it lowers the one-norm, which is convex in ξ', async () => {
    await fc.assert(
      fc.asyncProperty(seeds, kinds, fc.integer({ min: 0, max: 4 }), async (seed, kind, electrons) => {
        const h = randomHamiltonian(2, seed, kind, electrons);
        const found = await sparseShift(h, ctx);
        const least = pauliOneNorm(shiftedHamiltonian(h, found));
        expect(least).toBeLessThanOrEqual(pauliOneNorm(h) + 1e-12);
        const random = uniform(seed + 2);
        for (let i = 0; i < 12; i++) {
          const step = randomShift(2, random, 10 ** -(i % 4));
          const moved = {
            scalar: found.scalar + step.scalar,
            operator: addScaled(found.operator, step.operator),
          };
          expect(pauliOneNorm(shiftedHamiltonian(h, moved))).toBeGreaterThan(least - 1e-7 * least);
        }
      }),
      { numRuns: 25 },
    );
  });

  it('uses weighted medians that no point beats', () => {
    const term = fc.record({
      value: fc.double({ min: -5, max: 5, noNaN: true }),
      weight: fc.double({ min: 0, max: 3, noNaN: true }),
    });
    fc.assert(
      fc.property(
        fc.array(term, { maxLength: 9 }),
        fc.double({ min: -6, max: 6, noNaN: true }),
        (terms, x) => {
          const at = (y: number) =>
            terms.reduce((sum, { value, weight }) => sum + weight * Math.abs(value + y), 0);
          expect(at(weightedMedian(terms))).toBeLessThanOrEqual(at(x) + 1e-10);
        },
      ),
    );
    expect(
      weightedMedian([
        { value: -1, weight: 1 },
        { value: 1, weight: 1 },
      ]),
    ).toBe(0);
  });
});

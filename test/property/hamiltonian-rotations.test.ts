import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { rotateOrbitals, rotateSpin, tensorElement, toSpinOrbitals } from '../../core/hamiltonian';
import { inlineContext } from '../../core/job';
import { hermitianEigenvalues, transpose } from '../../core/linalg';
import { fockMatrix } from '../../core/verify';
import {
  largestDifference,
  randomHamiltonian,
  randomOrthogonal,
  uniform,
} from '../unit/hamiltonian/random-hamiltonian';

const seeds = fc.integer({ min: 0, max: 2 ** 31 });

/** Rotation by `angle` about a unit axis (O. Rodrigues' formula). */
function rotation(axis: readonly number[], angle: number): number[] {
  const norm = Math.hypot(...axis);
  const [x, y, z] = axis.map((value) => value / norm) as [number, number, number];
  const [c, s] = [Math.cos(angle), Math.sin(angle)];
  const t = 1 - c;
  return [
    c + x * x * t,
    x * y * t - z * s,
    x * z * t + y * s,
    y * x * t + z * s,
    c + y * y * t,
    y * z * t - x * s,
    z * x * t - y * s,
    z * y * t + x * s,
    c + z * z * t,
  ];
}

const spectrum = (matrix: ReturnType<typeof fockMatrix>) => hermitianEigenvalues(matrix);

describe('changes of basis leave the spectrum of the whole Fock space', () => {
  it('rotation of the spin axes', () => {
    fc.assert(
      fc.property(seeds, (seed) => {
        const hamiltonian = randomHamiltonian(2, seed);
        const random = uniform(seed + 1);
        const turned = rotateSpin(hamiltonian, rotation([random(), random(), random()], 3 * random()));
        const difference = largestDifference(
          spectrum(fockMatrix(turned, 'product')),
          spectrum(fockMatrix(hamiltonian, 'product')),
        );
        expect(difference).toBeLessThan(1e-11);
        expect(largestDifference(turned.h.planes, hamiltonian.h.planes)).toBeGreaterThan(0);
      }),
      { numRuns: 15 },
    );
  });

  it('rotation of the orbitals', async () => {
    await fc.assert(
      fc.asyncProperty(seeds, fc.constantFrom(2, 3), async (seed, n) => {
        const hamiltonian = randomHamiltonian(n, seed);
        const q = randomOrthogonal(n, uniform(seed + 2));
        const turned = await rotateOrbitals(hamiltonian, q, inlineContext());
        const difference = largestDifference(
          spectrum(fockMatrix(turned, 'product')),
          spectrum(fockMatrix(hamiltonian, 'product')),
        );
        expect(difference).toBeLessThan(1e-11);
      }),
      { numRuns: 6 },
    );
  });

  it('orbital rotation is the four-index transformation', async () => {
    const n = 3;
    const hamiltonian = randomHamiltonian(n, 99);
    const u = randomOrthogonal(n, uniform(4));
    const turned = await rotateOrbitals(hamiltonian, u, inlineContext());
    for (const [mu, nu] of [
      [0, 0],
      [2, 0],
      [0, 3],
      [1, 3],
    ] as const) {
      for (const [p, q, r, s] of [
        [0, 1, 2, 1],
        [2, 0, 1, 1],
        [1, 1, 0, 2],
      ] as const) {
        let [re, im] = [0, 0];
        for (let i = 0; i < n ** 4; i++) {
          const [a, b, c, d] = [Math.floor(i / 27), Math.floor(i / 9) % 3, Math.floor(i / 3) % 3, i % 3];
          const weight = u[p * n + a]! * u[q * n + b]! * u[r * n + c]! * u[s * n + d]!;
          const [x, y] = tensorElement(hamiltonian.g, n, mu, nu, a, b, c, d);
          re += weight * x;
          im += weight * y;
        }
        const [x, y] = tensorElement(turned.g, n, mu, nu, p, q, r, s);
        expect(x).toBeCloseTo(re, 12);
        expect(y).toBeCloseTo(im, 12);
      }
    }
  });

  it('the transpose turns the orbitals back', async () => {
    await fc.assert(
      fc.asyncProperty(seeds, fc.integer({ min: 1, max: 6 }), async (seed, n) => {
        const hamiltonian = randomHamiltonian(n, seed);
        const u = randomOrthogonal(n, uniform(seed + 3));
        const turned = await rotateOrbitals(hamiltonian, u, inlineContext());
        const back = await rotateOrbitals(turned, transpose(u, n, n), inlineContext());
        const { g } = hamiltonian;
        expect(largestDifference(back.h.planes, hamiltonian.h.planes)).toBeLessThan(1e-12);
        expect(largestDifference(back.k.planes, hamiltonian.k.planes)).toBeLessThan(1e-12);
        expect(largestDifference(back.g.charge!, g.charge!)).toBeLessThan(1e-12);
        expect(largestDifference(back.g.spinOrbit!.same, g.spinOrbit!.same)).toBeLessThan(1e-12);
        expect(
          largestDifference(back.g.spinOrbit!.other as Float64Array, g.spinOrbit!.other as Float64Array),
        ).toBeLessThan(1e-12);
        expect(largestDifference(back.g.spinSpin!, g.spinSpin!)).toBeLessThan(1e-12);
      }),
      { numRuns: 10 },
    );
  });

  it('spin rotation by 90° about z takes x to y', () => {
    const hamiltonian = randomHamiltonian(2, 12);
    const turned = rotateSpin(hamiltonian, rotation([0, 0, 1], Math.PI / 2));
    // T^k → Σ_l R_kl T^l with R_xy = −1, R_yx = 1: the coefficient of T^x is that of T^y before.
    expect(turned.h.planes[4 + 1]).toBeCloseTo(hamiltonian.h.planes[8 + 1]!, 14);
    expect(turned.h.planes[8 + 1]).toBeCloseTo(-hamiltonian.h.planes[4 + 1]!, 14);
    expect(toSpinOrbitals(turned.h).im[2]).toBeCloseTo(toSpinOrbitals(hamiltonian.h).im[2]!, 14);
  });
});

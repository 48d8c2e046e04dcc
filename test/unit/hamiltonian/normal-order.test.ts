import { describe, expect, it } from 'vitest';
import { normalOrder, restrictToWindow, spinOrbitMeanField, toSpinOrbitals } from '../../../core/hamiltonian';
import { fockMatrix } from '../../../core/verify/fock';
import { ALL_KINDS, largestDifference, randomHamiltonian, randomTensor, uniform } from './random-hamiltonian';

/** Sign and state of a†_P (create) or a_P on a determinant, written out on its own for this test. */
function act(create: boolean, P: number, [sign, state]: [number, number]): [number, number] {
  if (((state >> P) & 1) === (create ? 1 : 0)) return [0, 0];
  let swaps = 0;
  for (let R = 0; R < P; R++) swaps += (state >> R) & 1;
  return [swaps % 2 ? -sign : sign, state ^ (1 << P)];
}

describe('normal ordering with respect to a determinant', () => {
  // ⟨D|H|D⟩ = E; ⟨D|(excite)† H|D⟩ = F_ai; adding an electron or a hole gives ⟨a H b†⟩ = E δ + F, ⟨i† H j⟩ = E δ − F.
  // Together they fix E and every element of F.
  it.each([
    ['closed shell', 0b001111],
    ['one open shell', 0b000111],
    ['two open shells, both ↑', 0b010111],
    ['↑ and ↓ on different orbitals', 0b011001],
    ['empty', 0],
  ])('is exact on the whole Fock space of three orbitals: %s', (_, determinant) => {
    const n = 3;
    const hamiltonian = randomHamiltonian(n, 41 + determinant);
    const matrix = fockMatrix(hamiltonian, 'stored');
    const element = (bra: [number, number], ket: [number, number]) => {
      const i = bra[1] * matrix.n + ket[1];
      const sign = bra[0] * ket[0];
      return [sign * matrix.re[i]!, sign * matrix.im[i]!] as const;
    };
    const occupied = (P: number) => (determinant >> P) & 1;
    const up = [0, 1, 2].map((p) => occupied(2 * p));
    const down = [0, 1, 2].map((p) => occupied(2 * p + 1));
    const { energy, even, odd } = normalOrder(hamiltonian, up, down);
    const [a, b] = [toSpinOrbitals(even), toSpinOrbitals(odd)];
    const fock = (P: number, Q: number) =>
      [a.re[P * 6 + Q]! + b.re[P * 6 + Q]!, a.im[P * 6 + Q]! + b.im[P * 6 + Q]!] as const;
    const reference: [number, number] = [1, determinant];
    expect(element(reference, reference)[0]).toBeCloseTo(energy, 12);
    for (let P = 0; P < 6; P++) {
      for (let Q = 0; Q < 6; Q++) {
        const [x, y] = fock(P, Q);
        let expected: readonly [number, number];
        let found: readonly [number, number];
        if (!occupied(P) && occupied(Q)) {
          // ⟨D| a†_Q a_P H |D⟩, the bra being a†_P a_Q |D⟩.
          found = element(act(true, P, act(false, Q, reference)), reference);
          expected = [x, y];
        } else if (!occupied(P) && !occupied(Q)) {
          found = element(act(true, P, reference), act(true, Q, reference));
          expected = [x + (P === Q ? energy : 0), y];
        } else if (occupied(P) && occupied(Q)) {
          found = element(act(false, Q, reference), act(false, P, reference));
          expected = [(P === Q ? energy : 0) - x, -y];
        } else continue;
        expect(found[0]).toBeCloseTo(expected[0], 12);
        expect(found[1]).toBeCloseTo(expected[1], 12);
      }
    }
  });

  it('has no time-odd part for a closed shell, and one for an open shell', () => {
    const hamiltonian = randomHamiltonian(3, 7);
    const closed = normalOrder(hamiltonian, [1, 0, 0], [1, 0, 0]);
    expect(Math.max(...closed.odd.planes.map(Math.abs))).toBe(0);
    const open = normalOrder(hamiltonian, [1, 1, 0], [1, 0, 0]);
    expect(Math.max(...open.odd.planes.map(Math.abs))).toBeGreaterThan(0.1);
  });
});

describe('spin–orbit mean field', () => {
  it.each(['independent', 'multiple'] as const)(
    'is the even part of normal ordering over the spin average, same and other orbit %s',
    (spinOrbit) => {
      for (const n of [1, 2, 4]) {
        const kinds = { charge: false, spinOrbit, spinSpin: false };
        const hamiltonian = randomHamiltonian(n, n, kinds);
        const occupations = [2, 1.25, 0.5, 0].slice(0, n);
        const half = occupations.map((x) => x / 2);
        const { even, energy } = normalOrder(hamiltonian, half, half);
        const expected = even.planes.map((value, i) => value - hamiltonian.h.planes[i]!);
        const found = spinOrbitMeanField(n, hamiltonian.g.spinOrbit!, occupations);
        expect(largestDifference(found, expected.subarray(n * n))).toBeLessThan(1e-13);
        // No energy goes with it: the reference has no spin density.
        const oneBody = occupations.reduce((sum, x, p) => sum + x * hamiltonian.h.planes[p * n + p]!, 0);
        expect(energy).toBeCloseTo(hamiltonian.constant + oneBody, 13);
      }
    },
  );

  it('is the frozen-core formula of the data description for O = 2S and filled orbitals', () => {
    const n = 4;
    const g = randomTensor(n, uniform(9), { ...ALL_KINDS, spinOrbit: 'multiple' });
    const w = g.spinOrbit!.same;
    const pair = (p: number, q: number) => (p >= q ? (p * (p + 1)) / 2 + q : (q * (q + 1)) / 2 + p);
    const at = (k: number, p: number, q: number, r: number, s: number) => {
      if (p === q) return 0;
      const [a, b] = p > q ? [p, q] : [q, p];
      return (p > q ? 1 : -1) * w[(k * 6 + (a * (a - 1)) / 2 + b) * 10 + pair(r, s)]!;
    };
    const found = spinOrbitMeanField(n, g.spinOrbit!, [2, 0, 2, 0]);
    for (let k = 0; k < 3; k++) {
      for (let p = 0; p < n; p++) {
        for (let q = 0; q < n; q++) {
          let expected = 0;
          for (const c of [0, 2]) {
            expected += 2 * at(k, p, q, c, c) - 3 * (at(k, p, c, c, q) + at(k, c, q, p, c));
          }
          expect(found[(k * n + p) * n + q]).toBeCloseTo(expected, 13);
        }
      }
    }
  });
});

describe('window', () => {
  it('with full and empty frozen orbitals equals the full matrix between states with that core', () => {
    const hamiltonian = randomHamiltonian(4, 23, ALL_KINDS, 4);
    const window = restrictToWindow(hamiltonian, {
      orbitals: [1, 3],
      electrons: 2,
      occupations: [2, 1, 0, 1],
    });
    const small = fockMatrix(window, 'product');
    const full = fockMatrix(hamiltonian, 'product');
    // Window states over orbitals 1 and 3, orbital 0 filled, orbital 2 empty. The core pair is even, so no sign.
    const embed = (state: number) => 0b11 | ((state & 0b11) << 2) | ((state >> 2) << 6);
    for (let i = 0; i < 16; i++) {
      for (let j = 0; j < 16; j++) {
        const at = embed(i) * full.n + embed(j);
        expect(small.re[i * 16 + j]).toBeCloseTo(full.re[at]!, 12);
        expect(small.im[i * 16 + j]).toBeCloseTo(full.im[at]!, 12);
      }
    }
  });

  it('refuses electrons that do not add up', () => {
    const hamiltonian = randomHamiltonian(3, 1, ALL_KINDS, 4);
    const occupations = [2, 2, 0];
    expect(() => restrictToWindow(hamiltonian, { orbitals: [1, 2], electrons: 3, occupations })).toThrow(
      /3 electrons in 2 orbitals beside 2 frozen ones; expected 4 electrons together/,
    );
    expect(() => restrictToWindow(hamiltonian, { orbitals: [2, 1], electrons: 2, occupations })).toThrow(
      /ascending/,
    );
  });
});

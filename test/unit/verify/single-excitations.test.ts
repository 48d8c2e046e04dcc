import { describe, expect, it } from 'vitest';
import { fromStoredForm } from '../../../core/hamiltonian';
import { hermitianEigenvalues } from '../../../core/linalg';
import { fockMatrix, singleExcitations, watchedStates } from '../../../core/verify';
import { randomHamiltonian } from '../hamiltonian/random-hamiltonian';

describe('single excitations', () => {
  it.each([
    ['closed shell', [1, 1, 0, 0, 0, 0]],
    ['open shell', [1, 1, 0, 1, 0, 0]],
    ['two holes', [0, 1, 1, 1, 1, 0]],
  ])('%s: the levels are those of the same determinants in Fock space', (_, occupied) => {
    const electrons = occupied.filter((x) => x === 1).length;
    const raw = randomHamiltonian(
      3,
      31 + electrons,
      { charge: true, spinOrbit: 'independent', spinSpin: true },
      electrons,
    );
    const h = fromStoredForm(raw);
    const whole = fockMatrix(h, 'stored');
    const reference = occupied.reduce((bits, x, P) => bits | (x << P), 0);
    const states = [reference];
    for (const [i, filled] of occupied.entries()) {
      for (const [a, other] of occupied.entries()) {
        if (filled === 1 && other === 0) states.push(reference ^ (1 << i) ^ (1 << a));
      }
    }
    const n = states.length;
    const block = { n, re: new Float64Array(n * n), im: new Float64Array(n * n) };
    for (const [r, row] of states.entries()) {
      for (const [c, column] of states.entries()) {
        block.re[r * n + c] = whole.re[row * whole.n + column]!;
        block.im[r * n + c] = whole.im[row * whole.n + column]!;
      }
    }
    const expected = hermitianEigenvalues(block);
    const found = hermitianEigenvalues(singleExcitations(h, Uint8Array.from(occupied)));
    expect(found).toHaveLength(1 + electrons * (6 - electrons));
    for (const [i, value] of found.entries()) expect(value).toBeCloseTo(expected[i]!, 10);
  });
});

describe('watched states', () => {
  const diagonal = (values: readonly number[]) => {
    const n = values.length;
    const re = new Float64Array(n * n);
    for (const [i, x] of values.entries()) re[i * n + i] = x;
    return { n, re, im: new Float64Array(n * n) };
  };
  const zero = diagonal([0, 0, 0, 0, 0]);

  it('sees couplings among the lowest states and none with the others', () => {
    const states = watchedStates(diagonal([3, -1, 0, 1, 2]), 2);
    expect([...states.levels]).toEqual([-1, 0]);
    const coupled = diagonal([0, 0, 0, 0, 0]);
    // −i c between the two lowest states, which are numbers 1 and 2; a large element elsewhere.
    coupled.im[1 * 5 + 2] = -0.25;
    coupled.im[2 * 5 + 1] = 0.25;
    coupled.re[0] = 100;
    coupled.re[1 * 5 + 3] = 7;
    coupled.re[3 * 5 + 1] = 7;
    for (const [a, b] of [
      [coupled, zero],
      [zero, coupled],
    ] as const) {
      const { norm, centred } = states.change(a, b);
      expect(norm).toBeCloseTo(0.25, 12);
      // Eigenvalues ±0.25 in the space of the two.
      expect(centred).toBeCloseTo(0.25, 12);
    }
  });

  it('tells a shift that all share from the rest', () => {
    const states = watchedStates(diagonal([3, -1, 0, 1, 2]), 2);
    const { norm, centred } = states.change(diagonal([9, 0.3, 0.5, 9, 9]), zero);
    expect(norm).toBeCloseTo(0.5, 12);
    expect(centred).toBeCloseTo(0.1, 12);
  });

  it('adds the partners of the last state', () => {
    expect(watchedStates(diagonal([1, 0, 1, 5, 1 + 1e-9]), 2).levels).toHaveLength(4);
  });
});

import { describe, expect, it } from 'vitest';
import { buildEncoding, parseVariant, type SparseProgram } from '../../../core/encode';
import { restrictToWindow, type SpatialHamiltonian, spinorForm } from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';
import { levelShifts, realisedSparseRounding, windowOfSparseProgram } from '../../../core/verify';
import { difference, matrixOf, operatorNorm } from '../encode/fock-space';
import { randomHamiltonian } from '../hamiltonian/random-hamiltonian';

const ctx = inlineContext();
const KINDS = [
  { charge: true, spinOrbit: 'independent', spinSpin: true },
  { charge: true, spinOrbit: 'multiple', spinSpin: false },
  { charge: true, spinOrbit: 'none', spinSpin: false },
] as const;
const NAMES = ['sparse/-/index/none/clean', 'sparse/joint/index/none/clean'];
const CASES = NAMES.flatMap((name) => KINDS.map((kinds) => [name, kinds] as const));

async function programOf(h: SpatialHamiltonian, name: string): Promise<SparseProgram> {
  return (await buildEncoding(h, null, parseVariant(name), {}, ctx)).sparseProgram!();
}

describe.each(CASES)('a sparse encoding seen in a window: %s, %o', (name, kinds) => {
  it('is the whole operator where the window is', async () => {
    const h = randomHamiltonian(3, 8, kinds, 3);
    const whole = { orbitals: [0, 1, 2], electrons: 3, occupations: [] };
    const rebuilt = await windowOfSparseProgram(await programOf(h, name), whole, ctx);
    expect(operatorNorm(difference(matrixOf(rebuilt), matrixOf(h)))).toBeLessThan(1e-10);
  });

  it('has the integrals and levels of the restricted Hamiltonian', async () => {
    const h = randomHamiltonian(4, 8, kinds, 4);
    const program = await programOf(h, name);
    for (const occupations of [
      [2, 0, 1, 1],
      [1.5, 0.5, 2, 0],
    ]) {
      const window = { orbitals: [2, 3], electrons: 2, occupations };
      const restricted = restrictToWindow(h, window);
      const rows = await windowOfSparseProgram(program, window, ctx);
      const exact = spinorForm(restricted);
      if (rows.kind !== 'spinor') throw new Error('over spin orbitals');
      const largest = (a: Float64Array, b: Float64Array) =>
        a.reduce((most, x, i) => Math.max(most, Math.abs(x - b[i]!)), 0);
      expect(largest(rows.h.re, exact.h.re)).toBeLessThan(1e-10);
      expect(largest(rows.h.im, exact.h.im)).toBeLessThan(1e-10);
      expect(rows.constant).toBeCloseTo(exact.constant, 9);
      expect((await levelShifts(restricted, rows, 6, ctx)).largest).toBeLessThan(1e-9);
    }
  });

  it('changes by no more than the realised bound where weights do', async () => {
    const h = randomHamiltonian(2, 8, kinds, 2);
    const program = await programOf(h, name);
    const changed = {
      ...program,
      weights: program.weights.map((x, i) => x + (i % 3 === 0 ? 1e-3 : -2e-3)),
      otherShare: program.otherShare + 0.01,
    };
    const whole = { orbitals: [0, 1], electrons: 2, occupations: [] };
    const matrix = async (own: SparseProgram) => matrixOf(await windowOfSparseProgram(own, whole, ctx));
    const exact = operatorNorm(difference(await matrix(changed), await matrix(program)));
    const { bound, typical } = realisedSparseRounding(program, changed);
    expect(exact).toBeGreaterThan(1e-4);
    expect(bound).toBeGreaterThanOrEqual(exact);
    expect(bound).toBeLessThan(100 * exact);
    expect(typical).toBeLessThan(bound);
  });
});

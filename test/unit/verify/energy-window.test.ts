import { describe, expect, it } from 'vitest';
import { encodedProgram, tripletTables } from '../../../core/circuit';
import { buildEncoding, parseVariant } from '../../../core/encode';
import { factorise } from '../../../core/factor';
import { restrictToWindow, spinorForm } from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';
import { levelShifts, realisedRounding, spinorFockMatrix, windowOfProgram } from '../../../core/verify';
import { programOperator } from '../circuit/majorana-algebra';
import { difference, operatorNorm } from '../encode/fock-space';
import { randomHamiltonian } from '../hamiltonian/random-hamiltonian';

const ctx = inlineContext();
const ALL = { charge: true, spinOrbit: 'independent', spinSpin: true } as const;

describe('an encoding seen in a window', () => {
  it.each(['joint', 'separate'])('%s: its levels are those of the restricted integrals', async (grouping) => {
    const h = randomHamiltonian(4, 8, ALL, 4);
    const factors = await factorise(h, { grouping: grouping as 'joint' }, ctx);
    for (const occupations of [
      [2, 0, 1, 1],
      [1.5, 0.5, 2, 0],
    ]) {
      const window = { orbitals: [2, 3], electrons: 2, occupations };
      const restricted = restrictToWindow(h, window);
      for (const shift of ['none', 'median']) {
        const variant = parseVariant(`triplet/${grouping}/swap-layers/${shift}/clean`);
        const encoding = await buildEncoding(h, factors, variant, {}, ctx);
        const rows = await windowOfProgram(encoding.program!(), window, ctx);
        const { largest, dim } = await levelShifts(restricted, rows, 6, ctx);
        expect(dim).toBe(6);
        // A shift holds where the number of electrons is sharp: not for fractional frozen occupations.
        if (shift === 'none' || occupations[0] === 2) expect(largest).toBeLessThan(1e-9);
        if (shift === 'none') {
          const exact = spinorForm(restricted);
          expect(Math.max(...rows.h.re.map((x, i) => Math.abs(x - exact.h.re[i]!)))).toBeLessThan(1e-10);
          expect(rows.constant).toBeCloseTo(exact.constant, 9);
        }
      }
    }
  });

  it('over all orbitals it is the operator of the rows, rounded or not', async () => {
    const h = randomHamiltonian(2, 9, ALL, 2);
    const factors = await factorise(h, { grouping: 'separate' }, ctx);
    const variant = parseVariant('triplet/separate/swap-layers/median/clean');
    const given = (await buildEncoding(h, factors, variant, {}, ctx)).program!();
    const encoded = encodedProgram(given, tripletTables(given, { keep: 7, innerKeep: 5, rotation: 7 }));
    const window = { orbitals: [0, 1], electrons: 2, occupations: [0, 0] };
    const hamiltonians = [];
    for (const program of [given, encoded]) {
      const found = await windowOfProgram(program, window, ctx);
      hamiltonians.push(found);
      const expected = programOperator(program);
      for (let i = 0; i < expected.n; i++) expected.re[i * expected.n + i]! += program.constant;
      expect(operatorNorm(difference(spinorFockMatrix(found, 'product'), expected))).toBeLessThan(1e-10);
    }
    const shifts = await levelShifts(hamiltonians[0]!, hamiltonians[1]!, 6, ctx);
    const { bound } = await realisedRounding(given, encoded, 2, ctx);
    expect(shifts.largest).toBeGreaterThan(1e-6);
    expect(shifts.largest).toBeLessThan(bound);
    expect(shifts.largestGap).toBeLessThan(2 * bound);
  });
});

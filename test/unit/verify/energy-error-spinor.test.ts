import { describe, expect, it } from 'vitest';
import { encodedSpinorProgram, spinorTables } from '../../../core/circuit';
import { buildEncoding, parseVariant, type SpinorProgram } from '../../../core/encode';
import { factorise } from '../../../core/factor';
import { type SpinHamiltonian, spinorForm, spinorFromStoredForm } from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';
import { realisedSpinorRounding, windowOfSpinorProgram } from '../../../core/verify';
import { addScaled } from '../circuit/majorana-algebra';
import { distance, identity, programOperator } from '../circuit/spinor-support';
import { difference, matrixOf, operatorNorm, restrict } from '../encode/fock-space';
import { randomHamiltonian } from '../hamiltonian/random-hamiltonian';

const ctx = inlineContext();

async function programOf(h: SpinHamiltonian, grouping: 'joint' | 'separate'): Promise<SpinorProgram> {
  const variant = parseVariant(`spinor/${grouping}/index/median/clean`);
  return (await buildEncoding(h, await factorise(h, { grouping }, ctx), variant, {}, ctx)).spinorProgram!();
}

const all = randomHamiltonian(2, 31, { charge: true, spinOrbit: 'multiple', spinSpin: true }, 2);
const orbit = randomHamiltonian(2, 32, { charge: true, spinOrbit: 'multiple', spinSpin: false }, 3);
const file = spinorForm(all);
/** A field along z on the first orbital: no time-reversed partners. */
const field = { re: file.h.re.slice(), im: file.h.im };
field.re[0]! += 0.2;
field.re[file.spinors + 1]! -= 0.2;
const magnetic = spinorFromStoredForm({ ...file, h: field });

const CASES: readonly (readonly [string, SpinHamiltonian, 'joint' | 'separate', boolean])[] = [
  ['all terms, joint', all, 'joint', true],
  ['all terms, separate', all, 'separate', true],
  ['spin-orbit, separate', orbit, 'separate', true],
  ['over spinors', file, 'joint', true],
  ['over spinors in a field', magnetic, 'joint', false],
];

// The Fock-space operator comes from literal creation operators, which know nothing of eigenvalues.
describe('realised rounding error of the spinor form', () => {
  it.each(CASES)('%s: bounds the operator norm of the difference', async (_, h, grouping, partners) => {
    const program = await programOf(h, grouping);
    expect(program.partners).toBe(partners);
    for (const [keep, rotation] of [
      [14, 7],
      [6, 14],
      [10, 10],
    ] as const) {
      const tables = spinorTables(program, { keep, innerKeep: keep, rotation }, []);
      const encoded = encodedSpinorProgram(program, tables);
      const change = difference(programOperator(encoded), programOperator(program));
      for (const electrons of [null, 1, 2, 3]) {
        const { bound, typical, items, oneBody } = await realisedSpinorRounding(
          program,
          encoded,
          electrons,
          ctx,
        );
        const exact = operatorNorm(electrons === null ? change : restrict(change, electrons));
        expect(exact).toBeGreaterThan(0);
        expect(bound).toBeGreaterThanOrEqual(exact);
        // Not empty: the bound is within two orders of magnitude of the truth here.
        expect(bound).toBeLessThan(100 * exact);
        expect(bound).toBeCloseTo(
          items.reduce((a, b) => a + b, oneBody),
          12,
        );
        expect(typical).toBeLessThanOrEqual(bound);
      }
    }
  });

  it('is zero where nothing is rounded, and counts one changed item alone', async () => {
    const program = await programOf(orbit, 'separate');
    expect((await realisedSpinorRounding(program, program, null, ctx)).bound).toBeLessThan(1e-13);
    const changed = {
      ...program,
      items: program.items.map((item, t) =>
        t === 1
          ? { ...item, faces: item.faces.map((face) => ({ ...face, lambda: 1.01 * face.lambda })) }
          : item,
      ),
    };
    const { items, oneBody } = await realisedSpinorRounding(program, changed, null, ctx);
    expect(oneBody).toBeLessThan(1e-13);
    const lambda = program.items[1]!.faces.reduce((sum, face) => sum + face.lambda, 0);
    expect(items[1]).toBeCloseTo(0.01 * lambda, 12);
    expect(items.filter((x) => x > 1e-12)).toHaveLength(1);
  });
});

it.each(CASES)(
  'a window of all orbitals is the whole operator of a spinor program: %s',
  async (_, h, grouping) => {
    const program = await programOf(h, grouping);
    const whole = { orbitals: [0, 1], electrons: h.electrons, occupations: [] };
    const rebuilt = matrixOf(await windowOfSpinorProgram(program, whole, ctx));
    const literal = programOperator(program);
    addScaled(literal, identity(literal.n), program.constant);
    expect(distance(rebuilt, literal)).toBeLessThan(1e-10);
  },
);

import { describe, expect, it } from 'vitest';
import { buildEncoding, parseVariant } from '../../../core/encode';
import { compressFactors, factorise, type Grouping } from '../../../core/factor';
import { inlineContext, type JobContext } from '../../../core/job';
import { difference, matrixOf, operatorNorm } from '../encode/fock-space';
import { ALL_KINDS, randomHamiltonian } from '../hamiltonian/random-hamiltonian';

const ctx = inlineContext(2);
const groupings: readonly Grouping[] = ['separate', 'joint'];

describe('compressed factors of a Hamiltonian without any symmetry', () => {
  // Indefinite charge part, same-orbit and other-orbit arrays of their own, spin–spin.
  const h = randomHamiltonian(3, 12, ALL_KINDS);

  it.each(groupings)('%s: stand for the same operator on Fock space, at a smaller λ', async (grouping) => {
    const given = await factorise(h, { grouping, principal: true }, ctx);
    expect(
      given.blocks.some((b) => b.kind === 'squares' && new Set(b.weights.map(Math.sign)).size === 2),
    ).toBe(true);
    const mixed = await compressFactors(h, given, {}, ctx);
    const encode = (f: typeof given, name: string) =>
      buildEncoding(h, f, parseVariant(`${name}/clean`), {}, ctx);
    const plain = await encode(mixed, `triplet/${grouping}/index/none`);
    const exact = matrixOf(h);
    const size = operatorNorm(exact);
    expect(operatorNorm(difference(matrixOf(plain.rebuild()), exact))).toBeLessThan(1e-12 * size);
    const before = await encode(given, `triplet/${grouping}/index/median`);
    const after = await encode(mixed, `compressed/${grouping}/index/optimised`);
    expect(after.lambda.total).toBeLessThan(0.97 * before.lambda.total);
  });

  it('are the same whatever order and copies the pieces of work go through', async () => {
    const given = await factorise(h, { grouping: 'joint' }, ctx);
    const elsewhere: JobContext = {
      ...ctx,
      async map(task, inputs) {
        const outputs = new Array(inputs.length);
        for (let i = inputs.length - 1; i >= 0; i--) {
          outputs[i] = structuredClone(await task.run(structuredClone(inputs[i]!), inlineContext(2)));
        }
        return outputs;
      },
    };
    const options = { steps: 8, factors: 20 };
    expect(await compressFactors(h, given, options, elsewhere)).toEqual(
      await compressFactors(h, given, options, ctx),
    );
  });
});

describe('a limit to the number of factors', () => {
  // Two doubly filled orbitals of three: bits 0…3 of a state, orbital by orbital.
  const occupations = [2, 2, 0];
  const filled = 0b1111;
  const whole = randomHamiltonian(3, 21, { charge: true, spinOrbit: 'none', spinSpin: false });
  const h = { ...whole, electrons: 4 };

  it.each(groupings)(
    '%s: leaves the energy of a closed shell as it is, and keeps to its bound',
    async (grouping) => {
      const given = await factorise(h, { grouping, occupations, principal: true, most: 2 }, ctx);
      expect(given.residual.dropped).toBeGreaterThan(2);
      const encoding = await buildEncoding(
        h,
        given,
        parseVariant(`triplet/${grouping}/index/none/clean`),
        {},
        ctx,
      );
      const off = difference(matrixOf(encoding.rebuild()), matrixOf(h));
      expect(Math.abs(off.re[filled * off.n + filled]!)).toBeLessThan(1e-12);
      const moved = operatorNorm(off);
      expect(moved).toBeGreaterThan(1e-3);
      expect(moved).toBeLessThanOrEqual(given.residual.oneNormBound);
    },
  );
});

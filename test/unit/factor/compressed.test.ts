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

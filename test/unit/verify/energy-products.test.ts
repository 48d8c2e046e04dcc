import { expect, it } from 'vitest';
import { encodedProgram, tripletTables } from '../../../core/circuit';
import type { TripletProgram } from '../../../core/encode';
import type { Mu } from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';
import { realisedRounding, windowOfProgram } from '../../../core/verify';
import { addScaled, programOperator } from '../circuit/majorana-algebra';
import { distance, identity, randomNumbers, row } from '../circuit/triplet-support';
import { difference, matrixOf, operatorNorm, restrict } from '../encode/fock-space';

const ctx = inlineContext();
const N = 3;

/** Products of vectors that are not orthogonal, of both signs, beside squares and a one-body part. */
function program(weight: number): TripletProgram {
  const random = randomNumbers(29);
  const rows = (...list: ['S' | 'A', ...Mu[]][]) => list.map(([kind, ...mus]) => row(N, kind, mus, random));
  return {
    orbitals: N,
    constant: 0.3,
    oneBody: rows(['S', 0], ['A', 2]),
    items: [{ sign: -1, paired: false, lambda: [0.4], rows: rows(['S', 0], ['S', 0]) }],
    products: {
      vectors: Array.from({ length: 4 }, () => row(N, 'S', [0], random).u),
      first: Uint32Array.of(0, 0, 1, 2, 1, 0),
      second: Uint32Array.of(1, 2, 2, 2, 1, 3),
      lambda: Float64Array.of(0.5, 0.3, 0.7, 0.2, 0.4, 0.1).map((x) => weight * x),
      sign: Int8Array.of(1, -1, 1, -1, 1, -1),
    },
  };
}

it('realised rounding of products bounds the operator norm of the difference', async () => {
  const given = program(1);
  for (const [keep, rotation] of [
    [16, 7],
    [6, 16],
    [9, 9],
  ] as const) {
    const encoded = encodedProgram(given, tripletTables(given, { keep, innerKeep: keep, rotation }));
    const change = difference(programOperator(encoded), programOperator(given));
    for (const electrons of [null, 1, 2, 3, 5]) {
      const exact = operatorNorm(electrons === null ? change : restrict(change, electrons));
      const { bound, typical, products } = await realisedRounding(given, encoded, electrons, ctx);
      expect(bound).toBeGreaterThanOrEqual(exact);
      expect(bound).toBeLessThan(100 * exact);
      expect(typical).toBeLessThan(bound);
      expect(products.every((x) => x > 0)).toBe(true);
    }
  }
});

it('products alone: the bound holds without the rest, and is not far off', async () => {
  const given = program(1);
  const encoded = encodedProgram(given, tripletTables(given, { keep: 20, innerKeep: 20, rotation: 8 }));
  const alone = { ...given, products: encoded.products! };
  const exact = operatorNorm(difference(programOperator(alone), programOperator(given)));
  const { bound, oneBody, items } = await realisedRounding(given, alone, null, ctx);
  expect(oneBody + items[0]!).toBeLessThan(1e-13);
  expect(bound).toBeGreaterThanOrEqual(exact);
  expect(bound).toBeLessThan(10 * exact);
});

it('a window of all orbitals is the whole operator, products included', async () => {
  for (const weight of [0, 1, 3]) {
    const given = program(weight);
    const whole = { orbitals: [0, 1, 2], electrons: 2, occupations: [] };
    const literal = programOperator(given);
    addScaled(literal, identity(literal.n), given.constant);
    expect(distance(matrixOf(await windowOfProgram(given, whole, ctx)), literal)).toBeLessThan(1e-11);
  }
});

import { describe, expect, it } from 'vitest';
import { encodedProgram, tripletTables } from '../../../core/circuit';
import { buildEncoding, type Encoding, parseVariant } from '../../../core/encode';
import { roundingError } from '../../../core/estimate';
import { factorise } from '../../../core/factor';
import type { SpatialHamiltonian } from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';
import { realisedRounding } from '../../../core/verify';
import { programOperator } from '../circuit/majorana-algebra';
import { difference, operatorNorm, restrict } from '../encode/fock-space';
import { randomHamiltonian } from '../hamiltonian/random-hamiltonian';

const ctx = inlineContext();

async function encode(
  h: SpatialHamiltonian,
  grouping: 'joint' | 'separate',
  shift: string,
): Promise<Encoding> {
  const variant = parseVariant(`triplet/${grouping}/swap-layers/${shift}/clean`);
  return buildEncoding(h, await factorise(h, { grouping }, ctx), variant, {}, ctx);
}

const CASES = [
  ['joint', 'none', { charge: true, spinOrbit: 'independent', spinSpin: true }],
  ['joint', 'median', { charge: true, spinOrbit: 'multiple', spinSpin: false }],
  ['separate', 'median', { charge: true, spinOrbit: 'multiple', spinSpin: false }],
  ['separate', 'none', { charge: true, spinOrbit: 'independent', spinSpin: true }],
] as const;

// The Fock-space operator comes from literal Majorana matrices, which know nothing of eigenvalues of planes.
describe('realised rounding error', () => {
  for (const [grouping, shift, kinds] of CASES) {
    it(`${grouping}, ${shift}: bounds the operator norm of the difference, below the worst case`, async () => {
      const h = randomHamiltonian(2, 31, kinds, 2);
      const encoding = await encode(h, grouping, shift);
      const program = encoding.program!();
      for (const [keep, rotation] of [
        [14, 6],
        [6, 14],
        [10, 10],
      ] as const) {
        const tables = tripletTables(program, { keep, innerKeep: keep, rotation });
        const encoded = encodedProgram(program, tables);
        const change = difference(programOperator(encoded), programOperator(program));
        const worst = roundingError(encoding.shape, encoding.lambda, { keep, rotation });
        for (const electrons of [null, 1, 2, 3]) {
          const { bound, typical, items, oneBody } = await realisedRounding(program, encoded, electrons, ctx);
          const exact = operatorNorm(electrons === null ? change : restrict(change, electrons));
          expect(exact).toBeGreaterThan(0);
          expect(bound).toBeGreaterThanOrEqual(exact);
          // Not empty: the bound is within two orders of magnitude of the truth here.
          expect(bound).toBeLessThan(100 * exact);
          expect(bound).toBeLessThan(worst.rigorous);
          expect(bound).toBeCloseTo(
            items.reduce((a, b) => a + b, oneBody),
            12,
          );
          expect(typical).toBeLessThanOrEqual(bound);
        }
      }
    });
  }

  it('is zero where nothing is rounded, and counts one changed item alone', async () => {
    const program = (await encode(randomHamiltonian(2, 5, CASES[2][2], 2), 'separate', 'none')).program!();
    expect((await realisedRounding(program, program, null, ctx)).bound).toBe(0);
    const changed = {
      ...program,
      items: program.items.map((item, t) =>
        t === 1 ? { ...item, lambda: item.lambda.map((x) => 1.01 * x) } : item,
      ),
    };
    const { items, oneBody } = await realisedRounding(program, changed, null, ctx);
    const lambda = program.items[1]!.lambda.reduce((a, b) => a + b, 0);
    expect(oneBody).toBe(0);
    expect(items[1]).toBeCloseTo(0.01 * lambda, 12);
    expect(items.filter((x) => x > 0)).toHaveLength(1);
  });
});

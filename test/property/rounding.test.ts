import fc from 'fast-check';
import { expect, it } from 'vitest';
import { encodedProgram, tripletTables } from '../../core/circuit';
import type { TripletItem, TripletProgram, TripletRow } from '../../core/encode';
import type { Mu } from '../../core/hamiltonian';
import { inlineContext } from '../../core/job';
import { realisedRounding } from '../../core/verify';
import { programOperator } from '../unit/circuit/majorana-algebra';
import { difference, operatorNorm, restrict } from '../unit/encode/fock-space';

const N = 2;
const ctx = inlineContext();

/** Rows over two orbitals: one angle says it all, and the second vector of an A row is orthogonal. */
const row = (kind: 'S' | 'A', faces: number) =>
  fc
    .record({
      angle: fc.double({ min: 0, max: 2 * Math.PI, noNaN: true }),
      faces: fc.array(
        fc.record({
          mu: fc.constantFrom<Mu>(0, 1, 2, 3),
          weight: fc.double({ min: 0.05, max: 1, noNaN: true }),
          sign: fc.constantFrom<1 | -1>(1, -1),
        }),
        { minLength: faces, maxLength: faces },
      ),
    })
    .map(({ angle, faces: list }): TripletRow => {
      const u = Float64Array.of(Math.cos(angle), Math.sin(angle));
      return {
        kind,
        u,
        v: kind === 'S' ? u : Float64Array.of(-Math.sin(angle), Math.cos(angle)),
        faces: list,
      };
    });

const item = fc.tuple(fc.constantFrom(1, 2), fc.boolean()).chain(([faces, paired]) =>
  fc
    .record({
      sign: fc.constantFrom<1 | -1>(1, -1),
      lambda: fc.array(fc.double({ min: 0.01, max: 2, noNaN: true }), { minLength: faces, maxLength: faces }),
      pairs: fc.array(row('A', faces), { minLength: paired ? 1 : 0, maxLength: 2 }),
      singles: fc.array(row('S', faces), { minLength: 1, maxLength: 3 }),
    })
    .map(
      ({ sign, lambda, pairs, singles }): TripletItem => ({
        sign,
        lambda,
        paired,
        rows: [...pairs, ...singles],
      }),
    ),
);

const programs = fc
  .record({
    items: fc.array(item, { minLength: 1, maxLength: 3 }),
    oneBody: fc.array(row('S', 1), { minLength: 1, maxLength: 2 }),
  })
  .map(({ items, oneBody }): TripletProgram => ({ orbitals: N, constant: 0, items, oneBody }));

const bits = fc.record({
  keep: fc.integer({ min: 4, max: 12 }),
  innerKeep: fc.integer({ min: 3, max: 12 }),
  rotation: fc.integer({ min: 4, max: 14 }),
});

it('the realised rounding error bounds the operator norm of the difference, in every sector', async () => {
  await fc.assert(
    fc.asyncProperty(programs, bits, fc.constantFrom(null, 1, 2, 3), async (program, widths, electrons) => {
      const encoded = encodedProgram(program, tripletTables(program, widths));
      const change = difference(programOperator(encoded), programOperator(program));
      const exact = operatorNorm(electrons === null ? change : restrict(change, electrons));
      const { bound } = await realisedRounding(program, encoded, electrons, ctx);
      expect(bound).toBeGreaterThanOrEqual(exact - 1e-12);
    }),
    { seed: 4, numRuns: 60 },
  );
});

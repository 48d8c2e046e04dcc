import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { buildEncoding, parseVariant } from '../../../core/encode';
import { type Factorisation, factorise, type Grouping, optimiseShifts } from '../../../core/factor';
import { ShiftObjective } from '../../../core/factor/shifts/objective';
import { shiftProblems } from '../../../core/factor/shifts/problem';
import { leastWithSlope } from '../../../core/factor/shifts/spectrum-cost';
import {
  buildHamiltonian,
  type SpatialHamiltonian,
  type SpinHamiltonian,
  spinorForm,
} from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';
import { findSet, loadSet } from '../../published/data-set';
import { randomHamiltonian, uniform } from '../hamiltonian/random-hamiltonian';

const ctx = inlineContext();
const seeds = fc.integer({ min: 0, max: 2 ** 31 });

const number = (max: number) => fc.double({ min: -max, max, noNaN: true });

describe('cost of one factor with a slope', () => {
  it('has the least value that is found by trying', () => {
    const values = fc.array(number(3), { minLength: 1, maxLength: 7 });
    fc.assert(
      fc.property(
        values,
        fc.constantFrom(1, 2),
        fc.double({ min: 0.1, max: 2, noNaN: true }),
        fc.double({ min: 0, max: 2, noNaN: true }),
        number(1),
        (list, power, scale, rest, part) => {
          const sorted = Float64Array.from(list).sort();
          // A linear cost is bounded below only while the slope does not exceed its own.
          const slope = part * (power === 1 ? 0.999 * scale * list.length : 20);
          const at = (c: number) =>
            scale * (rest + sorted.reduce((sum, x) => sum + Math.abs(x - c), 0)) ** power + slope * c;
          // Convex, so that halving finds it; its kinks by themselves, because halving comes only close to them.
          let [low, high] = [-1000, 1000];
          for (let i = 0; i < 120; i++) {
            const [a, b] = [low + (high - low) / 3, high - (high - low) / 3];
            if (at(a) < at(b)) high = b;
            else low = a;
          }
          const tried = Math.min(at(low), ...Array.from(sorted, at));
          const least = leastWithSlope(sorted, { power: power as 1 | 2, scale, rest }, slope);
          expect(Math.abs(least - tried)).toBeLessThan(1e-8 * (1 + Math.abs(tried)));
        },
      ),
      { numRuns: 60 },
    );
  });

  it('is the vertex of the parabola for one value, and −∞ below a slope too steep for a linear cost', () => {
    // ½(1 + |c|)² − 3c: least where 1 + c = 3.
    expect(leastWithSlope(Float64Array.of(0), { power: 2, scale: 0.5, rest: 1 }, -3)).toBeCloseTo(-1.5, 12);
    const steep = leastWithSlope(Float64Array.of(0, 1), { power: 1, scale: 1, rest: 0 }, 2.1);
    expect(steep).toBe(Number.NEGATIVE_INFINITY);
  });
});

/** A spatial Hamiltonian in both groupings, and its spinor form. */
async function cases(
  seed: number,
  n: number,
  electrons: number,
): Promise<[SpinHamiltonian, Factorisation][]> {
  const h = randomHamiltonian(n, seed, { charge: true, spinOrbit: 'multiple', spinSpin: true }, electrons);
  const spinors = spinorForm(h);
  return [
    [h, await factorise(h, { grouping: 'separate' }, ctx)],
    [h, await factorise(h, { grouping: 'joint' }, ctx)],
    [spinors, await factorise(spinors, { grouping: 'joint' }, ctx)],
  ];
}

describe('λ as a function of all shifts', () => {
  it('has the gradient that finite differences give, and a lower bound that no shifts undercut', async () => {
    await fc.assert(
      fc.asyncProperty(seeds, fc.constantFrom(1, 2, 3, 5), async (seed, electrons) => {
        for (const [h, factors] of await cases(seed, 3, electrons)) {
          const problems = [
            ...(await shiftProblems(h, factors, 'triplet', ctx)),
            ...(await shiftProblems(h, factors, 'spinor', ctx)),
          ];
          for (const problem of problems) {
            const objective = new ShiftObjective(problem);
            const random = uniform(seed + 1);
            const point = () => objective.medians.map((c) => c + 0.5 * random());
            const c = point();
            const width = 0.1;
            const here = objective.at(c, width);
            for (let trial = 0; trial < 4; trial++) {
              const direction = Float64Array.from(c, random);
              const moved = (step: number) =>
                objective.at(
                  c.map((x, i) => x + step * direction[i]!),
                  width,
                ).value;
              const slope = here.gradient.reduce((sum, x, i) => sum + x * direction[i]!, 0);
              const found = (moved(1e-5) - moved(-1e-5)) / 2e-5;
              expect(Math.abs(found - slope)).toBeLessThan(1e-5 * (1 + Math.abs(slope)));
              expect(objective.at(point(), width).exact).toBeGreaterThanOrEqual(here.lowerBound - 1e-9);
            }
            expect(here.value).toBeGreaterThanOrEqual(here.exact - 1e-12);
          }
        }
      }),
      { numRuns: 8 },
    );
  });

  it('is brought to within 1e-4 of its proved bound, and is the λ that the encoding reports', async () => {
    for (const electrons of [1, 2, 4]) {
      const [[h, separate], [, joint], [spinors, mixed]] = (await cases(7 + electrons, 3, electrons)) as [
        [SpatialHamiltonian, Factorisation],
        [SpatialHamiltonian, Factorisation],
        [SpinHamiltonian, Factorisation],
      ];
      for (const [system, given, form] of [
        [h, separate, 'triplet'],
        [h, joint, 'triplet'],
        [spinors, mixed, 'spinor'],
      ] as const) {
        const found = await optimiseShifts(system, given, {}, ctx);
        expect(found.lambda).toBeLessThanOrEqual(found.medianLambda);
        expect(found.lambda - found.lowerBound).toBeLessThan(1e-4 * found.lambda);
        const total = async (factors: Factorisation, shift: string) => {
          const name = parseVariant(`${form}/${factors.grouping}/index/${shift}/clean`);
          return (await buildEncoding(system, factors, name, {}, ctx)).lambda.total;
        };
        const saved = (await total(given, 'median')) - (await total(found.factorisation, 'optimised'));
        expect(saved).toBeCloseTo(found.medianLambda - found.lambda, 9);
      }
    }
  });

  it('is that of the medians where electrons and orbitals are as many, with fewer rows: κ does not move', async () => {
    const h = randomHamiltonian(4, 21, { charge: true, spinOrbit: 'none', spinSpin: false }, 4);
    const given = await factorise(h, { grouping: 'separate' }, ctx);
    const found = await optimiseShifts(h, given, {}, ctx);
    expect(Math.abs(found.lambda / found.medianLambda - 1)).toBeLessThan(1e-12);
    expect(found.lowerBound).toBeCloseTo(found.lambda, 5);
    const rows = async (factors: Factorisation, shift: string) => {
      const name = parseVariant(`triplet/separate/index/${shift}/clean`);
      return (await buildEncoding(h, factors, name, {}, ctx)).shape.rows;
    };
    const count = given.blocks[0]!.count;
    expect(await rows(found.factorisation, 'optimised')).toBe((await rows(given, 'median')) - count);
  });

  it('keeps shifts that factors carry where they are better than what it finds', async () => {
    const h = randomHamiltonian(3, 22, undefined, 1);
    const given = await factorise(h, { grouping: 'joint' }, ctx);
    const once = await optimiseShifts(h, given, {}, ctx);
    const twice = await optimiseShifts(h, once.factorisation, { steps: 0 }, ctx);
    expect(twice.lambda).toBeLessThanOrEqual(once.lambda);
  });
});

describe('real sets', () => {
  const names: readonly [string, Grouping][] = [
    ['f_sto3g_2p', 'separate'],
    ['f_sto3g_2p', 'joint'],
    ['oh_sto3g', 'separate'],
    ['oh_sto3g', 'joint'],
  ];
  it.each(names)('%s %s: below the medians, and proved to be next to the best', async (name, grouping) => {
    const folder = findSet(name);
    if (!folder) return;
    const h = buildHamiltonian(await loadSet(folder));
    const given = await factorise(h, { grouping }, ctx);
    const found = await optimiseShifts(h, given, {}, ctx);
    expect(found.lambda).toBeLessThan(0.999 * found.medianLambda);
    expect(found.lambda - found.lowerBound).toBeLessThan(1e-4 * found.lambda);
  });
});

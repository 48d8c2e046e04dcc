import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { squaredDifference } from '../../core/factor/hypercontraction/least-squares';
import { hypercontractedLambda } from '../../core/factor/hypercontraction/one-body';
import { smoothOneNorm } from '../../core/factor/hypercontraction/one-norm';
import { fitResidual } from '../../core/factor/hypercontraction/residual';
import { combine, pack, unpack } from '../../core/factor/hypercontraction/variables';
import { inlineContext } from '../../core/job';
import {
  integral,
  problemOf,
  randomHamiltonian,
  randomNumbers,
  randomPoint,
  squareOverIndices,
} from '../unit/factor/hypercontraction-problem';

const cases = fc.record({
  seed: fc.integer({ min: 1, max: 1e6 }),
  n: fc.integer({ min: 2, max: 4 }),
  count: fc.integer({ min: 1, max: 7 }),
  shifted: fc.boolean(),
  indefinite: fc.boolean(),
  occupied: fc.boolean(),
  emphasis: fc.constantFrom(0, 0.5, 1),
});

async function example({
  seed,
  n,
  count,
  shifted,
  indefinite,
  occupied,
  emphasis,
}: typeof cases extends fc.Arbitrary<infer T> ? T : never) {
  const random = randomNumbers(seed);
  const electrons = n + 1;
  const h = randomHamiltonian(n, electrons, random, indefinite);
  // Occupations of a determinant, or any numbers at all, whose sum is not η.
  const occupations = Float64Array.from({ length: n }, (_, p) =>
    occupied ? Math.max(0, Math.min(2, electrons - 2 * p)) : 1 + random(),
  );
  return {
    h,
    point: randomPoint(n, count, shifted, random),
    problem: await problemOf(h, occupations, emphasis),
  };
}

describe('objective of the hypercontraction', () => {
  it('measures the difference tensor over all indices', () =>
    fc.assert(
      fc.asyncProperty(cases, async (given) => {
        const { n, count } = given;
        const { h, point, problem } = await example(given);
        const { weights: w } = problem;
        const { vectors: u, zeta, shift } = point;
        const delta = (p: number, q: number) => (p === q ? 1 : 0);
        const direct = squareOverIndices(n, (p, q, r, s) => {
          let x = integral(h.g.charge!, p, q, r, s);
          if (shift) x += shift[p * n + q]! * delta(r, s) + delta(p, q) * shift[r * n + s]!;
          for (let m = 0; m < count; m++) {
            for (let k = 0; k < count; k++) {
              const [a, b] = [m * n, k * n];
              x -= zeta[m * count + k]! * u[a + p]! * u[a + q]! * u[b + r]! * u[b + s]!;
            }
          }
          return w[p]! * w[q]! * w[r]! * w[s]! * x;
        });
        expect(2 * squaredDifference(problem, point).value).toBeCloseTo(direct, 9);
      }),
      { numRuns: 40 },
    ));

  it('has the gradient that finite differences give', () =>
    fc.assert(
      fc.asyncProperty(cases, async (given) => {
        const { n, count, shifted } = given;
        const { point, problem } = await example(given);
        const widths = { zeta: 0.05, kappa: 0.1 };
        const value = (x: Float64Array) => {
          const at = unpack(x, count, n, shifted);
          return combine(at, [
            { slope: squaredDifference(problem, at), scale: 1.3 },
            { slope: smoothOneNorm(problem, at, widths), scale: 0.7 },
          ]);
        };
        const x = pack(point).map((v, i) => (i < count * n ? 1.5 * v : v)); // vectors of any length
        const { gradient } = value(x);
        expect(gradient.length).toBe(x.length);
        const step = 1e-5;
        for (let i = 0; i < x.length; i++) {
          const [up, down] = [Float64Array.from(x), Float64Array.from(x)];
          up[i]! += step;
          down[i]! -= step;
          const slope = (value(up).value - value(down).value) / (2 * step);
          expect(Math.abs(slope - gradient[i]!)).toBeLessThan(1e-5 * (1 + Math.abs(slope)));
        }
      }),
      { numRuns: 40 },
    ));

  it('knows the λ that the block will have with the mean field of its residual', () =>
    fc.assert(
      fc.asyncProperty(cases, async (given) => {
        const { n, count } = given;
        const { h, point, problem } = await example(given);
        const block = { kind: 'hypercontracted', part: 'coulomb', n, ...point, count } as const;
        const left = await fitResidual(h, block, problem, inlineContext());
        const { total } = hypercontractedLambda(h, block, left);
        expect(left.weighted ** 2).toBeCloseTo(2 * squaredDifference(problem, point).value, 9);
        expect(smoothOneNorm(problem, point, { zeta: 0, kappa: 0 }).value).toBeCloseTo(total, 9);
      }),
      { numRuns: 40 },
    ));

  it('keeps every number of a point through the list of variables', () =>
    fc.assert(
      fc.property(cases, ({ seed, n, count, shifted }) => {
        const point = randomPoint(n, count, shifted, randomNumbers(seed));
        const again = unpack(pack(point), count, n, shifted);
        for (const key of ['vectors', 'zeta', 'shift'] as const) {
          point[key]?.forEach((x, i) => {
            expect(again[key]![i]).toBeCloseTo(x, 13);
          });
        }
      }),
    ));
});

import { describe, expect, it } from 'vitest';
import { sectorLayout } from '../../../core/factor/elements';
import { mixSquares, mixTriples } from '../../../core/factor/mixing/mix';
import {
  type SquarePoint,
  type SquareSetting,
  slotScales,
  squareProblem,
} from '../../../core/factor/mixing/squares';
import type { MixingState, MixingStore } from '../../../core/factor/mixing/state';
import { type TriplePoint, type TripleSetting, tripleProblem } from '../../../core/factor/mixing/triples';
import type { Mu, Sector } from '../../../core/hamiltonian';
import { Cancelled, InputError, inlineContext, type JobContext } from '../../../core/job';
import { uniform } from '../hamiltonian/random-hamiltonian';

const n = 4;
const npair = 10;
const nanti = 6;
const ctx = inlineContext(5);

function plane(random: () => number, symmetric: boolean): Float64Array {
  const out = new Float64Array(n * n);
  for (let p = 0; p < n; p++) {
    for (let q = 0; q <= p; q++) {
      const x = q === p && !symmetric ? 0 : random();
      out[p * n + q] = x;
      out[q * n + p] = symmetric ? x : -x;
    }
  }
  return out;
}

function squares(sector: Sector, planes: readonly Mu[], excess: number, signs: readonly number[]) {
  const random = uniform(3);
  const layout = sectorLayout(sector, planes, n);
  const hasCharge = sector === 'even' && planes[0] === 0;
  const setting: SquareSetting = {
    layout,
    kappa: hasCharge ? layout.slots.map((slot) => plane(random, slot.symmetric)) : [],
    excess,
  };
  const count = signs.length;
  const point: SquarePoint = {
    count,
    columns: Float64Array.from({ length: count * layout.dim }, random),
    shifts: Float64Array.from({ length: count }, () => (hasCharge ? 0.3 * random() : 0)),
    signs: Int8Array.from(signs),
    classes: new Int32Array(count),
  };
  return { setting, point };
}

function triples(sameScale: number, otherScale: number, excess: number, count = 5) {
  const random = uniform(8);
  const setting: TripleSetting = { n, sameScale, otherScale, kappa: plane(random, false), excess };
  const point: TriplePoint = {
    count,
    antisymmetric: Float64Array.from({ length: count * nanti }, random),
    symmetric: Float64Array.from({ length: count * npair }, random),
    shifts: Float64Array.from({ length: count }, () => (sameScale === 0 ? 0 : 0.3 * random())),
    classes: new Int32Array(count),
  };
  return { setting, point };
}

/** Σ σ v wᵀ. */
function tensor(v: Float64Array, w: Float64Array, signs: ArrayLike<number>): Float64Array {
  const count = signs.length;
  const [rows, cols] = [v.length / count, w.length / count];
  const out = new Float64Array(rows * cols);
  for (let t = 0; t < count; t++) {
    for (let i = 0; i < rows; i++) {
      for (let j = 0; j < cols; j++) out[i * cols + j]! += signs[t]! * v[t * rows + i]! * w[t * cols + j]!;
    }
  }
  return out;
}

function expectEqual(a: Float64Array, b: Float64Array, digits: number) {
  expect(a.length).toBe(b.length);
  for (let i = 0; i < a.length; i++) expect(a[i]).toBeCloseTo(b[i]!, digits);
}

const CASES = [
  ['charge', 'even', [0], 2, [1, 1, 1, 1, 1, 1]],
  ['charge, half filled', 'even', [0], 0, [1, 1, 1, 1, 1, 1]],
  ['indefinite charge', 'even', [0], -3, [-1, -1, 1, 1, 1]],
  ['even sector', 'even', [0, 1, 2, 3], 2, [-1, -1, 1, 1, 1]],
  ['odd sector', 'odd', [0, 1, 2, 3], 1, [-1, -1, 1, 1]],
  ['spin-spin', 'odd', [1, 2, 3], 1, [-1, -1, -1, 1]],
] as const;

const WIDTH = 0.05;
const STEP = 1e-5;

/** Central difference along every tangent direction against the gradient. */
async function expectGradient<Point>(
  problem: {
    value: (point: Point, width: number) => Promise<{ smooth: number; gradient: Float64Array }>;
    move: (point: Point, direction: Float64Array, length: number) => Point;
  },
  point: Point,
  directions: readonly Float64Array[],
) {
  const { gradient } = await problem.value(point, WIDTH);
  for (const direction of directions) {
    const up = (await problem.value(problem.move(point, direction, STEP), WIDTH)).smooth;
    const down = (await problem.value(problem.move(point, direction, -STEP), WIDTH)).smooth;
    const slope = direction.reduce((sum, x, i) => sum + x * gradient[i]!, 0);
    expect(Math.abs((up - down) / (2 * STEP) - slope)).toBeLessThan(1e-6 * (1 + Math.abs(slope)));
  }
  expect(gradient.some((x) => Math.abs(x) > 1e-2)).toBe(true);
}

describe('mixing of squares', () => {
  it.each(CASES)(
    '%s: has the gradient that finite differences give',
    async (_, sector, planes, excess, signs) => {
      const { setting, point } = squares(sector, planes, excess, signs);
      const problem = squareProblem(setting, slotScales(setting.layout, point.columns), ctx);
      const { count } = point;
      const directions: Float64Array[] = [];
      for (let s = 0; s < count; s++) {
        for (let t = 0; t < s; t++) {
          const direction = new Float64Array(count * count + count);
          direction[s * count + t] = 1;
          direction[t * count + s] = signs[s] === signs[t] ? -1 : 1;
          directions.push(direction);
        }
        if (setting.kappa.length > 0) {
          const direction = new Float64Array(count * count + count);
          direction[count * count + s] = 1;
          directions.push(direction);
        }
      }
      await expectGradient(problem, point, directions);
    },
  );

  it.each(CASES)(
    '%s: lowers λ and leaves the tensor what it was',
    async (_, sector, planes, excess, signs) => {
      const { setting, point } = squares(sector, planes, excess, signs);
      const problem = squareProblem(setting, slotScales(setting.layout, point.columns), ctx);
      const start = { ...point, shifts: new Float64Array(point.count) };
      const medians = await problem.withMedians(start);
      const before = Math.min((await problem.value(start, 0)).exact, (await problem.value(medians, 0)).exact);
      for (const extra of [0, 3]) {
        const factors = point.count + extra;
        const found = await mixSquares(setting, point.columns, point.signs, 'x', { factors }, ctx);
        expect(found.point.count).toBe(factors);
        expect(found.lambda).toBeLessThan(0.99 * before);
        expect((await problem.value(found.point, 0)).exact).toBeCloseTo(found.lambda, 12);
        expectEqual(
          tensor(found.point.columns, found.point.columns, found.point.signs),
          tensor(point.columns, point.columns, point.signs),
          11,
        );
      }
    },
  );

  it('never mixes factors that have no coordinate in common', async () => {
    const { setting, point } = squares('even', [0], 2, [1, 1, 1, 1]);
    const columns = point.columns.slice();
    for (let t = 0; t < 4; t++)
      for (let i = 0; i < npair; i++) if (i % 2 !== t % 2) columns[t * npair + i] = 0;
    const found = await mixSquares(setting, columns, point.signs, 'x', { factors: 6 }, ctx);
    for (let t = 0; t < 6; t++) {
      for (let i = 0; i < npair; i++) if (i % 2 !== t % 2) expect(found.point.columns[t * npair + i]).toBe(0);
    }
  });
});

describe('mixing of triples', () => {
  it.each([
    [1, 2, 1],
    [1, 0, -2],
    [0, 1, 1],
    [1, 2, 0],
  ])('scales %i and %i, η − N = %i: gradient and tensor', async (same, other, excess) => {
    const { setting, point } = triples(same, other, excess);
    const problem = tripleProblem(setting, point, ctx);
    const { count } = point;
    const directions = Array.from({ length: count * count + (same === 0 ? 0 : count) }, (_, i) => {
      const direction = new Float64Array(count * count + count);
      direction[i] = 1;
      return direction;
    });
    await expectGradient(problem, point, directions);

    const start = { ...point, shifts: new Float64Array(count) };
    const medians = await problem.withMedians(start);
    const before = Math.min((await problem.value(start, 0)).exact, (await problem.value(medians, 0)).exact);
    const ones = new Int8Array(count).fill(1);
    const given = tensor(point.antisymmetric, point.symmetric, ones);
    for (const factors of [count, count + 2]) {
      const found = await mixTriples(setting, point, 'x', { factors }, ctx);
      expect(found.lambda).toBeLessThan(0.97 * before);
      const more = new Int8Array(factors).fill(1);
      expectEqual(tensor(found.point.antisymmetric, found.point.symmetric, more), given, 11);
    }
  });
});

class Shelf implements MixingStore {
  readonly states = new Map<string, MixingState>();
  saved = 0;
  load(part: string) {
    return this.states.get(part) ?? null;
  }
  save(part: string, state: MixingState) {
    this.saved++;
    this.states.set(part, state);
  }
}

describe('a run that was stopped', () => {
  const { setting, point } = squares('even', [0], 2, [1, 1, 1, 1, 1, 1]);
  const mix = (store: Shelf, context: JobContext) =>
    mixSquares(setting, point.columns, point.signs, 'coulomb', { store, factors: 8 }, context);

  it('leaves its best, and goes on from there', async () => {
    const store = new Shelf();
    let calls = 0;
    const stopping: JobContext = {
      ...ctx,
      checkpoint: async () => {
        if (++calls > 30) throw new Cancelled();
      },
    };
    // The inline context hands its own checkpoint to tasks: only those of the descent count here.
    await expect(mix(store, stopping)).rejects.toThrow(Cancelled);
    const left = store.states.get('coulomb')!;
    expect(left.done).toBe(false);
    const whole = await mix(new Shelf(), ctx);
    expect(left.lambda).toBeGreaterThan(whole.lambda);
    const resumed = await mix(store, ctx);
    expect(resumed.lambda).toBeLessThan(left.lambda);
    expect(Math.abs(resumed.lambda - whole.lambda)).toBeLessThan(0.02 * whole.lambda);
    const done = store.states.get('coulomb')!;
    expect(done.done).toBe(true);
    const { saved } = store;
    expect((await mix(store, ctx)).lambda).toBe(done.lambda);
    expect(store.saved).toBe(saved);
  });

  it('refuses a state of another tensor', async () => {
    const store = new Shelf();
    await mix(store, ctx);
    const state = store.states.get('coulomb')!;
    const columns = state.arrays.columns!.slice();
    columns[3]! += 1e-6;
    store.states.set('coulomb', { ...state, arrays: { ...state.arrays, columns } });
    const problem = await mix(store, ctx).catch((error) => error);
    expect(problem).toBeInstanceOf(InputError);
    expect(problem.toProblem().code).toBe('other-mixing-state');
    store.states.set('coulomb', { ...state, arrays: {} });
    await expect(mix(store, ctx)).rejects.toThrow(InputError);
  });
});

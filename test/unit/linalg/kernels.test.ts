import { describe, expect, it } from 'vitest';
import { type Arena, createArena, plainArena, put, withArena } from '../../../core/linalg/kernels/arena';
import { distance, randomNumbers } from './support';

// The compiled kernels against the plain ones on the same numbers. The room behind every array is watched too.
const SIZES = [0, 1, 2, 3, 4, 5, 7, 8, 13, 50, 101];

/** Runs `work` on both arenas with the same arrays and compares everything it left in memory. */
function agree(arrays: Float64Array[], work: (arena: Arena, ...at: number[]) => unknown, tolerance: number) {
  const results = [createArena(), plainArena()].map((arena) => {
    const guarded = arrays.map((array) => Float64Array.of(...array, 777));
    const at = guarded.map((array) => put(arena, array));
    const status = work(arena, ...at);
    return { status, after: guarded.map((array, i) => arena.f64.slice(at[i], at[i] + array.length)) };
  });
  expect(results[0].status).toBe(results[1].status);
  arrays.forEach((array, i) => {
    const [compiled, plain] = results.map(({ after }) => after[i]);
    expect(distance(compiled, plain)).toBeLessThanOrEqual(tolerance);
    expect(compiled[array.length]).toBe(777);
  });
}

/** Lower triangle filled, upper zero (what is above the diagonal is nobody's business). */
function lower(n: number, ld: number, seed: number): Float64Array {
  return randomNumbers(n * ld, seed).map((x, i) => (i % ld <= Math.floor(i / ld) ? x : 0));
}

it('is the compiled module that is tested', () => {
  expect(createArena().kernels.gemm.toString()).toContain('native code');
  expect(plainArena().kernels.gemm.toString()).not.toContain('native code');
});

describe('gemm', () => {
  const shapes = [
    [1, 1, 1],
    [4, 4, 4],
    [5, 3, 7],
    [97, 1, 1],
    [3, 515, 2],
    [2, 3, 259],
    [101, 521, 13],
    [98, 6, 300],
  ];
  for (const [m, n, k] of shapes) {
    it(`m ${m}, n ${n}, k ${k}, all transpositions, padded rows`, () => {
      const ldc = n + 3;
      for (const ta of [false, true]) {
        for (const tb of [false, true]) {
          const arrays = [randomNumbers(m * k, 1), randomNumbers(k * n, 2), randomNumbers(m * ldc, 3)];
          agree(
            arrays,
            ({ kernels }, a, b, c) =>
              kernels.gemm(m, n, k, -1.5, a, ta ? 1 : k, ta ? m : 1, b, tb ? 1 : n, tb ? k : 1, c, ldc),
            1e-12,
          );
        }
      }
    });
  }
});

describe('rows', () => {
  for (const length of SIZES) {
    it(`dots and sums of rows of ${length}`, () => {
      for (const count of [0, 1, 3, 4, 6, 9]) {
        const rows = randomNumbers(count * (length + 2), 4);
        agree(
          [rows, randomNumbers(length, 5), new Float64Array(count)],
          ({ kernels }, r, x, out) => kernels.rowDots(r, length + 2, count, x, length, out),
          1e-13,
        );
        agree(
          [rows, randomNumbers(3 * count, 6), randomNumbers(length, 7)],
          ({ kernels }, r, f, y) => kernels.addRows(r, length + 2, count, f, 3, y, length),
          1e-13,
        );
      }
    });
  }
});

describe('triangles', () => {
  for (const n of SIZES) {
    it(`product, rank-two update, reduction, values of order ${n}`, () => {
      const ld = n + 1;
      for (const sign of [1, -1]) {
        const a = lower(n, ld, 8);
        const x = randomNumbers(n, 9);
        const y = randomNumbers(n, 10);
        agree(
          [a, x, y],
          ({ kernels }, ...at) => kernels.triangleTimes(at[0], ld, n, sign, at[1], at[2]),
          1e-13,
        );
        // The compiled update spills into the upper triangle: compare the lower one.
        const results = [createArena(), plainArena()].map((arena) => {
          const at = [a, x, y].map((array) => put(arena, array));
          arena.kernels.triangleRankTwo(at[0], ld, n, at[1], at[2], -sign, -1);
          return arena.f64.slice(at[0], at[0] + a.length).filter((_, i) => i % ld <= Math.floor(i / ld));
        });
        expect(distance(results[0], results[1])).toBeLessThan(1e-13);

        const reduced = [createArena(), plainArena()].map((arena) => {
          const at = put(arena, a);
          const room = arena.take(4 * n);
          arena.f64.fill(0, room, room + 4 * n);
          arena.kernels.reduceTriangle(at, ld, n, sign, room, room + n, room + 2 * n, room + 3 * n);
          return arena.f64.slice(room, room + 3 * n);
        });
        expect(distance(reduced[0], reduced[1])).toBeLessThan(1e-11);

        const values = [createArena(), plainArena()].map((arena) => {
          const at = put(arena, Float64Array.of(...a, ...lower(n, ld, 11)));
          const out = arena.take(2 * n);
          const room = arena.take(3 * n);
          expect(arena.kernels.eigenvaluesOfMany(at, ld, n, 2, sign, out, room)).toBe(0);
          return [0, n].map((from) => arena.f64.slice(out + from, out + from + n).sort());
        });
        for (const i of [0, 1]) expect(distance(values[0][i], values[1][i])).toBeLessThan(1e-12);
      }
    });
  }
});

describe('Hermitian', () => {
  for (const n of SIZES) {
    it(`product, reduction and values of order ${n}`, () => {
      const ld = n + 1;
      const planes = [lower(n, ld, 12), lower(n, ld, 13)];
      agree(
        [...planes, ...[14, 15, 16, 17].map((seed) => randomNumbers(n, seed))],
        ({ kernels }, ar, ai, xr, xi, yr, yi) => kernels.hermitianTimes(ar, ai, ld, n, xr, xi, yr, yi),
        1e-13,
      );
      const reduced = [createArena(), plainArena()].map((arena) => {
        const [ar, ai] = planes.map((plane) => put(arena, plane));
        const room = arena.take(6 * n);
        arena.f64.fill(0, room, room + 4 * n);
        arena.kernels.reduceHermitian(
          ar,
          ai,
          ld,
          n,
          room,
          room + n,
          room + 2 * n,
          room + 3 * n,
          room + 4 * n,
        );
        return arena.f64.slice(room, room + 4 * n);
      });
      expect(distance(reduced[0], reduced[1])).toBeLessThan(1e-11);
      const values = [createArena(), plainArena()].map((arena) => {
        const [ar, ai] = planes.map((plane) => put(arena, plane));
        const out = arena.take(n);
        expect(arena.kernels.hermitianValuesOfMany(ar, ai, ld, n, 1, out, arena.take(5 * n))).toBe(0);
        return arena.f64.slice(out, out + n).sort();
      });
      expect(distance(values[0], values[1])).toBeLessThan(1e-12);
    });
  }
});

describe('QL', () => {
  for (const n of [1, 2, 9, 50]) {
    it(`rotates rows along with the values, order ${n}`, () => {
      const arrays = [randomNumbers(n, 18), randomNumbers(n, 19), randomNumbers(n * 7, 20)];
      agree(arrays, ({ kernels }, d, e, z) => kernels.qlSteps(d, e, n, z, 7, 7), 1e-11);
    });
  }
});

describe('QL without vectors', () => {
  for (const n of SIZES) {
    it(`agrees with the rotations by another formula, order ${n}`, () => {
      for (const shape of [
        { d: randomNumbers(n, 21), e: randomNumbers(n, 22) },
        { d: new Float64Array(n), e: randomNumbers(n, 23) },
        { d: randomNumbers(n, 24), e: randomNumbers(n, 25).map((x, i) => (i % 3 ? x * 1e-9 : 0)) },
        { d: new Float64Array(n).fill(2), e: randomNumbers(n, 26).map((x) => x * 1e-5) },
        {
          d: randomNumbers(n, 27).map((x, i) => x * 10 ** -i),
          e: randomNumbers(n, 28).map((x, i) => x * 10 ** -i),
        },
      ]) {
        const [fast, slow] = [createArena(), plainArena()].map((arena) => {
          const [d, e] = [put(arena, shape.d), put(arena, shape.e)];
          expect(arena.kernels.qlValues(d, e, n)).toBe(0);
          return arena.f64.slice(d, d + n).sort();
        });
        expect(distance(fast, slow)).toBeLessThan(3e-14);
      }
    });
  }
});

describe('arena', () => {
  it('keeps what is in memory when it grows and reuses released room', () => {
    for (const arena of [createArena(), plainArena()]) {
      const first = put(arena, Float64Array.of(1, 2, 3));
      const mark = arena.mark();
      const large = arena.take(3_000_000);
      arena.f64[large + 2_999_999] = 5;
      expect(Array.from(arena.f64.subarray(first, first + 3))).toEqual([1, 2, 3]);
      arena.release(mark);
      expect(arena.take(2)).toBe(large);
    }
  });

  it('is lent to one at a time, for as long as the work waits, and comes back after a failure', async () => {
    let wake = () => {};
    const sleeping = withArena(async (arena) => {
      const at = put(arena, Float64Array.of(7));
      await new Promise<void>((resolve) => {
        wake = resolve;
      });
      return arena.f64[at];
    });
    const start = withArena((arena) => {
      const at = put(arena, Float64Array.of(8));
      withArena((another) => expect(another).not.toBe(arena));
      return at;
    });
    wake();
    expect(await sleeping).toBe(7);
    const fail = (arena: Arena) => {
      arena.take(5);
      throw new Error('no');
    };
    expect(() => withArena(fail)).toThrow('no');
    await expect(withArena(async (arena) => fail(arena))).rejects.toThrow('no');
    withArena((arena) => expect(arena.take(1)).toBe(start));
  });
});

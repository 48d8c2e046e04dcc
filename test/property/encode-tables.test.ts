import fc from 'fast-check';
import { expect, it } from 'vitest';
import {
  type SparseProgram,
  type SpinorItem,
  type SpinorKind,
  type SpinorProgram,
  type TermKind,
  type TripletItem,
  type TripletProgram,
  type TripletRow,
  termSizes,
} from '../../core/encode';
import type { Mu } from '../../core/hamiltonian';
import { throughForm } from '../unit/plan/encode-tables-support';

const numbers = fc.double({ min: 0.01, max: 1, noNaN: true });
const sign = fc.constantFrom<1 | -1>(1, -1);

/** A unit vector of any size, with components of both signs and zeros. */
const unit = (n: number) =>
  fc.array(fc.constantFrom(-0.7, -0.2, 0, 0.1, 0.5, 0.9), { minLength: n, maxLength: n }).map((list) => {
    const size = Math.hypot(...list);
    return Float64Array.from(list, (x, i) => (size > 0 ? x / size : i === 0 ? 1 : 0));
  });

/** As many as there are faces, one or two. */
const perFace = <T>(value: fc.Arbitrary<T>, faces: number) =>
  fc.array(value, { minLength: faces, maxLength: faces });

const tripletRow = (n: number, faces: number): fc.Arbitrary<TripletRow> =>
  fc
    .record({
      kind: fc.constantFrom('S' as const, 'A' as const),
      u: unit(n),
      other: unit(n),
      faces: perFace(fc.record({ mu: fc.constantFrom<Mu>(0, 1, 2, 3), weight: numbers, sign }), faces),
    })
    .map(({ kind, u, other, faces: own }) => ({ kind, u, v: kind === 'S' ? u : other, faces: own }));

const tripletItem = (n: number, faces: number): fc.Arbitrary<TripletItem> =>
  fc.record({
    sign,
    paired: fc.boolean(),
    lambda: perFace(numbers, faces),
    rows: fc.array(tripletRow(n, faces), { minLength: 1, maxLength: 6 }),
  });

const products = (n: number) =>
  fc.array(fc.tuple(fc.nat(4), fc.nat(4), numbers, sign), { minLength: 1, maxLength: 9 }).chain((list) => {
    const vectors = 1 + Math.max(...list.map(([a, b]) => Math.max(a, b)));
    return fc.array(unit(n), { minLength: vectors, maxLength: vectors }).map((own) => ({
      vectors: own,
      first: Uint32Array.from(list, ([a, b]) => Math.min(a, b)),
      second: Uint32Array.from(list, ([a, b]) => Math.max(a, b)),
      lambda: Float64Array.from(list, ([, , x]) => x),
      sign: Int8Array.from(list, ([, , , s]) => s),
    }));
  });

const tripletProgram = fc.integer({ min: 2, max: 5 }).chain(
  (n): fc.Arbitrary<TripletProgram> =>
    fc
      .record({
        constant: numbers,
        oneBody: fc.array(tripletRow(n, 1), { minLength: 1, maxLength: 5 }),
        items: fc.array(fc.oneof(tripletItem(n, 1), tripletItem(n, 2)), { minLength: 0, maxLength: 7 }),
        products: fc.option(products(n)),
      })
      .map(({ products: own, ...rest }) => ({ orbitals: n, ...rest, ...(own ? { products: own } : {}) })),
);

const spinorItem = (n: number, kind: SpinorKind, faces: number): fc.Arbitrary<SpinorItem> => {
  const length = kind === 'full' ? 2 * n : n;
  const row = fc
    .record({
      both: unit(2 * length),
      real: unit(length),
      faces: perFace(fc.record({ weight: numbers, sign }), faces),
    })
    .map(({ both, real, faces: own }) => ({
      re: kind === 'real' ? real : both.slice(0, length),
      im: kind === 'real' ? new Float64Array(length) : both.slice(length),
      faces: own,
    }));
  return fc.record({
    kind: fc.constant(kind),
    axis: fc.constantFrom<1 | 2 | 3>(1, 2, 3),
    paired: fc.boolean(),
    faces: perFace(fc.record({ sign, lambda: numbers }), faces).map((list) =>
      list.map((face, f) => ({ ...face, odd: f === 1 })),
    ),
    rows: fc.array(row, { minLength: 1, maxLength: 6 }),
  });
};

const anyKind = fc.constantFrom<SpinorKind>('real', 'axial', 'full');
const spinorProgram = fc.integer({ min: 1, max: 5 }).chain(
  (n): fc.Arbitrary<SpinorProgram> =>
    fc.record({
      orbitals: fc.constant(n),
      constant: numbers,
      partners: fc.boolean(),
      phases: fc.option(unit(2 * n).filter((x) => x.some((phase) => phase !== 0))),
      spared: fc.nat(6),
      items: fc.array(
        fc.tuple(anyKind, fc.constantFrom(1, 1, 2)).chain(([kind, faces]) => spinorItem(n, kind, faces)),
        { maxLength: 7 },
      ),
      oneBody: fc.array(
        anyKind.chain((kind) => spinorItem(n, kind, 1)),
        { minLength: 1, maxLength: 4 },
      ),
    }),
);

const mu = fc.constantFrom<Mu>(0, 1, 2, 3);
const termKind = fc.oneof(
  fc.record({ form: fc.constant('strings' as const), flags: fc.nat(31) }),
  fc.record({
    form: fc.constant('pairs' as const),
    antisymmetric: fc.boolean(),
    mu,
    nu: fc.option(mu),
    shared: fc.boolean(),
    exchanged: fc.boolean(),
  }),
);

const sparseProgram = fc
  .tuple(fc.integer({ min: 1, max: 70 }), fc.array(termKind, { minLength: 1, maxLength: 9 }))
  .chain(
    ([orbitals, kinds]: [number, TermKind[]]): fc.Arbitrary<SparseProgram> =>
      fc
        .record({
          constant: numbers,
          otherShare: fc.double({ min: 0.01, max: 0.99, noNaN: true }),
          otherSign: sign,
          rows: fc.array(
            fc.record({
              kind: fc.nat(kinds.length - 1),
              places: fc.array(fc.nat(orbitals - 1), { minLength: 4, maxLength: 4 }),
              weight: numbers,
              negative: fc.nat(1),
            }),
            { minLength: 1, maxLength: 40 },
          ),
        })
        .map(({ rows, ...rest }) => ({
          ...rest,
          orbitals,
          kinds,
          kindOf: Uint8Array.from(rows, (row) => row.kind),
          orbitalsOf: Uint16Array.from(rows.flatMap((row) => row.places)),
          weights: Float64Array.from(rows, (row) => row.weight),
          negative: Uint8Array.from(rows, (row) => row.negative),
        })),
  );

const bits = fc.record({ keep: fc.integer({ min: 1, max: 32 }), rotation: fc.integer({ min: 4, max: 32 }) });

it('triplet programs, with products and without, are read back as they were rounded', async () => {
  await fc.assert(
    fc.asyncProperty(tripletProgram, bits, async (program, own) => {
      const { encoded, stored } = await throughForm('triplet', { program: () => program }, own);
      expect(stored).toEqual(encoded);
    }),
    { numRuns: 150 },
  );
});

it('spinor programs of all kinds are read back as they were rounded', async () => {
  await fc.assert(
    fc.asyncProperty(spinorProgram, bits, async (program, own) => {
      const { encoded, stored } = await throughForm('spinor', { spinorProgram: () => program }, own);
      expect(stored).toEqual(encoded);
    }),
    { numRuns: 150 },
  );
});

it('sparse programs are read back as they were rounded', async () => {
  await fc.assert(
    fc.asyncProperty(sparseProgram, bits, async (program, own) => {
      const shape = { terms: termSizes(program) };
      const { encoded, stored } = await throughForm(
        'sparse',
        { sparseProgram: () => program, shape: shape as never },
        own,
      );
      expect(stored).toEqual(encoded);
    }),
    { numRuns: 150 },
  );
});

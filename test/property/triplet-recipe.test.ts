import fc from 'fast-check';
import { expect, it } from 'vitest';
import type { Subroutine } from '../../core/circuit';
import { GateCounter } from '../../core/circuit/gates/counter';
import { Machine } from '../../core/circuit/gates/machine';
import { tripletRecipe } from '../../core/circuit/triplet/recipe';
import { sizesOf, tripletLayout } from '../../core/circuit/triplet/sizes';
import { isPairRow, tripletTables } from '../../core/circuit/triplet/tables';
import { walkStep, walkWires } from '../../core/circuit/triplet/walk';
import type { TripletItem, TripletProgram, TripletRow, VectorProducts } from '../../core/encode/program';
import { peakOf, stepCost } from '../../core/estimate';
import type { Mu } from '../../core/hamiltonian/operators';

/** Rows whose vectors do not matter: only kinds, faces and numbers do. */
function row(n: number, kind: 'S' | 'A', faces: number): TripletRow {
  const u = new Float64Array(n);
  u[0] = 1;
  const v = new Float64Array(n);
  v[n - 1] = 1;
  const face = { mu: 0 as Mu, weight: 1, sign: 1 as const };
  return { kind, u, v: kind === 'S' ? u : v, faces: Array.from({ length: faces }, () => face) };
}

const itemShape = fc.record({
  pairs: fc.integer({ min: 0, max: 3 }),
  singles: fc.integer({ min: 1, max: 6 }),
  faces: fc.constantFrom(1, 1, 2),
  paired: fc.boolean(),
});

/** Numbers of vectors of each product; how many vectors there are follows from the largest. */
const productPairs = fc.oneof(
  fc.constant(null),
  fc.array(fc.tuple(fc.integer({ min: 0, max: 9 }), fc.integer({ min: 0, max: 9 })), {
    minLength: 1,
    maxLength: 30,
  }),
);

function products(n: number, pairs: readonly (readonly [number, number])[]): VectorProducts {
  return {
    vectors: Array.from({ length: 1 + Math.max(...pairs.flat()) }, () => row(n, 'S', 1).u),
    first: Uint32Array.from(pairs, (pair) => Math.min(...pair)),
    second: Uint32Array.from(pairs, (pair) => Math.max(...pair)),
    lambda: new Float64Array(pairs.length).fill(1),
    sign: new Int8Array(pairs.length).fill(1),
  };
}

const programs = fc
  .record({
    n: fc.integer({ min: 2, max: 5 }),
    items: fc.array(itemShape, { minLength: 1, maxLength: 9 }),
    oneBody: fc.record({ pairs: fc.integer({ min: 0, max: 4 }), singles: fc.integer({ min: 1, max: 5 }) }),
    pairs: productPairs,
  })
  .map(({ n, items, oneBody, pairs }): TripletProgram => {
    const rows = (pairs: number, singles: number, faces: number) => [
      ...Array.from({ length: pairs }, () => row(n, 'A', faces)),
      ...Array.from({ length: singles }, () => row(n, 'S', faces)),
    ];
    return {
      orbitals: n,
      constant: 0,
      ...(pairs ? { products: products(n, pairs) } : {}),
      oneBody: rows(oneBody.pairs, oneBody.singles, 1),
      items: items.map(
        (item): TripletItem => ({
          sign: 1,
          paired: item.paired,
          lambda: item.faces === 1 ? [1] : [1, 2],
          rows: rows(item.pairs, item.singles, item.faces),
        }),
      ),
    };
  });

const block = fc.constantFrom(1, 2);
const pairOfBlocks = fc.oneof(
  fc.record({ read: block, erase: block }),
  // Every table is at least two bits wide, and as many wires are idle.
  fc.record({ read: fc.constant(2), erase: block, slice: fc.constantFrom(1, 2) }),
);

it('the recipe counts the emitted walk step, part by part, and its peak of wires', () => {
  fc.assert(
    fc.property(
      programs,
      fc.record({
        keep: fc.integer({ min: 1, max: 5 }),
        innerKeep: fc.integer({ min: 1, max: 5 }),
        rotation: fc.integer({ min: 4, max: 9 }),
      }),
      fc.constantFrom('index' as const, 'swap-layers' as const),
      fc.record({
        outer: pairOfBlocks,
        items: pairOfBlocks,
        inner: pairOfBlocks,
        rows: pairOfBlocks,
        pairs: pairOfBlocks,
      }),
      fc.boolean(),
      (program, bits, spin, blocks, controlled) => {
        const tables = tripletTables(program, bits);
        const sizes = sizesOf(program);
        const layout = tripletLayout(sizes, bits);
        expect(layout.rowAddresses).toEqual(tables.rowAddresses);
        expect(layout.pairAddresses).toEqual(tables.rowAddresses.filter((a) => isPairRow(tables, a)));
        expect(layout.rowWidth).toBe(tables.rowWidth);

        const counter = new GateCounter({ toffoliOnly: true });
        const machine = new Machine(counter);
        const wires = walkWires(tables, machine, 'gradient');
        const control = controlled ? machine.allocate() : null;
        walkStep(tables, wires, spin, blocks, control).run(machine);

        const controls = controlled ? 1 : 0;
        const recipe: Subroutine = tripletRecipe(program.orbitals, layout, bits, spin, blocks, {
          registers: [{ name: 'control', qubits: controls }],
          controls,
        });
        const emitted = GateCounter.total(counter.root);
        const cost = stepCost(recipe);
        expect(cost.toffoli).toBe(emitted.toffoli);
        expect(cost.t).toBe(emitted.t);
        const byPart = counter.toffoliByPart();
        for (const [part, toffoli] of Object.entries(cost.parts)) {
          // The circuit has the control inside the reflection; the recipe names it apart.
          if (part === 'control' || part === 'reflections') continue;
          expect([part, toffoli]).toEqual([part, byPart.get(part as never) ?? 0]);
        }
        expect(peakOf(recipe).qubits).toBe(machine.peak);
      },
    ),
    { numRuns: 120 },
  );
});

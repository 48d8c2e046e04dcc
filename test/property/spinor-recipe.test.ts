import fc from 'fast-check';
import { expect, it } from 'vitest';
import { GateCounter } from '../../core/circuit/gates/counter';
import { Machine } from '../../core/circuit/gates/machine';
import type { Merge } from '../../core/circuit/spinor/layout';
import { spinorRecipe } from '../../core/circuit/spinor/recipe';
import { spinorSizesOf, spinorTables } from '../../core/circuit/spinor/tables';
import { spinorWalkStep, spinorWires } from '../../core/circuit/spinor/walk';
import type { SpinorItem, SpinorKind, SpinorProgram } from '../../core/encode';
import { peakOf, stepCost } from '../../core/estimate';

interface Shape {
  readonly kind: SpinorKind;
  readonly rows: number;
  readonly faces: number;
  readonly paired: boolean;
}

/** An item whose vectors do not matter: only kinds, faces and numbers do. */
function item(n: number, { kind, rows, faces, paired }: Shape): SpinorItem {
  const length = kind === 'full' ? 2 * n : n;
  const re = new Float64Array(length);
  re[0] = 1;
  return {
    kind,
    axis: 3,
    paired,
    faces: Array.from({ length: faces }, (_, f) => ({ sign: 1, odd: f === 1, lambda: 1 + f })),
    rows: Array.from({ length: rows }, () => ({
      re,
      im: new Float64Array(length),
      faces: Array.from({ length: faces }, () => ({ weight: 1, sign: 1 })),
    })),
  };
}

const kinds = fc.constantFrom<SpinorKind>('real', 'axial', 'full');
const rows = fc.integer({ min: 1, max: 7 });
const itemShape = fc.record({ kind: kinds, rows, faces: fc.constantFrom(1, 1, 2), paired: fc.boolean() });
const single = fc.record({
  kind: fc.constant<SpinorKind>('full'),
  rows,
  faces: fc.constant(1),
  paired: fc.constant(false),
});

const programs = fc
  .oneof(
    fc.record({
      n: fc.integer({ min: 1, max: 4 }),
      partners: fc.constant(true),
      items: fc.array(itemShape, { minLength: 1, maxLength: 9 }),
      spared: fc.integer({ min: 0, max: 6 }),
      oneBody: fc.array(fc.record({ kind: kinds, rows }), { minLength: 1, maxLength: 4 }),
    }),
    fc.record({
      n: fc.integer({ min: 1, max: 4 }),
      partners: fc.constant(false),
      items: fc.array(single, { minLength: 1, maxLength: 5 }),
      spared: fc.constant(0),
      oneBody: fc.array(fc.record({ kind: fc.constant<SpinorKind>('full'), rows }), {
        minLength: 1,
        maxLength: 1,
      }),
    }),
  )
  .map(
    ({ n, partners, items, oneBody, spared }): SpinorProgram => ({
      orbitals: n,
      constant: 0,
      partners,
      phases: null,
      spared,
      oneBody: oneBody.map((shape) => item(n, { ...shape, faces: 1, paired: false })),
      items: items.map((shape) => item(n, shape)),
    }),
  );

const block = fc.constantFrom(1, 2);
const pairOfBlocks = fc.record({ read: block, erase: block });

it('the recipe counts the emitted walk step, part by part, and its peak of wires', () => {
  fc.assert(
    fc.property(
      programs,
      fc.record({
        keep: fc.integer({ min: 1, max: 5 }),
        innerKeep: fc.integer({ min: 1, max: 5 }),
        rotation: fc.integer({ min: 4, max: 9 }),
      }),
      fc.constantFrom<Merge[]>([], ['phases'], ['shared phases'], ['spins'], ['phases', 'spins']),
      fc.record({
        outer: pairOfBlocks,
        items: pairOfBlocks,
        inner: pairOfBlocks,
        rows: pairOfBlocks,
        groups: fc.record({ phases: block, spins: block }),
      }),
      fc.boolean(),
      (program, bits, merge, blocks, controlled) => {
        const tables = spinorTables(program, bits, merge);
        const { layout } = tables;
        const sizes = spinorSizesOf(program);
        expect(layout.rowAddresses).toEqual(Uint32Array.from(tables.rows.keys()));
        for (const [group, own] of layout.tables) {
          const wanted = layout.rowAddresses.filter((a) => tables.rows.get(a)![group].length > 0);
          // Of one orbital no phase is left, but its group then has no table either.
          expect(own.addresses).toEqual(wanted);
        }
        expect(sizes.rows.reduce((sum, own) => sum + own, 0)).toBe(tables.rows.size);

        const counter = new GateCounter({ toffoliOnly: true });
        const machine = new Machine(counter);
        const wires = spinorWires(tables, machine, 'gradient');
        const control = controlled ? machine.allocate() : null;
        spinorWalkStep(tables, wires, blocks, control).run(machine);

        const controls = controlled ? 1 : 0;
        const recipe = spinorRecipe(layout, bits, blocks, {
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
    { numRuns: 80 },
  );
});

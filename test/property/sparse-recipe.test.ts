import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Subroutine } from '../../core/circuit';
import { GateCounter } from '../../core/circuit/gates/counter';
import { Machine } from '../../core/circuit/gates/machine';
import { lessThanConstant } from '../../core/circuit/primitives/arithmetic';
import type { Blocks } from '../../core/circuit/primitives/look-up';
import { SparseState } from '../../core/circuit/simulate/sparse-state';
import type { SparseLayout } from '../../core/circuit/sparse/layout';
import { multiple, multipleWires } from '../../core/circuit/sparse/multiple';
import { sparseRecipe } from '../../core/circuit/sparse/recipe';
import { sparseStep } from '../../core/circuit/sparse/step';
import { sparseTables } from '../../core/circuit/sparse/tables';
import { sparseWalkStep, sparseWires } from '../../core/circuit/sparse/walk';
import { type SparseProgram, type TermKind, termSizes } from '../../core/encode';
import { peakOf, stepCost } from '../../core/estimate';

/** One group of kinds for each feature that the word and SELECT depend on. */
const KINDS = {
  spinFree: { form: 'pairs', antisymmetric: false, mu: 0, nu: 0, shared: false, exchanged: false },
  oneBody: { form: 'pairs', antisymmetric: true, mu: 2, nu: null, shared: false, exchanged: false },
  shared: { form: 'pairs', antisymmetric: true, mu: 1, nu: 0, shared: true, exchanged: false },
  other: { form: 'pairs', antisymmetric: true, mu: 0, nu: 3, shared: false, exchanged: false },
  spinSpin: { form: 'pairs', antisymmetric: false, mu: 1, nu: 3, shared: false, exchanged: true },
  sameSpin: { form: 'strings', flags: 8 + 16 },
  string: { form: 'strings', flags: 1 + 4 + 16 },
} satisfies Record<string, TermKind>;

const programs = fc
  .record({
    orbitals: fc.integer({ min: 3, max: 9 }),
    counts: fc.oneof(
      fc.record({
        spinFree: fc.integer({ min: 1, max: 40 }),
        oneBody: fc.integer({ min: 0, max: 3 }),
        shared: fc.constantFrom(0, 0, 1, 5),
        other: fc.constantFrom(0, 0, 4),
        spinSpin: fc.constantFrom(0, 0, 3),
        sameSpin: fc.constantFrom(0, 0, 5),
      }),
      // Strings with spin stand beside no pairs of free spins.
      fc.record({
        oneBody: fc.integer({ min: 0, max: 3 }),
        sameSpin: fc.integer({ min: 1, max: 20 }),
        string: fc.constantFrom(0, 7),
      }),
    ),
    share: fc.constantFrom(2 / 3, 1 / 2, 0.3),
  })
  .map(({ orbitals, counts, share }): SparseProgram => {
    const names = Object.keys(KINDS) as (keyof typeof KINDS)[];
    const kindOf = names.flatMap((name, i) =>
      Array.from({ length: (counts as Record<string, number>)[name] ?? 0 }, () => i),
    );
    return {
      orbitals,
      constant: 0,
      kinds: names.map((name) => KINDS[name]),
      kindOf: Uint8Array.from(kindOf),
      orbitalsOf: Uint16Array.from(kindOf.flatMap(() => [1, 0, 1, 0])),
      weights: Float64Array.from(kindOf, (_, i) => 1 + (i % 3)),
      negative: new Uint8Array(kindOf.length),
      otherShare: share,
      otherSign: 1,
    };
  });

const block = fc.constantFrom(1, 2, 4, 8);

describe('sparse walk step', () => {
  it('has a recipe that counts the emitted circuit, part by part, and its peak of wires', () => {
    fc.assert(
      fc.property(
        programs,
        fc.record({ keep: fc.integer({ min: 1, max: 6 }), share: fc.integer({ min: 1, max: 5 }) }),
        fc.integer({ min: 0, max: 5 }),
        fc.oneof(
          fc.record({ read: block, erase: block }),
          fc.record({ read: fc.constantFrom(2, 4), erase: block, slice: fc.constantFrom(1, 3) }),
        ),
        fc.boolean(),
        (program, bits, refinement, asked, controlled) => {
          const tables = sparseTables(program, bits, refinement);
          const { layout } = tables;
          const limit = layout.address.rows;
          const erase = asked.erase <= limit ? asked.erase : 1;
          const blocks = asked.read <= limit ? { ...asked, erase } : { read: 1, erase };

          const counter = new GateCounter({ toffoliOnly: true });
          const machine = new Machine(counter);
          const wires = sparseWires(layout, machine);
          const control = controlled ? machine.allocate() : null;
          sparseWalkStep(tables, wires, blocks, control).run(machine);

          const controls = controlled ? 1 : 0;
          const recipe: Subroutine = sparseRecipe(layout, blocks, {
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
          expect(termSizes(program).coefficients).toBeLessThanOrEqual(layout.address.rows);
        },
      ),
      { numRuns: 120 },
    );
  });
});

/** Emits without the contents of the table, which are Clifford gates. */
function emit(layout: SparseLayout, blocks: Blocks): { toffoli: number; t: number; wires: number } {
  const program = { otherSign: 1 } as SparseProgram;
  const tables = { program, layout, keep: new Uint32Array(0), alternate: new Uint32Array(0) };
  const counter = new GateCounter({ toffoliOnly: true });
  const machine = new Machine(counter);
  sparseWalkStep(tables, sparseWires(layout, machine), blocks, null).run(machine);
  const { toffoli, t } = GateCounter.total(counter.root);
  return { toffoli, t, wires: machine.peak };
}

describe('numbers of the address', () => {
  /** Runs reversible logic on a basis state and reads wires back. */
  const run = (bits: number, x: number, build: (machine: Machine, wires: number[]) => readonly number[]) => {
    const state = new SparseState({ maxWires: 192 });
    const machine = new Machine(state);
    const wires = machine.allocateRegister(bits);
    for (const [i, wire] of wires.entries()) if ((x >> i) & 1) machine.gate('X', wire);
    const read = build(machine, wires);
    let value = 0;
    state.visit((isSet) => {
      for (const [i, wire] of read.entries()) if (isSet(wire)) value += 2 ** i;
    });
    return value;
  };

  it('multiplies by an odd constant and takes it back', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: 31 }),
        fc.integer({ min: 6, max: 9 }),
        fc.nat(),
        (half, bits, seed) => {
          const factor = 2 * half + 1;
          const x = seed % 2 ** bits;
          const product = run(bits, x, (machine, wires) => {
            const lent = machine.allocateRegister(multipleWires(factor, bits));
            const { compute, value } = multiple(factor, wires, lent);
            compute.run(machine);
            return value;
          });
          expect(product).toBe(factor * x);
          const back = run(bits, x, (machine, wires) => {
            const lent = machine.allocateRegister(multipleWires(factor, bits));
            const { compute } = multiple(factor, wires, lent);
            compute.run(machine);
            compute.runAdjoint(machine);
            return [...wires, ...lent];
          });
          expect(back).toBe(x);
        },
      ),
      { numRuns: 60 },
    );
  });

  it('compares with an odd constant', () => {
    for (const bits of [1, 2, 3, 4]) {
      for (let threshold = 1; threshold < 2 ** bits; threshold += 2) {
        for (let x = 0; x < 2 ** bits; x++) {
          const less = run(bits, x, (machine, wires) => {
            const lent = machine.allocateRegister(bits);
            lessThanConstant(wires, threshold, lent).run(machine);
            return lent.slice(-1);
          });
          expect(less).toBe(x < threshold ? 1 : 0);
        }
      }
    }
  });
});

describe('sparse step', () => {
  it.each([
    ['mixed', 8.3e-5],
    ['fixed', 0],
  ] as const)(
    'counts what is emitted for millions of rows of fifty orbitals, spins %s',
    (spins, sharedPart) => {
      const { layout, blocks, recipe } = sparseStep(
        {
          orbitals: 50,
          coefficients: 2_657_691,
          spin: true,
          spins,
          secondComponent: false,
          exchanged: false,
          sharedPart,
          otherShare: 2 / 3,
        },
        { keepBits: 23, phaseBits: 0 },
        { mode: 'clean', block: 'auto', qubitCap: null },
      );
      const emitted = emit(layout, blocks);
      const { toffoli, parts, t } = stepCost(recipe);
      expect(emitted).toEqual({ toffoli: toffoli - parts.control, t, wires: peakOf(recipe).qubits });
    },
  );

  const common = {
    orbitals: fc.integer({ min: 2, max: 60 }),
    coefficients: fc.integer({ min: 1, max: 3_000_000 }),
    spin: fc.constant(true),
    otherShare: fc.constant(2 / 3),
  };
  const sizes = fc.oneof(
    fc.record({
      ...common,
      spins: fc.constantFrom('free' as const, 'mixed' as const),
      secondComponent: fc.boolean(),
      exchanged: fc.boolean(),
      sharedPart: fc.constantFrom(0, 1e-4, 0.1),
    }),
    fc.record({
      ...common,
      spins: fc.constant('fixed' as const),
      secondComponent: fc.constant(false),
      exchanged: fc.constant(false),
      sharedPart: fc.constant(0),
    }),
  );
  const widths = fc.record({ keepBits: fc.integer({ min: 4, max: 26 }), phaseBits: fc.constant(20) });

  it('costs no less under a cap, and keeps it unless the look-up is down to single rows', () => {
    fc.assert(
      fc.property(sizes, widths, fc.integer({ min: 100, max: 20_000 }), (given, bits, cap) => {
        const free = sparseStep(given, bits, { mode: 'clean', block: 'auto', qubitCap: null });
        const capped = sparseStep(given, bits, { mode: 'clean', block: 'auto', qubitCap: cap });
        expect(stepCost(capped.recipe).toffoli).toBeGreaterThanOrEqual(stepCost(free.recipe).toffoli);
        if (peakOf(free.recipe).qubits <= cap) expect(capped.blocks).toEqual(free.blocks);
        if (peakOf(capped.recipe).qubits > cap) expect(capped.blocks.read).toBe(1);
      }),
    );
  });

  it('has a row for every coefficient, and no table that a power of two would make cheaper', () => {
    fc.assert(
      fc.property(sizes, widths, (given, bits) => {
        const policy = { mode: 'clean', block: 'auto', qubitCap: null } as const;
        const { layout, recipe } = sparseStep(given, bits, policy);
        const { rows, factor, lowBits } = layout.address;
        expect(rows).toBe(factor * 2 ** lowBits);
        expect(rows).toBeGreaterThanOrEqual(given.coefficients);
        expect(rows).toBeLessThan(2 * given.coefficients);
        const full = 2 ** Math.ceil(Math.log2(given.coefficients));
        const filled = sparseStep({ ...given, coefficients: full }, bits, policy);
        const { prepare } = stepCost(recipe).parts;
        // The split between spin–orbit kinds may take half a bit more in the larger table.
        expect(prepare).toBeLessThanOrEqual(stepCost(filled.recipe).parts.prepare + 1);
      }),
    );
  });
});

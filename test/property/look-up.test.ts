import fc from 'fast-check';
import { expect, it } from 'vitest';
import { GateCounter } from '../../core/circuit/gates/counter';
import { Machine } from '../../core/circuit/gates/machine';
import { erasureToffoli, lookUp, lookUpToffoli } from '../../core/circuit/primitives/look-up';
import {
  addressBits,
  unaryIteration,
  unaryIterationToffoli,
} from '../../core/circuit/primitives/unary-iteration';
import { SparseState } from '../../core/circuit/simulate/sparse-state';

const read = (isSet: (w: number) => boolean, wires: readonly number[]) =>
  wires.reduce((sum, w, i) => sum + (isSet(w) ? 2 ** i : 0), 0);

/** A superposition over the addresses below `count`, one basis state at a time and all at once. */
function superpose(machine: Machine, wires: readonly number[]): void {
  for (const wire of wires) machine.gate('H', wire);
}

it('unary iteration flags exactly the addressed item and costs what the formula says', () => {
  fc.assert(
    fc.property(fc.integer({ min: 1, max: 40 }), fc.boolean(), fc.nat(), (count, controlled, pick) => {
      const value = pick % count;
      const state = new SparseState();
      const machine = new Machine(state);
      const address = machine.allocateRegister(addressBits(count));
      const hit = machine.allocateRegister(count);
      const control = controlled ? machine.allocate() : null;
      if (control !== null) machine.gate('H', control);
      for (const [i, wire] of address.entries()) if ((value >> i) & 1) machine.gate('X', wire);
      unaryIteration(address, count, control, (m, index, flag) => m.gate('CX', flag, hit[index]!)).run(
        machine,
      );
      state.visit((isSet) => {
        const on = control === null || isSet(control);
        expect(hit.map((w) => isSet(w))).toEqual(hit.map((_, i) => on && i === value));
      });

      const counter = new GateCounter();
      const counting = new Machine(counter);
      const a = counting.allocateRegister(addressBits(count));
      unaryIteration(a, count, controlled ? counting.allocate() : null, () => {}).run(counting);
      expect(GateCounter.total(counter.root).toffoli).toBe(unaryIterationToffoli(count, controlled));
    }),
    { numRuns: 120 },
  );
});

it('a look-up writes the addressed row, its erasure restores the state, and both cost what the formulas say', () => {
  fc.assert(
    fc.property(
      fc.record({
        rows: fc.integer({ min: 1, max: 21 }),
        width: fc.integer({ min: 1, max: 3 }),
        block: fc.constantFrom(1, 2, 4, 8),
        erasureBlock: fc.constantFrom(1, 2, 4, 8),
        controlled: fc.boolean(),
        outcomes: fc.constantFrom<'random' | 0 | 1>('random', 0, 1),
        seed: fc.integer(),
        contents: fc.array(fc.nat(7), { minLength: 21, maxLength: 21 }),
      }),
      ({ rows, width, block, erasureBlock, controlled, outcomes, seed, contents }) => {
        const row = (l: number) => contents[l]! % 2 ** width;
        const table = { rows, width, bit: (l: number, b: number) => ((row(l) >> b) & 1) === 1 };
        // Address registers are wide enough for whole blocks of either kind.
        const size = Math.max(
          addressBits(rows),
          Math.log2(block) + addressBits(Math.ceil(rows / block)),
          Math.log2(erasureBlock) + addressBits(Math.ceil(rows / erasureBlock)),
        );
        const simulate = () => {
          const state = new SparseState({ outcomes, seed });
          const machine = new Machine(state);
          const address = machine.allocateRegister(size);
          return { state, machine, address };
        };

        const { state, machine, address } = simulate();
        const control = controlled ? machine.allocate() : null;
        if (control !== null) machine.gate('H', control);
        // Addresses below `rows` only: superpose the low bits as far as a power of two reaches, then shift.
        const free = Math.floor(Math.log2(rows));
        superpose(machine, address.slice(0, free));
        const output = machine.allocateRegister(width * block);
        const operation = lookUp(address, output, table, block, erasureBlock, control);
        operation.run(machine);
        state.visit((isSet) => {
          const on = control === null || isSet(control);
          const l = read(isSet, address);
          if (on) expect(read(isSet, output.slice(0, width))).toBe(row(l));
        });
        operation.runAdjoint(machine);
        machine.releaseRegister(output);
        const amplitude = Math.SQRT1_2 ** (free + (controlled ? 1 : 0));
        expect(state.size).toBe(2 ** (free + (controlled ? 1 : 0)));
        state.visit((_, re, im) => {
          expect(re).toBeCloseTo(amplitude, 12);
          expect(im).toBeCloseTo(0, 12);
        });

        const count = (adjoint: boolean) => {
          const counter = new GateCounter();
          const m = new Machine(counter);
          const a = m.allocateRegister(size);
          const c = controlled ? m.allocate() : null;
          const op = lookUp(a, m.allocateRegister(width * block), table, block, erasureBlock, c);
          if (adjoint) op.runAdjoint(m);
          else op.run(m);
          return GateCounter.total(counter.root).toffoli;
        };
        expect(count(false)).toBe(lookUpToffoli(rows, width, block, controlled));
        expect(count(true)).toBe(erasureToffoli(rows, erasureBlock, controlled));
      },
    ),
    { numRuns: 200 },
  );
});

import fc from 'fast-check';
import { expect, it } from 'vitest';
import { GateCounter } from '../../core/circuit/gates/counter';
import { Machine } from '../../core/circuit/gates/machine';
import { countBlocks, erasureToffoli, lookUp, lookUpToffoli } from '../../core/circuit/primitives/look-up';
import {
  addressBits,
  unaryIteration,
  unaryIterationToffoli,
} from '../../core/circuit/primitives/unary-iteration';
import { SparseState } from '../../core/circuit/simulate/sparse-state';

const read = (isSet: (w: number) => boolean, wires: readonly number[]) =>
  wires.reduce((sum, w, i) => sum + (isSet(w) ? 2 ** i : 0), 0);

/** Ascending addresses with gaps. */
const addresses = (max: number, length: number) =>
  fc
    .uniqueArray(fc.nat(max), { minLength: 1, maxLength: length })
    .map((list) => Uint32Array.from(list).sort());

it('unary iteration flags exactly the addressed item and costs what the formula says', () => {
  fc.assert(
    fc.property(addresses(63, 30), fc.boolean(), fc.nat(), (list, controlled, pick) => {
      const value = list[pick % list.length]!;
      const bits = addressBits(list[list.length - 1]! + 1);
      const state = new SparseState({ maxWires: 128 });
      const machine = new Machine(state);
      const register = machine.allocateRegister(bits);
      const hit = machine.allocateRegister(64);
      const control = controlled ? machine.allocate() : null;
      if (control !== null) machine.gate('H', control);
      for (const [i, wire] of register.entries()) if ((value >> i) & 1) machine.gate('X', wire);
      unaryIteration(register, list, control, (m, index, flag) => m.gate('CX', flag, hit[index]!)).run(
        machine,
      );
      state.visit((isSet) => {
        const on = control === null || isSet(control);
        expect(hit.map((w) => isSet(w))).toEqual(hit.map((_, i) => on && i === value));
      });

      const counter = new GateCounter();
      const counting = new Machine(counter);
      const wires = counting.allocateRegister(bits);
      unaryIteration(wires, list, controlled ? counting.allocate() : null, () => {}).run(counting);
      expect(GateCounter.total(counter.root).toffoli).toBe(unaryIterationToffoli(list.length, controlled));
    }),
    { numRuns: 120 },
  );
});

it('a look-up writes the addressed row, its erasure restores the state, and both cost what the formulas say', () => {
  fc.assert(
    fc.property(
      fc.record({
        list: addresses(31, 21),
        width: fc.integer({ min: 1, max: 3 }),
        read: fc.constantFrom(1, 2, 4, 8),
        erase: fc.constantFrom(1, 2, 4, 8),
        controlled: fc.boolean(),
        outcomes: fc.constantFrom<'random' | 0 | 1>('random', 0, 1),
        seed: fc.integer(),
        contents: fc.array(fc.nat(7), { minLength: 32, maxLength: 32 }),
        phases: fc.tuple(fc.nat(), fc.nat()),
      }),
      ({ list, width, read: block, erase, controlled, outcomes, seed, contents, phases }) => {
        const row = (l: number) => contents[l]! % 2 ** width;
        const table = { addresses: list, width, bit: (l: number, b: number) => ((row(l) >> b) & 1) === 1 };
        const size = Math.max(3, addressBits(list[list.length - 1]! + 1));

        const state = new SparseState({ maxWires: 96, outcomes, seed });
        const machine = new Machine(state);
        const register = machine.allocateRegister(size);
        const control = controlled ? machine.allocate() : null;
        if (control !== null) machine.gate('H', control);
        // Two addresses side by side: |a⟩ + |b⟩, so that a wrong relative phase shows.
        const [a, b] = phases.map((pick) => list[pick % list.length]!) as [number, number];
        const differing = register.filter((_, i) => ((a ^ b) >> i) & 1);
        for (const [i, wire] of register.entries()) if ((a >> i) & 1) machine.gate('X', wire);
        if (differing[0] !== undefined) {
          machine.gate('H', differing[0]);
          for (const wire of differing.slice(1)) machine.gate('CX', differing[0], wire);
          // A start bit of 1 gives |a⟩ with the sign of the Hadamard and shifts the other bits: put them right.
          const lead = register.indexOf(differing[0]);
          if ((a >> lead) & 1) {
            machine.gate('Z', differing[0]);
            for (const wire of differing.slice(1)) machine.gate('X', wire);
          }
        }
        const before = snapshot(state, register, control);
        expect([...before.keys()].map((key) => key % 32).every((l) => l === a || l === b)).toBe(true);
        const output = machine.allocateRegister(width * block);
        const operation = lookUp(register, output, table, { read: block, erase }, control);
        operation.run(machine);
        state.visit((isSet) => {
          const on = control === null || isSet(control);
          if (on) expect(read(isSet, output.slice(0, width))).toBe(row(read(isSet, register)));
        });
        operation.runAdjoint(machine);
        machine.releaseRegister(output);
        const after = snapshot(state, register, control);
        expect(after.size).toBe(before.size);
        for (const [key, [re, im]] of before) {
          expect(after.get(key)![0]).toBeCloseTo(re, 12);
          expect(after.get(key)![1]).toBeCloseTo(im, 12);
        }

        const count = (adjoint: boolean) => {
          const counter = new GateCounter();
          const m = new Machine(counter);
          const wires = m.allocateRegister(size);
          const c = controlled ? m.allocate() : null;
          const op = lookUp(wires, m.allocateRegister(width * block), table, { read: block, erase }, c);
          if (adjoint) op.runAdjoint(m);
          else op.run(m);
          return GateCounter.total(counter.root).toffoli;
        };
        expect(count(false)).toBe(lookUpToffoli(countBlocks(list, block), width, block, controlled));
        expect(count(true)).toBe(erasureToffoli(countBlocks(list, erase), erase, controlled));
      },
    ),
    { numRuns: 200 },
  );
});

function snapshot(state: SparseState, register: readonly number[], control: number | null) {
  const amplitudes = new Map<number, [number, number]>();
  state.visit((isSet, re, im) => {
    const on = control !== null && isSet(control) ? 32 : 0;
    amplitudes.set(read(isSet, register) + on, [re, im]);
  });
  return amplitudes;
}

import fc from 'fast-check';
import { expect, it } from 'vitest';
import { GateCounter } from '../../core/circuit/gates/counter';
import { Machine } from '../../core/circuit/gates/machine';
import { rangedIteration, rangedIterationWires } from '../../core/circuit/primitives/ranged-iteration';
import { unaryIterationToffoli } from '../../core/circuit/primitives/unary-iteration';
import { SparseState } from '../../core/circuit/simulate/sparse-state';

const BITS = 4;
const lists = fc
  .uniqueArray(fc.nat(2 ** BITS - 1), { minLength: 1, maxLength: 12 })
  .map((list) => Uint32Array.from(list).sort());

it('flags the address and all below or above it, in superposition, for the cost of the iteration', () => {
  fc.assert(
    fc.property(
      lists,
      fc.boolean(),
      fc.constantFrom('below' as const, 'above' as const),
      fc.constantFrom(0 as const, 1 as const),
      fc.boolean(),
      (list, controlled, side, outcomes, adjoint) => {
        const state = new SparseState({ maxWires: 64, outcomes });
        const machine = new Machine(state);
        const register = machine.allocateRegister(BITS);
        const control = controlled ? machine.allocate() : null;
        const hit = machine.allocateRegister(2 ** BITS);
        const along = machine.allocateRegister(2 ** BITS);
        const amplitude = 1 / Math.sqrt(list.length * (controlled ? 2 : 1));
        state.load(
          [...list].flatMap((address) =>
            (control === null ? [[]] : [[], [control]]).map((on) => ({
              ones: [...register.filter((_, i) => (address >> i) & 1), ...on],
              amplitude,
            })),
          ),
        );
        const operation = rangedIteration(register, list, control, side, (m, address, flag, inRange) => {
          m.gate('CX', flag, hit[address]!);
          m.gate('CX', inRange, along[address]!);
        });
        if (adjoint) operation.runAdjoint(machine);
        else operation.run(machine);
        let seen = 0;
        state.visit((isSet, re, im) => {
          seen++;
          const held = register.reduce((sum, w, i) => sum + (isSet(w) ? 2 ** i : 0), 0);
          const on = control === null || isSet(control);
          for (const address of list) {
            expect(isSet(hit[address]!)).toBe(on && address === held);
            expect(isSet(along[address]!)).toBe(on && (side === 'below' ? address < held : address > held));
          }
          expect(re).toBeCloseTo(amplitude, 12);
          expect(im).toBeCloseTo(0, 12);
        });
        expect(seen).toBe(list.length * (controlled ? 2 : 1));

        const counter = new GateCounter();
        const counting = new Machine(counter);
        const wires = counting.allocateRegister(BITS);
        const switched = controlled ? counting.allocate() : null;
        const live = counting.live;
        rangedIteration(wires, list, switched, side, () => {}).run(counting);
        expect(GateCounter.total(counter.root).toffoli).toBe(unaryIterationToffoli(list.length, controlled));
        expect(counting.peak - live).toBe(rangedIterationWires(list, controlled));
      },
    ),
    { numRuns: 150 },
  );
});

import fc from 'fast-check';
import { expect, it } from 'vitest';
import { GateCounter } from '../../core/circuit/gates/counter';
import { Machine } from '../../core/circuit/gates/machine';
import {
  type AliasTable,
  aliasData,
  aliasSampling,
  aliasSamplingToffoli,
  aliasTable,
} from '../../core/circuit/primitives/alias-sampling';
import { countBlocks } from '../../core/circuit/primitives/look-up';
import {
  controlledHadamard,
  flipZeros,
  hadamards,
  reflectionToffoli,
} from '../../core/circuit/primitives/reflection';
import { firstAddresses } from '../../core/circuit/primitives/unary-iteration';
import { SparseState } from '../../core/circuit/simulate/sparse-state';
import { drawing } from '../../core/circuit/squares/tables';

const read = (isSet: (w: number) => boolean, wires: readonly number[]) =>
  wires.reduce((sum, w, i) => sum + (isSet(w) ? 2 ** i : 0), 0);

const weightLists = fc.array(fc.double({ min: 0, max: 1, noNaN: true }), { minLength: 1, maxLength: 13 });

function build(machine: Machine, table: AliasTable, read: number, erase: number) {
  const { indexBits: n, keepBits } = table;
  const index = machine.allocateRegister(n);
  const wires = {
    uniform: machine.allocateRegister(keepBits),
    output: machine.allocateRegister((n + keepBits) * read),
    carries: machine.allocateRegister(keepBits),
    idle: [],
  };
  const source = {
    address: index,
    addresses: firstAddresses(2 ** n),
    alternate: (a: number) => table.alternate[a]!,
    keep: (a: number) => table.keep[a]!,
  };
  return { index, wires, operation: aliasSampling(index, wires, source, { read, erase }) };
}

it('an alias table rounds weights to its grid: off by less than one unit, and exact in sum', () => {
  fc.assert(
    fc.property(weightLists, fc.integer({ min: 1, max: 8 }), (weights, keepBits) => {
      fc.pre(weights.some((w) => w > 1e-9));
      const table = aliasTable(weights, 4, keepBits);
      const sum = weights.reduce((a, b) => a + b, 0);
      const unit = 2 ** -(4 + keepBits);
      expect(table.probabilities.reduce((a, b) => a + b, 0)).toBe(1);
      weights.forEach((w, i) => {
        expect(Math.abs(table.probabilities[i]! - w / sum)).toBeLessThan(unit * 1.0001);
      });
      // What the buckets hand out is what is listed.
      const out = new Float64Array(16);
      for (let i = 0; i < 16; i++) {
        const kept = table.alternate[i] === i ? 2 ** keepBits : table.keep[i]!;
        out[i]! += kept * unit;
        out[table.alternate[i]!]! += (2 ** keepBits - kept) * unit;
      }
      for (let i = 0; i < 16; i++) expect(out[i]).toBeCloseTo(table.probabilities[i]!, 14);
    }),
  );
});

it('the circuit samples the table, comes back to zero, and costs what the formula says', () => {
  fc.assert(
    fc.property(
      weightLists,
      fc.integer({ min: 1, max: 4 }),
      fc.constantFrom(1, 2, 4),
      fc.constantFrom(1, 2, 4),
      fc.constantFrom<'random' | 0 | 1>('random', 0, 1),
      (weights, keepBits, readBlock, eraseBlock, outcomes) => {
        fc.pre(weights.some((w) => w > 1e-9));
        const table = aliasTable(weights, 4, keepBits);
        const state = new SparseState({ maxWires: 96, outcomes });
        const machine = new Machine(state);
        const { index, wires, operation } = build(machine, table, readBlock, eraseBlock);
        hadamards(index).run(machine);
        operation.run(machine);
        const probability = new Float64Array(16);
        state.visit((isSet, re, im) => {
          probability[read(isSet, index)]! += re * re + im * im;
        });
        for (let i = 0; i < 16; i++) expect(probability[i]).toBeCloseTo(table.probabilities[i]!, 12);
        operation.runAdjoint(machine);
        hadamards(index).run(machine);
        for (const register of [index, wires.uniform, wires.output, wires.carries]) {
          machine.releaseRegister(register);
        }
        state.visit((_, re) => {
          expect(re).toBeCloseTo(1, 12);
        });

        const all = firstAddresses(16);
        const expected = aliasSamplingToffoli(
          { read: countBlocks(all, readBlock), erase: countBlocks(all, eraseBlock) },
          4,
          keepBits,
          { read: readBlock, erase: eraseBlock },
        );
        for (const [direction, cost] of [
          ['run', expected.prepare],
          ['runAdjoint', expected.unprepare],
        ] as const) {
          const counter = new GateCounter();
          const counting = new Machine(counter);
          build(counting, table, readBlock, eraseBlock).operation[direction](counting);
          expect(GateCounter.total(counter.root).toffoli).toBe(cost);
        }
      },
    ),
    { numRuns: 60 },
  );
});

it('data are drawn with the same probabilities as entries, at the same index, and cost what the formula says', () => {
  fc.assert(
    fc.property(
      weightLists,
      fc.integer({ min: 1, max: 3 }),
      fc.constantFrom({ read: 1, erase: 1 }, { read: 2, erase: 4 }, { read: 4, erase: 2 }),
      fc.constantFrom<'random' | 0 | 1>('random', 0, 1),
      (weights, keepBits, blocks, outcomes) => {
        fc.pre(weights.some((w) => w > 1e-9));
        const table = aliasTable(weights, 4, keepBits);
        const dataBits = 5;
        // Every entry has data of its own: 2·entry + 3 in five bits, and no two entries the same.
        const dataOf = (entry: number) => (2 * entry + 3) % 32;
        const make = (machine: Machine) => {
          const index = machine.allocateRegister(4);
          const wires = {
            uniform: machine.allocateRegister(keepBits),
            output: machine.allocateRegister((2 * dataBits + keepBits) * blocks.read),
            carries: machine.allocateRegister(keepBits),
            idle: [],
          };
          const source = {
            address: index,
            addresses: firstAddresses(16),
            alternate: (a: number) => table.alternate[a]!,
            keep: (a: number) => table.keep[a]!,
            dataBits,
            data: (a: number, b: number) => ((dataOf(a) >> b) & 1) === 1,
          };
          return { index, wires, operation: aliasData(wires, source, blocks) };
        };
        const state = new SparseState({ maxWires: 96, outcomes });
        const machine = new Machine(state);
        const { index, wires, operation } = make(machine);
        const steering = [...index, ...wires.uniform];
        hadamards(steering).run(machine);
        // The comparison leaves other values in the uniform number until it is taken back.
        const label = machine.allocateRegister(keepBits);
        const copy = () => {
          for (const [i, wire] of label.entries()) machine.gate('CX', wires.uniform[i]!, wire);
        };
        copy();
        operation.run(machine);
        const probability = new Float64Array(32);
        state.visit((isSet, re, im) => {
          probability[read(isSet, wires.output.slice(0, dataBits))]! += re * re + im * im;
          // Which entry it is follows from index and uniform number alone.
          const at = read(isSet, index);
          const entry = read(isSet, label) < table.keep[at]! ? at : table.alternate[at]!;
          expect(read(isSet, wires.output.slice(0, dataBits))).toBe(dataOf(entry));
        });
        for (let i = 0; i < 16; i++) {
          expect(probability[dataOf(i)]).toBeCloseTo(table.probabilities[i]!, 12);
          const drawn = drawing(table, i);
          expect(drawn === null).toBe(table.probabilities[i] === 0);
          if (!drawn) continue;
          const { index: at, uniform } = drawn;
          expect(uniform < table.keep[at]! ? at : table.alternate[at]).toBe(i);
        }
        operation.runAdjoint(machine);
        copy();
        hadamards(steering).run(machine);
        for (const register of [index, wires.uniform, wires.output, wires.carries, label]) {
          machine.releaseRegister(register);
        }
        const all = firstAddresses(16);
        const counts = { read: countBlocks(all, blocks.read), erase: countBlocks(all, blocks.erase) };
        const expected = aliasSamplingToffoli(counts, dataBits, keepBits, blocks, 2 * dataBits + keepBits);
        for (const [direction, cost] of [
          ['run', expected.prepare],
          ['runAdjoint', expected.unprepare],
        ] as const) {
          const counter = new GateCounter();
          make(new Machine(counter)).operation[direction](new Machine(counter));
          expect(GateCounter.total(counter.root).toffoli).toBe(cost);
        }
      },
    ),
    { numRuns: 60 },
  );
});

it('flips the sign of the all-zero state only, where it is switched on', () => {
  for (let n = 1; n <= 5; n++) {
    for (const ones of [0, 1]) {
      const counter = new GateCounter();
      const counting = new Machine(counter);
      flipZeros(counting.allocateRegister(n), counting.allocateRegister(ones)).run(counting);
      expect(GateCounter.total(counter.root).toffoli).toBe(reflectionToffoli(n + ones));
      const state = new SparseState();
      const machine = new Machine(state);
      const zeros = machine.allocateRegister(n);
      const switches = machine.allocateRegister(ones);
      hadamards([...zeros, ...switches]).run(machine);
      flipZeros(zeros, switches).run(machine);
      state.visit((isSet, re) => {
        const flipped = read(isSet, zeros) === 0 && switches.every((w) => isSet(w));
        expect(Math.sign(re)).toBe(flipped ? -1 : 1);
      });
    }
  }
});

it('a controlled Hadamard is one, with two T gates', () => {
  for (const on of [0, 1]) {
    for (const start of [0, 1]) {
      const state = new SparseState();
      const machine = new Machine(state);
      const [control, target] = machine.allocateRegister(2) as [number, number];
      if (on) machine.gate('X', control);
      if (start) machine.gate('X', target);
      controlledHadamard(control, target).run(machine);
      if (on) machine.gate('H', target);
      state.visit((isSet, re, im) => {
        expect(isSet(target)).toBe(start === 1);
        expect(re).toBeCloseTo(1, 12);
        expect(im).toBeCloseTo(0, 12);
      });
    }
  }
  const counter = new GateCounter();
  const machine = new Machine(counter);
  controlledHadamard(machine.allocate(), machine.allocate()).run(machine);
  expect(GateCounter.total(counter.root)).toMatchObject({ toffoli: 0, t: 2 });
});

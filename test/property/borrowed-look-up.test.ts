import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { GateCounter } from '../../core/circuit/gates/counter';
import { Machine } from '../../core/circuit/gates/machine';
import type { Operation } from '../../core/circuit/gates/operation';
import {
  borrowedLookUp,
  borrowedLookUpToffoli,
  borrowedLookUpWires,
  borrowedSwapLookUp,
  borrowedSwapToffoli,
  borrowedWires,
} from '../../core/circuit/primitives/borrowed-look-up';
import { countBlocks, erasureToffoli, type Table } from '../../core/circuit/primitives/look-up';
import { SparseState } from '../../core/circuit/simulate/sparse-state';

const given = fc
  .record({
    list: fc.uniqueArray(fc.nat(15), { minLength: 1, maxLength: 13 }),
    width: fc.integer({ min: 1, max: 4 }),
    block: fc.constantFrom(2, 4, 8),
    slice: fc.integer({ min: 1, max: 4 }),
    eraseBlock: fc.constantFrom(1, 2, 4),
    controlled: fc.boolean(),
    outcomes: fc.constantFrom<0 | 1>(0, 1),
    contents: fc.array(fc.nat(15), { minLength: 16, maxLength: 16 }),
    /** Bits of borrowed wires that start in |−⟩ or |1⟩, else |+⟩ or |0⟩; which ones are superposed. */
    foreign: fc.tuple(fc.nat(), fc.nat()),
    onto: fc.nat(15),
  })
  .map((one) => ({ ...one, list: Uint32Array.from(one.list).sort(), slice: Math.min(one.slice, one.width) }));
type Given = typeof given extends fc.Arbitrary<infer T> ? T : never;

const tableOf = ({ list, width, contents }: Given): Table => ({
  addresses: list,
  width,
  bit: (address, b) => ((contents[address]! >> b) & 1) === 1,
});

interface Wires {
  readonly register: readonly number[];
  readonly control: number | null;
  readonly output: readonly number[];
  readonly borrowed: readonly number[];
}

function allocate(machine: Machine, { width, controlled }: Given, borrowed: number): Wires {
  return {
    register: machine.allocateRegister(4),
    control: controlled ? machine.allocate() : null,
    output: machine.allocateRegister(width),
    borrowed: machine.allocateRegister(borrowed),
  };
}

/** Superposes all listed addresses, control off and on, and puts something into the borrowed wires. */
function start(machine: Machine, state: SparseState, one: Given, wires: Wires, onto: number): void {
  const { register, control, output, borrowed } = wires;
  state.load(
    [...one.list].flatMap((address) =>
      [0, 1].slice(0, control === null ? 1 : 2).map((on) => ({
        ones: [
          ...register.filter((_, i) => (address >> i) & 1),
          ...output.filter((_, i) => (onto >> i) & 1),
          ...(on && control !== null ? [control] : []),
        ],
        amplitude: 1 / Math.sqrt(one.list.length * (control === null ? 1 : 2)),
      })),
    ),
  );
  const [set, superposed] = one.foreign;
  for (const [i, wire] of borrowed.entries()) {
    if ((set >> (i % 20)) & 1) machine.gate('X', wire);
    // At most four in superposition: the state stays small.
    if (i < 4 && (superposed >> i) & 1) machine.gate('H', wire);
  }
  // And entangled with the address, as a system register may be.
  if (borrowed.length > 0) machine.gate('CX', register[0]!, borrowed[borrowed.length - 1]!);
}

type Amplitudes = Map<string, readonly [number, number]>;

function read(state: SparseState, { register, control, output, borrowed }: Wires): Amplitudes {
  const out: Amplitudes = new Map();
  const all = [...register, ...(control === null ? [] : [control]), ...output, ...borrowed];
  state.visit((isSet, re, im) => out.set(all.map((w) => +isSet(w)).join(''), [re, im]));
  return out;
}

function expectEqual(got: Amplitudes, want: Amplitudes): void {
  expect([...got.keys()].sort()).toEqual([...want.keys()].sort());
  for (const [key, [re, im]] of want) {
    expect(got.get(key)![0]).toBeCloseTo(re, 11);
    expect(got.get(key)![1]).toBeCloseTo(im, 11);
  }
}

/** The state with the rows added onto the output by the definition of a look-up. */
function lookedUp(before: Amplitudes, one: Given): Amplitudes {
  const at = 4 + (one.controlled ? 1 : 0);
  return new Map(
    [...before].map(([key, value]) => {
      const bits = [...key].map(Number);
      const address = bits.slice(0, 4).reduce((sum, bit, i) => sum + bit * 2 ** i, 0);
      const on = !one.controlled || bits[4] === 1;
      const changed = bits.map((bit, i) =>
        on && i >= at && i < at + one.width ? bit ^ ((one.contents[address]! >> (i - at)) & 1) : bit,
      );
      return [changed.join(''), value];
    }),
  );
}

function count(one: Given, borrowed: number, make: (wires: Wires) => Operation, adjoint: boolean) {
  const counter = new GateCounter();
  const machine = new Machine(counter);
  const wires = allocate(machine, one, borrowed);
  const held = machine.live;
  const operation = make(wires);
  if (adjoint) operation.runAdjoint(machine);
  else operation.run(machine);
  return { toffoli: GateCounter.total(counter.root).toffoli, lent: machine.peak - held };
}

function check(one: Given, borrowed: number, make: (wires: Wires) => Operation, onto: number): void {
  const state = new SparseState({ maxWires: 128, outcomes: one.outcomes });
  const machine = new Machine(state);
  const wires = allocate(machine, one, borrowed);
  start(machine, state, one, wires, onto);
  const before = read(state, wires);
  const operation = make(wires);
  operation.run(machine);
  expectEqual(read(state, wires), lookedUp(before, one));
  if (onto !== 0) return;
  operation.runAdjoint(machine);
  expectEqual(read(state, wires), before);
}

describe('a look-up through borrowed wires', () => {
  it('adds the row onto any output, gives the wires back, and costs what the formula says', () => {
    fc.assert(
      fc.property(given, (one) => {
        const { list, width, block, slice, controlled, eraseBlock } = one;
        const how = { block, slice };
        const make = (w: Wires) =>
          borrowedLookUp(w.register, w.output, w.borrowed, tableOf(one), how, eraseBlock, w.control);
        check(one, borrowedWires(how), make, one.onto % 2 ** width);
        check(one, borrowedWires(how), make, 0);
        const blocks = countBlocks(list, block);
        const { toffoli, lent } = count(one, borrowedWires(how), make, false);
        expect(toffoli).toBe(borrowedLookUpToffoli(blocks, width, how, controlled));
        expect(lent).toBe(borrowedLookUpWires(list, block, controlled));
        expect(count(one, borrowedWires(how), make, true).toffoli).toBe(
          erasureToffoli(countBlocks(list, eraseBlock), eraseBlock, controlled),
        );
      }),
      { numRuns: 120 },
    );
  });

  it('does so by swaps too, at the published cost', () => {
    fc.assert(
      fc.property(given, (one) => {
        const { list, width, block, controlled, eraseBlock } = one;
        const wires = width * (block - 1);
        const make = (w: Wires) =>
          borrowedSwapLookUp(w.register, w.output, w.borrowed, tableOf(one), block, eraseBlock, w.control);
        check(one, wires, make, 0);
        expect(count(one, wires, make, false).toffoli).toBe(
          borrowedSwapToffoli(countBlocks(list, block), width, block, controlled),
        );
      }),
      { numRuns: 60 },
    );
  });

  it('is cheaper by copies than by swaps, and narrow slices trade copies for iterations', () => {
    // 4096 rows of 32 bits, as many borrowed wires in each case (within one word).
    const cost = (block: number, slice: number) => borrowedLookUpToffoli(4096 / block, 32, { block, slice });
    expect(borrowedSwapToffoli(4096 / 8, 32, 8)).toBe(2 * 510 + 4 * 32 * 7);
    expect(cost(8, 32)).toBe(2 * 510 + 2 * 32 * 7 + 4);
    expect(cost(16, 16)).toBe(3 * 254 + 48 * 15 + 11);
    expect([7 * 32, 15 * 16]).toEqual([224, 240]);
    // Published: 2L/k + 2b(k − 1) + 2k − 6, arXiv:2605.20334; ours saves k + log₂k − 1 on top.
    for (const k of [2, 4, 8, 16]) {
      const published = (2 * 4096) / k + 2 * 32 * (k - 1) + 2 * k - 6;
      expect(published - cost(k, 32)).toBe(k + Math.log2(k) - 1);
    }
  });
});

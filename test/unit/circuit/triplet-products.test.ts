import { describe, expect, it } from 'vitest';
import { Machine } from '../../../core/circuit/gates/machine';
import { SparseState } from '../../../core/circuit/simulate/sparse-state';
import { drawing } from '../../../core/circuit/squares/tables';
import { encodedProgram, type TripletTables, tripletTables } from '../../../core/circuit/triplet/tables';
import { blockEncoding, type WalkWires, walkWires, withItemData } from '../../../core/circuit/triplet/walk';
import type { TripletProgram } from '../../../core/encode/program';
import type { Mu } from '../../../core/hamiltonian/operators';
import {
  addScaled,
  dagger,
  factorNorm,
  factorOperator,
  productOperator,
  programLambda,
  programOperator,
  times,
  zeros,
} from './majorana-algebra';
import { BLOCKS, distance, identity, randomNumbers, row, simulate, TOLERANCE } from './triplet-support';

/** Products of three vectors that are not orthogonal, of both signs, beside squares with two faces and none. */
function program(n: number): TripletProgram {
  const random = randomNumbers(11);
  const rows = (...list: ['S' | 'A', ...Mu[]][]) => list.map(([kind, ...mus]) => row(n, kind, mus, random));
  return {
    orbitals: n,
    constant: 0,
    oneBody: rows(['S', 0], ['A', 2], ['A', 3]),
    items: [
      { sign: -1, paired: false, lambda: [0.4], rows: rows(['A', 0], ['S', 1]) },
      { sign: 1, paired: true, lambda: [0.3, 0.6], rows: rows(['A', 2, 0], ['S', 0, 2], ['S', 0, 2]) },
    ],
    products: {
      vectors: Array.from({ length: 3 }, () => row(n, 'S', [0], random).u),
      first: Uint32Array.of(0, 0, 1, 2, 1),
      second: Uint32Array.of(1, 2, 2, 2, 1),
      lambda: Float64Array.of(0.5, 0.3, 0.7, 0.2, 0.4),
      sign: Int8Array.of(1, -1, 1, -1, 1),
    },
  };
}

/** What the outer index leads to, entry by entry, as operators of norm 1. */
function entries(given: TripletProgram, encoded: TripletProgram) {
  const n = given.orbitals;
  const squares = encoded.items.flatMap((item) =>
    item.lambda.map((_, face) => {
      const sum = zeros(4 ** n);
      for (const square of item.paired ? ([0, 1] as const) : ([0] as const)) {
        const m = factorOperator(n, item, face, square);
        const sign = (item.sign * (square === 1 ? -1 : 1)) / (item.paired ? 2 : 1);
        addScaled(sum, times(dagger(m), m), (2 * sign) / factorNorm(item, face) ** 2);
        addScaled(sum, identity(sum.n), -sign);
      }
      return sum;
    }),
  );
  const oneBody = zeros(4 ** n);
  const total = encoded.oneBody.reduce((sum, r) => sum + r.faces[0]!.weight, 0);
  for (const r of encoded.oneBody) {
    addScaled(
      oneBody,
      factorOperator(n, { sign: 1, paired: false, lambda: [1], rows: [r] }, 0, 0),
      1 / total,
    );
  }
  const products = Array.from(given.products!.lambda, (_, p) => productOperator(n, encoded.products!, p));
  return [...squares, oneBody, ...products];
}

/** Index and uniform number with which alias sampling draws an entry. */
function setItem(machine: Machine, tables: TripletTables, wires: WalkWires, entry: number): void {
  const drawn = drawing(tables.outer, entry)!;
  for (const [i, wire] of wires.item.entries()) if ((drawn.index >> i) & 1) machine.gate('X', wire);
  for (const [i, wire] of wires.outerUniform.entries()) if ((drawn.uniform >> i) & 1) machine.gate('X', wire);
}

describe.each(['index', 'swap-layers'] as const)('products of two vectors, spin by %s', (spin) => {
  it.each([
    [2, 0, 'random' as const],
    [2, 1, 0 as const],
    [2, 2, 1 as const],
    [3, 1, 'random' as const],
  ])('every entry of the outer index gives its operator, N = %i', (n, blocks, outcomes) => {
    const given = program(n);
    const tables = tripletTables(given, { keep: 3, innerKeep: n === 2 ? 2 : 1, rotation: 5 });
    const encoded = encodedProgram(given, tables);
    for (const [entry, expected] of entries(given, encoded).entries()) {
      const block = simulate(tables, outcomes, (machine, wires) => {
        setItem(machine, tables, wires, entry);
        machine.gate('H', wires.square!);
        withItemData(tables, wires, spin, BLOCKS[blocks]!).run(machine);
        machine.gate('H', wires.square!);
        setItem(machine, tables, wires, entry);
      });
      expect(distance(block, expected), `entry ${entry}`).toBeLessThan(TOLERANCE);
    }
  });

  it('a product done twice is nothing, whatever order and spins start as: the block encoding is Hermitian', () => {
    const given = program(2);
    const tables = tripletTables(given, { keep: 2, innerKeep: 1, rotation: 5 });
    const first = tables.places!.firstProduct;
    for (let entry = first; entry < first + given.products!.lambda.length; entry++) {
      const state = new SparseState({ maxWires: 160, outcomes: 'random' });
      const machine = new Machine(state);
      const wires = walkWires(tables, machine, 'exact');
      const free = [...wires.system, wires.square!, wires.sigma, ...wires.standIns];
      const label = machine.allocateRegister(free.length);
      for (const [i, wire] of label.entries()) {
        machine.gate('H', wire);
        machine.gate('CX', wire, free[i]!);
      }
      setItem(machine, tables, wires, entry);
      const once = withItemData(tables, wires, spin, BLOCKS[0]!);
      once.run(machine);
      once.run(machine);
      setItem(machine, tables, wires, entry);
      const others = [...wires.item, ...wires.outerUniform, ...wires.row, ...wires.innerUniform, wires.x];
      let same = 0;
      state.visit((isSet, re, im) => {
        const back = free.every((wire, i) => isSet(wire) === isSet(label[i]!)) && !others.some(isSet);
        if (!back) return;
        expect(im).toBeCloseTo(0, 10);
        expect(re * Math.sqrt(2 ** free.length)).toBeCloseTo(1, 10);
        same++;
      });
      expect(same).toBe(2 ** free.length);
    }
  });

  it('is a block encoding of the encoded program with everything running, N = 2', () => {
    const given = program(2);
    const few = { ...given, items: given.items.slice(0, 1) };
    const tables = tripletTables(few, { keep: 1, innerKeep: 1, rotation: 4 });
    const block = simulate(tables, 'random', (machine, wires) => {
      blockEncoding(tables, wires, spin, BLOCKS[spin === 'index' ? 1 : 0]!).run(machine);
    });
    const expected = zeros(block.n);
    addScaled(expected, programOperator(encodedProgram(few, tables)), 1 / programLambda(few));
    expect(distance(block, expected)).toBeLessThan(TOLERANCE);
  });
});

import { describe, expect, it } from 'vitest';
import { encodedProgram, tripletTables } from '../../../core/circuit/triplet/tables';
import { blockEncoding, withItemData } from '../../../core/circuit/triplet/walk';
import type { TripletProgram } from '../../../core/encode/program';
import type { Mu } from '../../../core/hamiltonian/operators';
import {
  addScaled,
  dagger,
  factorNorm,
  factorOperator,
  programLambda,
  programOperator,
  times,
  zeros,
} from './majorana-algebra';
import { BLOCKS, distance, identity, randomNumbers, row, simulate, TOLERANCE } from './triplet-support';

/** A program with everything in it: both signs, all components, a paired item with two faces. */
function program(n: number): TripletProgram {
  const random = randomNumbers(7);
  const rows = (...list: ['S' | 'A', ...Mu[]][]) => list.map(([kind, ...mus]) => row(n, kind, mus, random));
  return {
    orbitals: n,
    constant: 0,
    oneBody: rows(['S', 0], ['S', 0], ['A', 1], ['A', 2], ['A', 3]),
    items: [
      { sign: 1, paired: false, lambda: [0.9], rows: rows(['S', 0], ['S', 0]) },
      { sign: -1, paired: false, lambda: [0.4], rows: rows(['S', 0], ['A', 1], ['A', 2], ['A', 3]) },
      { sign: 1, paired: false, lambda: [0.5], rows: rows(['A', 0], ['S', 1], ['S', 2], ['S', 3]) },
      { sign: 1, paired: true, lambda: [0.3, 0.6], rows: rows(['A', 2, 0], ['S', 0, 2], ['S', 0, 2]) },
    ],
  };
}

describe.each(['index', 'swap-layers'] as const)('triplet SELECT with spin by %s', (spin) => {
  it.each([
    [2, 0, 'random' as const],
    [2, 1, 0 as const],
    [3, 0, 1 as const],
    [2, 2, 1 as const],
  ])('gives every item of the encoded program, N = %i', (n, blocks, outcomes) => {
    const given = program(n);
    const tables = tripletTables(given, { keep: 3, innerKeep: n === 2 ? 3 : 1, rotation: 5 });
    const encoded = encodedProgram(given, tables);
    const oneBodyWeight = encoded.oneBody.reduce((sum, r) => sum + r.faces[0]!.weight, 0);
    for (const [t, item] of tables.items.entries()) {
      for (const face of item.lambda.keys()) {
        for (const square of item.paired ? ([0, 1] as const) : ([0] as const)) {
          const block = simulate(tables, outcomes, (machine, wires) => {
            // The outer registers only steer: a basis state of theirs singles out one item.
            const set = () => {
              for (const [i, wire] of wires.item.entries()) if ((t >> i) & 1) machine.gate('X', wire);
              if (face === 1) machine.gate('X', wires.face!);
              if (square === 1) machine.gate('X', wires.square!);
            };
            set();
            withItemData(tables, wires, spin, BLOCKS[blocks]!).run(machine);
            set();
          });
          const expected = zeros(block.n);
          if (t === tables.items.length - 1) {
            for (const r of encoded.oneBody) {
              const single = { sign: 1 as const, paired: false, lambda: [1], rows: [r] };
              addScaled(expected, factorOperator(n, single, 0, 0), 1 / oneBodyWeight);
            }
          } else {
            const m = factorOperator(n, encoded.items[t]!, face, square);
            const sign = item.sign * (square === 1 ? -1 : 1);
            addScaled(expected, times(dagger(m), m), (2 * sign) / factorNorm(encoded.items[t]!, face) ** 2);
            addScaled(expected, identity(block.n), -sign);
          }
          expect(distance(block, expected), `item ${t}, face ${face}, square ${square}`).toBeLessThan(
            TOLERANCE,
          );
        }
      }
    }
  });

  it('is a block encoding of the encoded program with everything running, N = 2', () => {
    // One square of each sector is enough here: the items one by one are checked above.
    const given = { ...program(2), items: program(2).items.slice(2) };
    const tables = tripletTables(given, { keep: 1, innerKeep: 1, rotation: 4 });
    const block = simulate(tables, 'random', (machine, wires) => {
      blockEncoding(tables, wires, spin, BLOCKS[spin === 'index' ? 0 : 2]!).run(machine);
    });
    const encoded = encodedProgram(given, tables);
    const expected = zeros(block.n);
    addScaled(expected, programOperator(encoded), 1 / programLambda(given));
    expect(distance(block, expected)).toBeLessThan(TOLERANCE);
  });
});

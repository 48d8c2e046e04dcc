import { describe, expect, it } from 'vitest';
import { Machine } from '../../../core/circuit/gates/machine';
import { SparseState } from '../../../core/circuit/simulate/sparse-state';
import { encodedProgram, type TripletTables, tripletTables } from '../../../core/circuit/triplet/tables';
import {
  ancillaWires,
  blockEncoding,
  type WalkBlocks,
  type WalkWires,
  walkWires,
  withItemData,
} from '../../../core/circuit/triplet/walk';
import type { TripletProgram, TripletRow } from '../../../core/encode/program';
import type { Mu } from '../../../core/hamiltonian/operators';
import {
  addScaled,
  type Dense,
  dagger,
  factorNorm,
  factorOperator,
  programLambda,
  programOperator,
  times,
  zeros,
} from './majorana-algebra';

/** Seeded numbers in (−1, 1). */
function randomNumbers(seed: number): () => number {
  let a = seed;
  return () => {
    a = (a + 0x6d2b79f5) | 0;
    let t = Math.imul(a ^ (a >>> 15), 1 | a);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 2147483648 - 1;
  };
}

function pairOfVectors(n: number, random: () => number): [Float64Array, Float64Array] {
  const unit = (v: Float64Array) => {
    const norm = Math.hypot(...v);
    return v.map((x) => x / norm);
  };
  const u = unit(Float64Array.from({ length: n }, random));
  const w = Float64Array.from({ length: n }, random);
  const overlap = w.reduce((sum, x, p) => sum + x * u[p]!, 0);
  return [u, unit(w.map((x, p) => x - overlap * u[p]!))];
}

function row(n: number, kind: 'S' | 'A', mus: Mu[], random: () => number): TripletRow {
  const [u, v] = pairOfVectors(n, random);
  return {
    kind,
    u,
    v: kind === 'S' ? u : v,
    faces: mus.map((mu) => ({ mu, weight: 0.2 + Math.abs(random()), sign: random() < 0 ? -1 : 1 })),
  };
}

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

const BLOCKS: WalkBlocks[] = [
  {
    outer: { read: 1, erase: 1 },
    items: { read: 1, erase: 2 },
    inner: { read: 1, erase: 1 },
    rows: { read: 1, erase: 1 },
    pairs: { read: 1, erase: 1 },
  },
  {
    outer: { read: 2, erase: 2 },
    items: { read: 2, erase: 1 },
    inner: { read: 2, erase: 4 },
    rows: { read: 2, erase: 2 },
    pairs: { read: 2, erase: 2 },
  },
  // Through borrowed wires: the system's and the index registers'.
  {
    outer: { read: 2, erase: 2, slice: 3 },
    items: { read: 2, erase: 1, slice: 2 },
    inner: { read: 2, erase: 1, slice: 4 },
    rows: { read: 2, erase: 2, slice: 5 },
    pairs: { read: 2, erase: 1, slice: 2 },
  },
];

/** Rounding of some ten thousand gates, and amplitudes the simulator drops: far below any angle or weight step. */
const TOLERANCE = 1e-11;

/** Runs `build` on every basis state of the system at once, with a copy of the basis state as a label. */
function simulate(
  tables: TripletTables,
  outcomes: 'random' | 0 | 1,
  build: (machine: Machine, wires: WalkWires) => void,
): Dense {
  const modes = 2 * tables.orbitals;
  const state = new SparseState({ maxWires: 160, outcomes });
  const machine = new Machine(state);
  const label = machine.allocateRegister(modes);
  const wires = walkWires(tables, machine, 'exact');
  for (const [i, wire] of label.entries()) {
    machine.gate('H', wire);
    machine.gate('CX', wire, wires.system[i]!);
  }
  build(machine, wires);
  const ancillas = ancillaWires(wires);
  const block = zeros(2 ** modes);
  const scale = Math.sqrt(2 ** modes);
  const read = (isSet: (w: number) => boolean, list: readonly number[]) =>
    list.reduce((sum, w, i) => sum + (isSet(w) ? 2 ** i : 0), 0);
  state.visit((isSet, re, im) => {
    if (ancillas.some((w) => isSet(w))) return;
    const at = read(isSet, wires.system) * block.n + read(isSet, label);
    block.re[at]! += re * scale;
    block.im[at]! += im * scale;
  });
  return block;
}

function distance(a: Dense, b: Dense): number {
  let worst = 0;
  for (let i = 0; i < a.re.length; i++) {
    worst = Math.max(worst, Math.hypot(a.re[i]! - b.re[i]!, a.im[i]! - b.im[i]!));
  }
  return worst;
}

const identity = (n: number) => {
  const out = zeros(n);
  for (let i = 0; i < n; i++) out.re[i * n + i] = 1;
  return out;
};

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

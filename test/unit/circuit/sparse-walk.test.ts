import { describe, expect, it } from 'vitest';
import { Machine } from '../../../core/circuit/gates/machine';
import { SparseState } from '../../../core/circuit/simulate/sparse-state';
import type { SparseTables } from '../../../core/circuit/sparse/tables';
import { encodedProgram, sparseTables } from '../../../core/circuit/sparse/tables';
import {
  type SparseWires,
  sparseAncillas,
  sparseBlockEncoding,
  sparseWires,
} from '../../../core/circuit/sparse/walk';
import type { SparseProgram, TermKind } from '../../../core/encode';
import type { Mu } from '../../../core/hamiltonian/operators';
import { addScaled, type Dense, zeros } from './majorana-algebra';
import { sparseOperator } from './sparse-algebra';

/** antisymmetric, μ, ν, p, q, r, s, weight, sign */
type Row = [boolean, Mu, Mu | null, number, number, number, number, number, 1 | -1];

const SHARED = { otherShare: 2 / 3, otherSign: 1 as const };

function program(orbitals: number, rows: readonly Row[], shared = false, split = SHARED): SparseProgram {
  const kinds = rows.map(
    ([antisymmetric, mu, nu]): TermKind => ({
      antisymmetric,
      mu,
      nu,
      shared: shared && antisymmetric && nu === 0,
      exchanged: !antisymmetric && mu !== 0 && nu !== null && nu !== 0 && mu !== nu,
    }),
  );
  return {
    orbitals,
    constant: 0,
    kinds,
    kindOf: Uint8Array.from(rows.keys()),
    orbitalsOf: Uint16Array.from(rows.flatMap(([, , , p, q, r, s]) => [p, q, r, s])),
    weights: Float64Array.from(rows, (row) => row[7]),
    negative: Uint8Array.from(rows, (row) => (row[8] < 0 ? 1 : 0)),
    ...split,
  };
}

const SPIN_FREE: Row[] = [
  [false, 0, null, 0, 0, 0, 0, 0.9, -1],
  [false, 0, null, 1, 0, 0, 0, 0.4, 1],
  [false, 0, 0, 0, 0, 0, 0, 0.6, 1],
  [false, 0, 0, 1, 0, 1, 0, 0.3, 1],
  [false, 0, 0, 1, 0, 0, 0, 0.5, -1],
  [false, 0, 0, 1, 1, 0, 0, 0.2, 1],
];
const ONE_BODY_SPIN: Row[] = [1, 2, 3].map((k) => [true, k as Mu, null, 1, 0, 0, 0, 0.3, k === 2 ? -1 : 1]);
const SPIN_ORBIT: Row[] = [1, 2, 3].flatMap((k): Row[] => [
  [true, k as Mu, 0, 1, 0, 0, 0, 0.3, 1],
  [true, k as Mu, 0, 1, 0, 1, 0, 0.2, -1],
]);
const OTHER_ORBIT: Row[] = [1, 2, 3].map((k): Row => [true, 0, k as Mu, 1, 0, 1, 0, 0.3, k === 2 ? -1 : 1]);
const SPIN_SPIN: Row[] = [
  [false, 1, 1, 1, 0, 1, 0, 0.3, 1],
  [false, 1, 2, 1, 1, 1, 0, 0.2, -1],
  [false, 1, 3, 1, 0, 0, 0, 0.4, 1],
  [false, 2, 2, 1, 1, 0, 0, 0.1, 1],
  [false, 2, 3, 1, 0, 1, 0, 0.1, 1],
];

/** Runs the block encoding on every basis state of the system at once, with a copy of it as a label. */
function simulate(
  tables: SparseTables,
  outcomes: 'random' | 0 | 1,
  build: (machine: Machine, wires: SparseWires) => void,
): Dense {
  const modes = 2 * tables.layout.orbitals;
  const state = new SparseState({ maxWires: 192, outcomes });
  const machine = new Machine(state);
  const label = machine.allocateRegister(modes);
  const wires = sparseWires(tables.layout, machine);
  for (const [i, wire] of label.entries()) {
    machine.gate('H', wire);
    machine.gate('CX', wire, wires.system[i]!);
  }
  build(machine, wires);
  const ancillas = sparseAncillas(wires);
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

describe('block encoding', () => {
  it.each([
    ['spin-free', program(2, SPIN_FREE)],
    ['one-body spin–orbit', program(2, [...SPIN_FREE.slice(0, 3), ...ONE_BODY_SPIN])],
    ['shared spin–orbit', program(2, [...SPIN_FREE.slice(1, 4), ...ONE_BODY_SPIN, ...SPIN_ORBIT], true)],
    ['other', program(2, [...SPIN_FREE.slice(1, 4), ...ONE_BODY_SPIN, ...SPIN_ORBIT, ...OTHER_ORBIT])],
    ['spin-spin', program(2, [...SPIN_FREE.slice(1, 3), ...ONE_BODY_SPIN, ...SPIN_SPIN])],
    ['all', program(2, [...SPIN_FREE, ...ONE_BODY_SPIN, ...SPIN_ORBIT, ...SPIN_SPIN], true)],
  ])('%s', (_, given) => {
    const tables = sparseTables(given, { keep: 1, share: 2 }, 1);
    const t0 = performance.now();
    const block = simulate(tables, 'random', (machine, wires) => {
      sparseBlockEncoding(tables, wires, { read: 2, erase: 2 }).run(machine);
    });
    console.log(_, performance.now() - t0, tables.layout.address);
    const lambda = given.weights.reduce((a, b) => a + b, 0);
    const expected = zeros(block.n);
    addScaled(expected, sparseOperator(encodedProgram(tables)), 1 / lambda);
    console.log(distance(block, expected));
    expect(distance(block, expected)).toBeLessThan(1e-11);
  });
});

import { expect, it } from 'vitest';
import type { Machine } from '../../../core/circuit/gates/machine';
import { prepareGradient } from '../../../core/circuit/primitives/phase-gradient';
import { prepareWires } from '../../../core/circuit/squares/form';
import { outerPrepare, outerScratch } from '../../../core/circuit/squares/outer';
import { tripletTables } from '../../../core/circuit/triplet/tables';
import { walkStep, walkWires } from '../../../core/circuit/triplet/walk';
import type { TripletProgram, TripletRow } from '../../../core/encode/program';
import { expectSame } from './qasm/same';

/** Two orbitals, one square with an A row, and a one-body part: every kind of gate that a walk step uses. */
const row = (kind: 'S' | 'A', mu: 0 | 1 | 2 | 3, angle: number, weight: number): TripletRow => {
  const u = Float64Array.of(Math.cos(angle), Math.sin(angle));
  const v = Float64Array.of(-Math.sin(angle), Math.cos(angle));
  return { kind, u, v: kind === 'S' ? u : v, faces: [{ mu, weight, sign: 1 }] };
};
const PROGRAM: TripletProgram = {
  orbitals: 2,
  constant: 0,
  oneBody: [row('S', 0, 0.4, 0.3), row('S', 0, 1.1, 0.2)],
  items: [{ sign: -1, paired: false, lambda: [0.7], rows: [row('A', 2, 0.9, 0.6), row('S', 0, 2, 0.4)] }],
};
const TABLES = tripletTables(PROGRAM, { keep: 1, innerKeep: 1, rotation: 2 });
const BLOCKS = {
  outer: { read: 2, erase: 1 },
  items: { read: 1, erase: 2 },
  inner: { read: 1, erase: 2 },
  rows: { read: 2, erase: 2 },
  pairs: { read: 1, erase: 1 },
};

it.each([
  ['index', 0],
  ['swap-layers', 1],
] as const)('a walk step read back does the same: spin by %s, all outcomes %i', (spin, outcome) => {
  const circuit = (machine: Machine) => {
    const [control] = machine.allocateRegister(1, 'control');
    const wires = walkWires(TABLES, machine, 'gradient');
    machine.gate('X', control!);
    prepareGradient(machine, wires.gradient);
    walkStep(TABLES, wires, spin, BLOCKS, control!).run(machine);
  };
  expect(expectSame(circuit, outcome, ['system'])).toBeGreaterThan(100);
});

it('PREPARE read back gives the amplitudes of its table', () => {
  const circuit = (machine: Machine) => {
    const prepared = { weights: TABLES, blocks: BLOCKS };
    const lent = machine.allocateRegister(outerScratch(prepared), 'alternate and keep');
    outerPrepare(prepared, prepareWires(TABLES, TABLES.hasPaired, machine), lent, []).run(machine);
  };
  expect(expectSame(circuit, 1, [])).toBe(4);
});

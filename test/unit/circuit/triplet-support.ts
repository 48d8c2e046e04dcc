import { Machine } from '../../../core/circuit/gates/machine';
import { SparseState } from '../../../core/circuit/simulate/sparse-state';
import type { TripletTables } from '../../../core/circuit/triplet/tables';
import { ancillaWires, type WalkBlocks, type WalkWires, walkWires } from '../../../core/circuit/triplet/walk';
import type { TripletRow } from '../../../core/encode/program';
import type { Mu } from '../../../core/hamiltonian/operators';
import { type Dense, zeros } from './majorana-algebra';

/** Seeded numbers in (−1, 1). */
export function randomNumbers(seed: number): () => number {
  let a = seed;
  return () => {
    a = (a + 0x6d2b79f5) | 0;
    let t = Math.imul(a ^ (a >>> 15), 1 | a);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 2147483648 - 1;
  };
}

export function pairOfVectors(n: number, random: () => number): [Float64Array, Float64Array] {
  const unit = (v: Float64Array) => {
    const norm = Math.hypot(...v);
    return v.map((x) => x / norm);
  };
  const u = unit(Float64Array.from({ length: n }, random));
  const w = Float64Array.from({ length: n }, random);
  const overlap = w.reduce((sum, x, p) => sum + x * u[p]!, 0);
  return [u, unit(w.map((x, p) => x - overlap * u[p]!))];
}

export function row(n: number, kind: 'S' | 'A', mus: Mu[], random: () => number): TripletRow {
  const [u, v] = pairOfVectors(n, random);
  return {
    kind,
    u,
    v: kind === 'S' ? u : v,
    faces: mus.map((mu) => ({ mu, weight: 0.2 + Math.abs(random()), sign: random() < 0 ? -1 : 1 })),
  };
}

export const BLOCKS: WalkBlocks[] = [
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
export const TOLERANCE = 1e-11;

/** Runs `build` on every basis state of the system at once, with a copy of the basis state as a label. */
export function simulate(
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

export function distance(a: Dense, b: Dense): number {
  let worst = 0;
  for (let i = 0; i < a.re.length; i++) {
    worst = Math.max(worst, Math.hypot(a.re[i]! - b.re[i]!, a.im[i]! - b.im[i]!));
  }
  return worst;
}

export const identity = (n: number) => {
  const out = zeros(n);
  for (let i = 0; i < n; i++) out.re[i * n + i] = 1;
  return out;
};

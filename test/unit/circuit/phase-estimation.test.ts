import { describe, expect, it } from 'vitest';
import { GateCounter } from '../../../core/circuit/gates/counter';
import { Machine } from '../../../core/circuit/gates/machine';
import {
  phaseEstimation,
  phaseEstimationToffoli,
  valueDistribution,
  type Window,
} from '../../../core/circuit/phase-estimation/estimate';
import { inverseFourier } from '../../../core/circuit/phase-estimation/fourier';
import { prepareSineWindow } from '../../../core/circuit/phase-estimation/sine-window';
import { flipZeros } from '../../../core/circuit/primitives/reflection';
import { SparseState } from '../../../core/circuit/simulate/sparse-state';
import { encodedProgram, tripletTables } from '../../../core/circuit/triplet/tables';
import { ancillaWires, blockEncoding, type WalkBlocks, walkWires } from '../../../core/circuit/triplet/walk';
import type { TripletProgram } from '../../../core/encode/program';
import { programLambda, programOperator } from './majorana-algebra';

const read = (isSet: (w: number) => boolean, wires: readonly number[]) =>
  wires.reduce((sum, w, i) => sum + (isSet(w) ? 2 ** i : 0), 0);

const BLOCK = { read: 1, erase: 1 };
const BLOCKS: WalkBlocks = { outer: BLOCK, items: BLOCK, inner: BLOCK, rows: BLOCK, pairs: BLOCK };

/** One orbital with attraction and repulsion: the spectrum over its four determinants is known by hand. */
const ONE_ORBITAL: TripletProgram = (() => {
  const u = Float64Array.of(1);
  const row = (weight: number, sign: 1 | -1) =>
    ({ kind: 'S', u, v: u, faces: [{ mu: 0, weight, sign }] }) as const;
  return {
    orbitals: 1,
    constant: 0,
    oneBody: [row(0.3, -1)],
    items: [{ sign: 1, paired: false, lambda: [0.5], rows: [row(1, 1)] }],
  };
})();

it.each([1, 2, 3, 5])('prepares the sine window of %i bits exactly', (bits) => {
  const state = new SparseState();
  const machine = new Machine(state);
  const register = machine.allocateRegister(bits);
  prepareSineWindow(register).run(machine);
  const size = 2 ** bits;
  let phase: [number, number] | null = null;
  let seen = 0;
  state.visit((isSet, re, im) => {
    const m = read(isSet, register);
    const amplitude = Math.sqrt(2 / (size + 1)) * Math.sin((Math.PI * (m + 1)) / (size + 1));
    phase ??= [re / amplitude, im / amplitude];
    expect(re).toBeCloseTo(phase[0] * amplitude, 12);
    expect(im).toBeCloseTo(phase[1] * amplitude, 12);
    seen++;
  });
  expect(seen).toBe(size);
});

it.each([1, 2, 3, 4])('the inverse Fourier transform of %i bits is one, on every basis state', (bits) => {
  const size = 2 ** bits;
  let phase: [number, number] | null = null;
  for (let m = 0; m < size; m++) {
    const state = new SparseState();
    const machine = new Machine(state);
    const register = machine.allocateRegister(bits);
    for (const [i, wire] of register.entries()) if ((m >> i) & 1) machine.gate('X', wire);
    inverseFourier(register).run(machine);
    state.visit((isSet, re, im) => {
      const k = read(isSet, register);
      const angle = (-2 * Math.PI * k * m) / size;
      const [x, y] = [Math.cos(angle) / Math.sqrt(size), Math.sin(angle) / Math.sqrt(size)];
      // One phase for all states: an error in a controlled phase would show as a phase that varies with m.
      phase ??= [(re * x + im * y) * size, (im * x - re * y) * size];
      expect(re).toBeCloseTo(phase[0] * x - phase[1] * y, 12);
      expect(im).toBeCloseTo(phase[0] * y + phase[1] * x, 12);
    });
  }
});

describe('on an emitted walk of one orbital', () => {
  const tables = tripletTables(ONE_ORBITAL, { keep: 2, innerKeep: 1, rotation: 4 });
  const lambda = programLambda(ONE_ORBITAL);
  const h = programOperator(encodedProgram(ONE_ORBITAL, tables));

  const run = (
    determinant: number,
    use: (machine: Machine, walk: Parameters<typeof phaseEstimation>[1]) => void,
  ) => {
    const state = new SparseState({ maxWires: 128 });
    const machine = new Machine(state);
    const wires = walkWires(tables, machine, 'exact');
    for (const [m, wire] of wires.system.entries()) if ((determinant >> m) & 1) machine.gate('X', wire);
    const ancillas = ancillaWires(wires);
    use(machine, { blockEncoding: blockEncoding(tables, wires, 'swap-layers', BLOCKS), ancillas });
    return { state, wires, ancillas };
  };

  it.each([0, 1, 2, 3])(
    '⟨0|Wⁿ|0⟩ is the Chebyshev polynomial of (H − c)/λ, determinant %i',
    (determinant) => {
      const energy = h.re[determinant * h.n + determinant]! / lambda;
      for (let n = 1; n <= 4; n++) {
        const { state, ancillas } = run(determinant, (machine, walk) => {
          for (let step = 0; step < n; step++) {
            walk.blockEncoding.run(machine);
            reflect(machine, walk.ancillas);
          }
        });
        let overlap = 0;
        state.visit((isSet, re) => {
          if (ancillas.every((w) => !isSet(w))) overlap += re;
        });
        expect(overlap).toBeCloseTo(Math.cos(n * Math.acos(energy)), 10);
      }
    },
  );

  it.each<[Window, number]>([
    ['sine', 3],
    ['rectangular', 3],
  ])('a %s register of %i bits ends in the distribution of the eigenphase', (window, bits) => {
    for (const determinant of [0, 1, 3]) {
      let register: number[] = [];
      const { state } = run(determinant, (machine, walk) => {
        register = machine.allocateRegister(bits);
        phaseEstimation(register, walk, window).run(machine);
      });
      const found = new Float64Array(2 ** bits);
      state.visit((isSet, re, im) => {
        found[read(isSet, register)]! += re * re + im * im;
      });
      const phi = Math.acos(h.re[determinant * h.n + determinant]! / lambda);
      const expected = valueDistribution(phi, bits, window);
      for (let k = 0; k < found.length; k++) expect(found[k]).toBeCloseTo(expected[k]!, 9);
    }
  });

  it('costs what the formula says', () => {
    for (const window of ['sine', 'rectangular'] as const) {
      const counter = new GateCounter({ toffoliOnly: true });
      const machine = new Machine(counter);
      const ancillas = machine.allocateRegister(6);
      const bits = 4;
      phaseEstimation(
        machine.allocateRegister(bits),
        { blockEncoding: { run() {}, runAdjoint() {} }, ancillas },
        window,
      ).run(machine);
      expect(GateCounter.total(counter.root).toffoli).toBe(phaseEstimationToffoli(bits, 6, window));
    }
  });
});

describe('distribution of the register values', () => {
  it('of a rectangular register: nearest value at least 4/π², two nearest at least 8/π²', () => {
    // R. Cleve et al., Proc. R. Soc. A 454, 339 (1998), and textbooks of quantum computing (quoted from memory).
    const bits = 6;
    const size = 2 ** bits;
    for (let i = 0; i <= 40; i++) {
      // Twice the average of both signs is at least the distribution of the one that is looked at.
      const position = size * 0.2 + i / 40;
      const p = valueDistribution((Math.PI * position) / size, bits, 'rectangular');
      const near = (k: number) => 2 * p[((k % size) + size) % size]!;
      const nearest = near(Math.round(position));
      const two = near(Math.floor(position)) + near(Math.floor(position) + 1);
      expect(nearest).toBeGreaterThan(4 / Math.PI ** 2);
      expect(two).toBeGreaterThan(8 / Math.PI ** 2);
    }
  });

  it('of a sine register has the standard deviation of energy πλ/(2M)', () => {
    const bits = 9;
    const size = 2 ** bits;
    const phi = 0.9;
    const p = valueDistribution(phi, bits, 'sine');
    let mean = 0;
    let square = 0;
    for (let k = 0; k < size; k++) {
      // The branch +2φ only, twice its share.
      const angle = (2 * Math.PI * k) / size;
      if (angle > Math.PI) continue;
      const deviation = angle / 2 - phi;
      mean += 2 * p[k]! * deviation;
      square += 2 * p[k]! * deviation ** 2;
    }
    // E = c + λ cos φ: a deviation π/(2M) of φ is at most πλ/(2M) of energy.
    expect(Math.sqrt(square - mean ** 2) / (Math.PI / (2 * size))).toBeCloseTo(1, 1);
  });
});

/** R = 2|0⟩⟨0| − 1: the flip, and the sign −1 from a wire that is 1. */
function reflect(machine: Machine, ancillas: readonly number[]): void {
  const one = machine.allocate();
  machine.gate('X', one);
  machine.gate('Z', one);
  flipZeros(ancillas).run(machine);
  machine.gate('X', one);
  machine.release(one);
}

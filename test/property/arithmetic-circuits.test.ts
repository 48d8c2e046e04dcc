import fc from 'fast-check';
import { expect, it } from 'vitest';
import { GateCounter } from '../../core/circuit/gates/counter';
import { Machine } from '../../core/circuit/gates/machine';
import type { Operation } from '../../core/circuit/gates/operation';
import {
  addInto,
  additionToffoli,
  compareInto,
  comparisonToffoli,
} from '../../core/circuit/primitives/arithmetic';
import {
  anglesOf,
  majoranaRotation,
  majoranaRotationToffoli,
  swapLayer,
  swapLayerToffoli,
  vectorOf,
} from '../../core/circuit/primitives/majorana';
import {
  gradientWires,
  prepareGradient,
  rotateByGradient,
  rotateExactly,
  rotationToffoli,
} from '../../core/circuit/primitives/phase-gradient';
import { SparseState } from '../../core/circuit/simulate/sparse-state';

const read = (isSet: (w: number) => boolean, wires: readonly number[]) =>
  wires.reduce((sum, w, i) => sum + (isSet(w) ? 2 ** i : 0), 0);

const write = (machine: Machine, wires: readonly number[], value: number) => {
  for (const [i, wire] of wires.entries()) if ((value >> i) & 1) machine.gate('X', wire);
};

const countToffoli = (build: (m: Machine) => Operation) => {
  const counter = new GateCounter();
  const machine = new Machine(counter);
  build(machine).run(machine);
  return GateCounter.total(counter.root).toffoli;
};

const outcomes = fc.constantFrom<'random' | 0 | 1>('random', 0, 1);

it('adds, subtracts and compares, at the cost of the formulas', () => {
  fc.assert(
    fc.property(fc.integer({ min: 1, max: 6 }), fc.nat(), fc.nat(), outcomes, (n, a, b, branch) => {
      const [x, y] = [a % 2 ** n, b % 2 ** n];
      const state = new SparseState({ outcomes: branch });
      const machine = new Machine(state);
      const xs = machine.allocateRegister(n);
      const ys = machine.allocateRegister(n);
      const flag = machine.allocate();
      write(machine, xs, x);
      write(machine, ys, y);
      compareInto(xs, ys, flag).run(machine);
      addInto(xs, ys).run(machine);
      const seen: number[][] = [];
      state.visit((s) => {
        seen.push([read(s, xs), read(s, ys), read(s, [flag])]);
      });
      expect(seen).toEqual([[x, (x + y) % 2 ** n, x < y ? 1 : 0]]);
      addInto(xs, ys).runAdjoint(machine);
      state.visit((s) => {
        expect(read(s, ys)).toBe(y);
      });
      expect(countToffoli((m) => addInto(m.allocateRegister(n), m.allocateRegister(n)))).toBe(
        additionToffoli(n),
      );
      expect(
        countToffoli((m) => compareInto(m.allocateRegister(n), m.allocateRegister(n), m.allocate())),
      ).toBe(comparisonToffoli(n));
    }),
    { numRuns: 100 },
  );
});

it('rotates by the angle that the gradient register is asked for', () => {
  fc.assert(
    fc.property(
      fc.integer({ min: 2, max: 7 }),
      fc.integer({ min: 0, max: 3 }),
      fc.nat(),
      outcomes,
      (beta, missing, pick, branch) => {
        const bits = Math.max(1, beta - missing);
        const x = pick % 2 ** bits;
        const state = new SparseState({ outcomes: branch });
        const machine = new Machine(state);
        const angle = machine.allocateRegister(bits);
        const gradient = machine.allocateRegister(gradientWires(beta));
        const target = machine.allocate();
        write(machine, angle, x);
        prepareGradient(machine, gradient);
        machine.gate('H', target);
        rotateByGradient(target, angle, gradient).run(machine);
        // Exactly steered rotations take it back, up to a phase common to both branches.
        rotateExactly(target, angle, beta).runAdjoint(machine);
        machine.gate('H', target);
        // The gradient is an eigenstate: taking it back must leave all its wires in |0⟩.
        for (const [j, wire] of gradient.entries()) {
          machine.rotateZ(wire, (2 * Math.PI * 2 ** j) / 2 ** beta);
          machine.gate('H', wire);
        }
        machine.releaseRegister(gradient);
        machine.release(target);
        expect(
          countToffoli((m) =>
            rotateByGradient(m.allocate(), m.allocateRegister(bits), m.allocateRegister(gradientWires(beta))),
          ),
        ).toBe(rotationToffoli(beta));
      },
    ),
    { numRuns: 100 },
  );
});

it('angles and unit vectors are inverse to each other', () => {
  fc.assert(
    fc.property(
      fc.array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: 2, maxLength: 7 }),
      (raw) => {
        const norm = Math.hypot(...raw);
        fc.pre(norm > 1e-6);
        const u = Float64Array.from(raw, (x) => x / norm);
        const angles = anglesOf(u);
        for (const [p, angle] of angles.entries()) {
          expect(angle).toBeGreaterThanOrEqual(0);
          expect(angle).toBeLessThanOrEqual((p === angles.length - 1 ? 2 : 1) * Math.PI);
        }
        for (const [i, x] of vectorOf(angles).entries()) expect(x).toBeCloseTo(u[i]!, 12);
      },
    ),
  );
});

/** γ_{m,0} on a basis state of modes: flips mode m with the sign of the modes before it. */
const applyGamma = (state: number, mode: number): [number, number] => {
  let sign = 1;
  for (let m = 0; m < mode; m++) if ((state >> m) & 1) sign = -sign;
  return [state ^ (1 << mode), sign];
};

it('V γ₀ V† is the Majorana operator of the rotated orbital, on every basis state', () => {
  const N = 3;
  const beta = 6;
  fc.assert(
    fc.property(
      fc.array(fc.nat(2 ** (beta - 1) - 1), { minLength: N - 1, maxLength: N - 1 }),
      fc.nat(2 ** (2 * N) - 1),
      (numbers, start) => {
        const u = vectorOf(Float64Array.from(numbers, (x) => (4 * Math.PI * (x + 0.5)) / 2 ** beta));
        const state = new SparseState();
        const machine = new Machine(state);
        const system = machine.allocateRegister(2 * N);
        const angles = numbers.map(() => machine.allocateRegister(beta - 1));
        const gradient = machine.allocateRegister(gradientWires(beta));
        prepareGradient(machine, gradient);
        for (const [i, x] of numbers.entries()) write(machine, angles[i]!, x);
        write(machine, system, start);
        const rotation = majoranaRotation(system, angles, (target, angle) =>
          rotateByGradient(target, angle, gradient),
        );
        rotation.runAdjoint(machine);
        machine.gate('X', system[0]!);
        rotation.run(machine);
        for (const [j, wire] of gradient.entries()) {
          machine.rotateZ(wire, (2 * Math.PI * 2 ** j) / 2 ** beta);
          machine.gate('H', wire);
        }
        machine.releaseRegister(gradient);
        const expected = new Map<number, number>();
        for (let p = 0; p < N; p++) {
          const [to, sign] = applyGamma(start, 2 * p);
          expected.set(to, sign * u[p]!);
        }
        let norm = 0;
        // Compare up to one common phase, that of the gradient's rotations.
        let phase: [number, number] | null = null;
        state.visit((s, re, im) => {
          const want = expected.get(read(s, system)) ?? 0;
          if (Math.abs(want) < 1e-9) {
            expect(Math.hypot(re, im)).toBeLessThan(1e-9);
            return;
          }
          phase ??= [re / want, im / want];
          expect(re).toBeCloseTo(phase[0] * want, 9);
          expect(im).toBeCloseTo(phase[1] * want, 9);
          norm += want * want;
        });
        expect(norm).toBeCloseTo(1, 9);
      },
    ),
    { numRuns: 40 },
  );
  expect(
    countToffoli((m) => {
      const gradient = m.allocateRegister(gradientWires(beta));
      const angles = [m.allocateRegister(beta), m.allocateRegister(beta)];
      return majoranaRotation(m.allocateRegister(2 * N), angles, (target, angle) =>
        rotateByGradient(target, angle, gradient),
      );
    }),
  ).toBe(majoranaRotationToffoli(N, beta));
});

it('a swap layer exchanges the spins with the sign of fermions, one Toffoli an orbital', () => {
  const N = 2;
  for (let start = 0; start < 2 ** (2 * N); start++) {
    for (const on of [0, 1]) {
      for (const branch of [0, 1] as const) {
        const state = new SparseState({ outcomes: branch });
        const machine = new Machine(state);
        const system = machine.allocateRegister(2 * N);
        const control = machine.allocate();
        write(machine, system, start);
        write(machine, [control], on);
        swapLayer(control, system).run(machine);
        // a†_↑ and a†_↓ change places in the ordered product: a sign where both modes of an orbital are full.
        let expected = 0;
        let sign = 1;
        for (let p = 0; p < N; p++) {
          const [up, down] = [(start >> (2 * p)) & 1, (start >> (2 * p + 1)) & 1];
          expected |= ((on ? down : up) << (2 * p)) | ((on ? up : down) << (2 * p + 1));
          if (on && up && down) sign = -sign;
        }
        state.visit((s, re, im) => {
          expect(read(s, system)).toBe(expected);
          expect(re).toBeCloseTo(sign, 12);
          expect(im).toBeCloseTo(0, 12);
        });
      }
    }
  }
  expect(countToffoli((m) => swapLayer(m.allocate(), m.allocateRegister(2 * N)))).toBe(swapLayerToffoli(N));
});

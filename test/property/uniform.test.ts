import { describe, expect, it } from 'vitest';
import { uniformSuperposition as published } from '../../core/circuit/formulas';
import { GateCounter } from '../../core/circuit/gates/counter';
import { Machine } from '../../core/circuit/gates/machine';
import { prepareGradient } from '../../core/circuit/primitives/phase-gradient';
import { addressBits } from '../../core/circuit/primitives/unary-iteration';
import {
  uniformFailure,
  uniformGradientWires,
  uniformSuperposition,
  uniformToffoli,
  uniformWires,
} from '../../core/circuit/primitives/uniform';
import { SparseState } from '../../core/circuit/simulate/sparse-state';

const STATES = [1, 2, 3, 4, 5, 6, 7, 9, 10, 11, 12, 13, 14, 20, 24, 27, 31];

describe.each([0, 1] as const)('a uniform superposition, all outcomes %i', (outcomes) => {
  it.each(STATES)('of %i states', (states) => {
    for (const phaseBits of [4, 7]) {
      const state = new SparseState({ outcomes });
      const machine = new Machine(state);
      const register = machine.allocateRegister(addressBits(states));
      const flag = machine.allocate();
      // A larger gradient register lends its top wires.
      const gradient = machine.allocateRegister(uniformGradientWires(phaseBits) + 1);
      prepareGradient(machine, gradient);
      const operation = uniformSuperposition(register, states, phaseBits, gradient.slice(1), flag);
      operation.run(machine);
      for (const [j, wire] of gradient.entries()) {
        machine.rotateZ(wire, (2 * Math.PI * 2 ** j) / 2 ** (gradient.length + 1));
        machine.gate('H', wire);
      }
      const failure = uniformFailure(states, phaseBits);
      let first: readonly [number, number] | null = null;
      let seen = 0;
      let failed = 0;
      state.visit((isSet, re, im) => {
        const number = register.reduce((sum, w, i) => sum + (isSet(w) ? 2 ** i : 0), 0);
        for (const wire of gradient) expect(isSet(wire)).toBe(false);
        expect(isSet(flag)).toBe(number < states);
        if (number >= states) {
          failed += re * re + im * im;
          return;
        }
        seen++;
        first ??= [re, im];
        expect(re).toBeCloseTo(first[0], 10);
        expect(im).toBeCloseTo(first[1], 10);
        expect(re * re + im * im).toBeCloseTo((1 - failure) / states, 10);
      });
      expect(seen).toBe(states);
      expect(failed).toBeCloseTo(failure, 10);

      prepareGradient(machine, gradient);
      operation.runAdjoint(machine);
      machine.releaseRegister(register);
      machine.release(flag);
    }
  });
});

it('costs what is published, forwards and backwards, and fails seldom', () => {
  for (let states = 1; states <= 70; states++) {
    for (const phaseBits of [4, 7, 10]) {
      for (const adjoint of [false, true]) {
        const counter = new GateCounter();
        const machine = new Machine(counter);
        const register = machine.allocateRegister(addressBits(states));
        const gradient = machine.allocateRegister(uniformGradientWires(phaseBits));
        const flag = machine.allocate();
        const held = machine.live;
        const operation = uniformSuperposition(register, states, phaseBits, gradient, flag);
        if (adjoint) operation.runAdjoint(machine);
        else operation.run(machine);
        const { toffoli } = GateCounter.total(counter.root);
        expect(toffoli).toBe(uniformToffoli(states, phaseBits));
        // J. Lee et al., PRX Quantum 2, 030305 (2021): 3⌈log₂L⌉ − 3e + 2b_r − 9.
        expect(toffoli).toBe(published(states, phaseBits).toffoli);
        expect(machine.peak - held).toBe(uniformWires(states, phaseBits));
      }
    }
    // Half a unit of rounding in φ/2 at b_r = 7: at most π/2^6, and the failure is its square times a few.
    expect(uniformFailure(states, 7)).toBeLessThan(0.03);
    expect(uniformFailure(states, 14)).toBeLessThan(3e-6);
  }
});

import { describe, expect, it } from 'vitest';
import { GateCounter } from '../../../core/circuit/gates/counter';
import { Machine } from '../../../core/circuit/gates/machine';
import { gate, type Operation, sequence } from '../../../core/circuit/gates/operation';
import {
  givens,
  givensChain,
  givensToffoli,
  modePhase,
  tiltLayer,
  tiltLayerCost,
} from '../../../core/circuit/primitives/givens';
import { type Rotate, vectorOf } from '../../../core/circuit/primitives/majorana';
import {
  gradientWires,
  prepareGradient,
  rotateByGradient,
  rotateExactly,
} from '../../../core/circuit/primitives/phase-gradient';
import { SparseState } from '../../../core/circuit/simulate/sparse-state';
import { annihilator, type Dense, dagger, times } from './majorana-algebra';
import { creator, distance, simulatedBlock } from './spinor-support';

const TOLERANCE = 1e-12;
/** b − 1 bits of an angle on the grid 2π/2^b. */
const BITS = 5;
const STEP = (2 * Math.PI) / 2 ** (BITS + 1);
const whole: Rotate = (target, angle) => rotateExactly(target, angle, BITS + 2, 'whole steps');
const half: Rotate = (target, angle) => rotateExactly(target, angle, BITS + 2);

const write = (wires: readonly number[], x: number) =>
  sequence(...wires.map((wire, i) => ((x >> i) & 1 ? gate('X', wire) : sequence())));

/** The unitary of an operation on `modes` wires that is steered by numbers in registers. */
function unitary(
  modes: number,
  numbers: readonly (readonly [bits: number, value: number])[],
  build: (system: readonly number[], registers: readonly (readonly number[])[]) => Operation,
): Dense {
  return simulatedBlock(modes, 'random', (machine) => {
    const system = machine.allocateRegister(modes);
    const registers = numbers.map(([bits]) => machine.allocateRegister(bits));
    const set = sequence(...registers.map((register, i) => write(register, numbers[i]![1])));
    return {
      system,
      ancillas: registers.flat(),
      operation: sequence(set, build(system, registers), set),
    };
  });
}

/** U a†_m U† against Σ c_P a†_P, up to one sign for all modes. */
function expectModes(u: Dense, expected: readonly (readonly [re: number[], im: number[]])[]): void {
  const modes = expected.length;
  const signs = expected.map(([re, im], m) => {
    const turned = times(times(u, dagger(annihilator(modes, m))), dagger(u));
    const right = distance(turned, creator(re, im));
    const wrong = distance(
      turned,
      creator(
        re.map((x) => -x),
        im.map((x) => -x),
      ),
    );
    expect(Math.min(right, wrong)).toBeLessThan(TOLERANCE);
    return right < wrong;
  });
  expect(new Set(signs).size).toBe(1);
}

describe('rotations of modes, against ladder operators on Fock space', () => {
  it.each([0, 5, 19, 31])('Givens rotation by number %i', (x) => {
    const [c, s] = [Math.cos(x * STEP), Math.sin(x * STEP)];
    const zero = [0, 0];
    expectModes(
      unitary(2, [[BITS, x]], (system, [angle]) => givens(system[0]!, null, system[1]!, angle!, whole)),
      [
        [[c, s], zero],
        [[-s, c], zero],
      ],
    );
    const across = unitary(3, [[BITS, x]], (system, [angle]) =>
      givens(system[0]!, system[1]!, system[2]!, angle!, whole),
    );
    const none = [0, 0, 0];
    expectModes(across, [
      [[c, 0, s], none],
      [[0, 1, 0], none],
      [[-s, 0, c], none],
    ]);
  });

  it('a chain turns the first mode into a vector', () => {
    const x = [7, 22];
    const u = unitary(
      6,
      x.map((value) => [BITS, value] as const),
      (system, angles) => givensChain(system, angles, half),
    );
    const vector = vectorOf(Float64Array.from(x, (value) => (value + 0.5) * STEP));
    const spread = Array.from({ length: 6 }, (_, m) => (m % 2 === 0 ? vector[m / 2]! : 0));
    const turned = times(times(u, dagger(annihilator(6, 0))), dagger(u));
    expect(distance(turned, creator(spread, new Array(6).fill(0)))).toBeLessThan(TOLERANCE);
  });

  it.each([
    [0, 0],
    [0, 1],
    [9, 0],
    [9, 1],
  ])('a phase by number %i, negated %i', (x, negated) => {
    const phi = (negated ? -1 : 1) * x * STEP;
    const u = unitary(
      1,
      [
        [BITS, x],
        [1, negated],
      ],
      (system, [angle, sign]) => modePhase(system[0]!, angle!, whole, sign![0]!),
    );
    const turned = times(times(u, dagger(annihilator(1, 0))), dagger(u));
    expect(distance(turned, creator([Math.cos(phi)], [Math.sin(phi)]))).toBeLessThan(TOLERANCE);
  });

  it.each([
    [0, 0],
    [0, 1],
    [1, 0],
    [1, 1],
  ])('the tilt of the spin, control %i, towards y %i', (control, towardsY) => {
    const u = unitary(
      4,
      [
        [1, control],
        [1, towardsY],
      ],
      (system, [on, y]) => tiltLayer(on![0]!, y![0]!, system),
    );
    const r = Math.SQRT1_2;
    const expected: [number[], number[]][] = [];
    for (const p of [0, 2]) {
      const up: [number[], number[]] = [new Array(4).fill(0), new Array(4).fill(0)];
      const down: [number[], number[]] = [new Array(4).fill(0), new Array(4).fill(0)];
      if (control === 0) {
        up[0][p] = 1;
        down[0][p + 1] = 1;
      } else {
        up[0][p] = r;
        down[0][p + 1] = -r;
        // (σ_z + σ_x)/√2 and (σ_z + σ_y)/√2
        up[towardsY][p + 1] = r;
        down[towardsY][p] = towardsY ? -r : r;
      }
      expected.push(up, down);
    }
    expectModes(u, expected);
  });

  it('costs what its formulas say', () => {
    const counter = new GateCounter();
    const machine = new Machine(counter);
    const system = machine.allocateRegister(6);
    const [control, y] = machine.allocateRegister(2);
    tiltLayer(control!, y!, system).run(machine);
    const tilted = GateCounter.total(counter.root);
    expect({ toffoli: tilted.toffoli, t: tilted.t }).toEqual(tiltLayerCost(3));
    const angle = machine.allocateRegister(BITS);
    const gradient = machine.allocateRegister(gradientWires(BITS + 2));
    givens(system[0]!, null, system[1]!, angle, (target, number) =>
      rotateByGradient(target, number, gradient, 'whole steps'),
    ).run(machine);
    expect(GateCounter.total(counter.root).toffoli - tilted.toffoli).toBe(givensToffoli(BITS + 2));
  });
});

it.each([2, 3, 4, 6])('whole steps: exp(iφZ) with φ = 2πx/2^β from the gradient, every x, β = %i', (beta) => {
  for (let x = 0; x < 2 ** beta; x++) {
    const state = new SparseState();
    const machine = new Machine(state);
    const gradient = machine.allocateRegister(gradientWires(beta));
    prepareGradient(machine, gradient);
    const [target] = machine.allocateRegister(1);
    const angle = machine.allocateRegister(beta);
    write(angle, x).run(machine);
    machine.gate('H', target!);
    rotateByGradient(target!, angle, gradient, 'whole steps').run(machine);
    rotateExactly(target!, angle, beta, 'whole steps').runAdjoint(machine);
    machine.gate('H', target!);
    // Both rotations together are the identity: the target is |0⟩ again.
    let back = 0;
    state.visit((isSet, re, im) => {
      if (!isSet(target!)) back += re * re + im * im;
    });
    expect(back).toBeCloseTo(1, 12);
    // And the second one is exp(iφZ).
    const phi = (2 * Math.PI * x) / 2 ** beta;
    const alone = new SparseState();
    const second = new Machine(alone);
    const [wire] = second.allocateRegister(1);
    const number = second.allocateRegister(beta);
    write(number, x).run(second);
    second.gate('H', wire!);
    rotateExactly(wire!, number, beta, 'whole steps').run(second);
    const amplitudes: [number, number][] = [];
    alone.visit((isSet, re, im) => {
      amplitudes[isSet(wire!) ? 1 : 0] = [re, im];
    });
    const [[a, b], [c, d]] = amplitudes as [[number, number], [number, number]];
    expect(a * c + b * d).toBeCloseTo(Math.cos(2 * phi) / 2, 12);
    expect(b * c - a * d).toBeCloseTo(Math.sin(2 * phi) / 2, 12);
  }
});

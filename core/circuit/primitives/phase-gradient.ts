import type { Machine } from '../gates/machine';
import { gate, type Operation, repeat, scratch, sequence, within } from '../gates/operation';
import { carryStep } from './arithmetic';

/**
 * Toffoli of a rotation by a number added into a gradient register of modulus 2^β: β − 2. The β bits of the sum
 * need β − 1 carries; the top bit of the gradient is |−⟩ and never stored, so the last carry only acts as a
 * phase, which is a CZ. C. Gidney, Quantum 2, 74 (2018); J. Lee et al., PRX Quantum 2, 030305 (2021), give the
 * same count.
 */
export function rotationToffoli(modulusBits: number): number {
  return Math.max(0, modulusBits - 2);
}

/** Wires of the gradient register of modulus 2^β: β − 1, since its top bit is a fixed |−⟩. */
export function gradientWires(modulusBits: number): number {
  return modulusBits - 1;
}

/** Prepares Σ_k exp(−2πi k/2^β)|k⟩ on the lower β − 1 wires, by rotations; done once per run. */
export function prepareGradient(machine: Machine, gradient: readonly number[]): void {
  const modulusBits = gradient.length + 1;
  for (const [j, wire] of gradient.entries()) {
    machine.gate('H', wire);
    machine.rotateZ(wire, (-2 * Math.PI * 2 ** j) / 2 ** modulusBits);
  }
}

/**
 * Which angles a number x stands for: φ = 2π(x + ½)/2^β, or φ = 2πx/2^β, which has a zero. The number is added where
 * the target is 0 and its complement where it is 1: the ½ makes the two opposite; without it the target itself is
 * the carry that enters the complement's sum. Both cost the same.
 */
export type Grid = 'half steps' | 'whole steps';

/**
 * exp(iφZ) on `target` up to a fixed phase, with x the number in `angle` (lowest bit first).
 *
 * @param angle - at most β wires; missing top bits count as 0. Left unchanged.
 * @param gradient - β − 1 wires in the gradient state; left unchanged.
 */
export function rotateByGradient(
  target: number,
  angle: readonly number[],
  gradient: readonly number[],
  grid: Grid = 'half steps',
): Operation {
  const modulusBits = gradient.length + 1;
  const missing = modulusBits - angle.length;
  if (missing < 0) throw new RangeError(`${angle.length} angle bits exceed the modulus 2^${modulusBits}`);
  return scratch(missing, (top) => {
    const number = [...angle, ...top];
    return within(
      repeat(modulusBits, (i) => gate('CX', target, number[i]!)),
      addPhase(number, gradient, grid === 'whole steps' ? target : -1),
    );
  });
}

/**
 * Adds the number modulo 2^β into the gradient, whose virtual top bit turns into phases.
 *
 * @param carryWire - added with it, or −1
 */
function addPhase(number: readonly number[], gradient: readonly number[], carryWire: number): Operation {
  const n = gradient.length;
  const top = number[n]!;
  if (n === 0) return sequence(gate('Z', top), carryWire < 0 ? sequence() : gate('Z', carryWire));
  return scratch(n - 1, (carries) => {
    const carryInto = (i: number) => (i === 0 ? carryWire : carries[i - 1]!);
    const up = repeat(n - 1, (i) => carryStep(number[i]!, gradient[i]!, carryInto(i), carries[i]!));
    const last = n - 1;
    const carry = carryInto(last);
    // (−1)^majority(x, y, c) = (−1)^{(x⊕c)(y⊕c) ⊕ c}, then the sum bit itself.
    const topPhase =
      carry < 0
        ? sequence(gate('CZ', number[last]!, gradient[last]!), gate('CX', number[last]!, gradient[last]!))
        : sequence(
            gate('CX', carry, number[last]!),
            gate('CX', carry, gradient[last]!),
            gate('CZ', number[last]!, gradient[last]!),
            gate('Z', carry),
            gate('CX', carry, number[last]!),
            gate('CX', number[last]!, gradient[last]!),
          );
    const down = repeat(n - 1, (step) => {
      const i = n - 2 - step;
      const carryIn = carryInto(i);
      return carryIn < 0
        ? sequence(gate('UNAND', number[0]!, gradient[0]!, carries[0]!), gate('CX', number[0]!, gradient[0]!))
        : sequence(
            gate('CX', carryIn, carries[i]!),
            gate('UNAND', number[i]!, gradient[i]!, carries[i]!),
            gate('CX', carryIn, number[i]!),
            gate('CX', number[i]!, gradient[i]!),
          );
    });
    return sequence(gate('Z', top), up, topPhase, down);
  });
}

/**
 * The same rotation without a gradient register: each angle bit steers a rotation of its own. Its many arbitrary
 * rotations make it useless on a machine, but a simulator of larger circuits needs no superposed gradient; that it
 * equals {@link rotateByGradient} up to a fixed phase is tested.
 */
export function rotateExactly(
  target: number,
  angle: readonly number[],
  modulusBits: number,
  grid: Grid = 'half steps',
): Operation {
  const turn = (wire: number, phi: number): Operation => ({
    run: (machine) => machine.rotateZ(wire, -2 * phi),
    runAdjoint: (machine) => machine.rotateZ(wire, 2 * phi),
  });
  const unit = (2 * Math.PI) / 2 ** modulusBits;
  return sequence(
    grid === 'half steps' ? turn(target, unit / 2) : sequence(),
    repeat(angle.length, (i) => {
      const half = (unit * 2 ** i) / 2;
      return sequence(turn(target, half), within(gate('CX', angle[i]!, target), turn(target, -half)));
    }),
  );
}

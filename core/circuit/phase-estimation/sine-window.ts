import { gate, type Operation, repeat, scratch, sequence, within } from '../gates/operation';
import { flipZeros, hadamards, reflectionToffoli } from '../primitives/reflection';

/** exp(−i·angle/2·Z). */
export const turnZ = (wire: number, angle: number): Operation => ({
  run: (machine) => machine.rotateZ(wire, angle),
  runAdjoint: (machine) => machine.rotateZ(wire, -angle),
});

/** exp(−i·angle/2·Y) = S H Rz H S†. */
const turnY = (wire: number, angle: number): Operation =>
  within(sequence(gate('SDG', wire), gate('H', wire)), turnZ(wire, angle));

/** exp(−i·angle/2·Z) where `control` is 1. */
const controlledTurnZ = (control: number, wire: number, angle: number): Operation =>
  sequence(turnZ(wire, angle / 2), within(gate('CX', control, wire), turnZ(wire, -angle / 2)));

/** Toffoli of the window's preparation: two reflections of its single round of amplitude amplification. */
export function sineWindowToffoli(bits: number): number {
  return reflectionToffoli(bits + 2) + reflectionToffoli(2);
}

/**
 * Σ_m √(2/(M+1)) sin(π(m+1)/(M+1)) |m⟩, M = 2^n, on wires in |0⟩: the window with the least standard deviation of
 * the phase (A. Luis, J. Peřina, Phys. Rev. A 54, 4564 (1996); R. Babbush et al., Phys. Rev. X 8, 041015 (2018)).
 *
 * A uniform superposition gets the phase exp(±iθ(m+1)) steered by a wire a; a Hadamard on a turns that into a sine at
 * a = 1, with probability (M+1)/(2M). A second wire brings the probability down to exactly ¼, which one round of
 * amplitude amplification lifts to 1.
 */
export function prepareSineWindow(register: readonly number[]): Operation {
  const size = 2 ** register.length;
  const theta = Math.PI / (size + 1);
  return scratch(2, ([sine, dimmer]) => {
    const a = sine!;
    const b = dimmer!;
    // Probability of b = 1 that makes the product ¼.
    const dim = 2 * Math.asin(Math.sqrt(size / (2 * (size + 1))));
    const first = sequence(
      hadamards([...register, a]),
      turnZ(a, -2 * theta),
      repeat(register.length, (j) => controlledTurnZ(register[j]!, a, -2 * theta * 2 ** j)),
      gate('H', a),
      turnY(b, dim),
    );
    const all = [...register, a, b];
    return sequence(
      first,
      // −1 where a = b = 1, then the reflection about the first state; sin(3·30°) = 1.
      gate('CZ', a, b),
      within({ run: (m) => first.runAdjoint(m), runAdjoint: (m) => first.run(m) }, flipZeros(all)),
      // Both wires are 1 now; what is left of them are phases: −1 of the reflection and i of the sine.
      gate('X', a),
      gate('X', b),
    );
  });
}

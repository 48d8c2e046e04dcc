import { gate, type Operation, sequence, span } from '../gates/operation';
import { flipZeros, hadamards, reflectionToffoli } from '../primitives/reflection';
import { firstAddresses, unaryIteration, unaryIterationToffoli } from '../primitives/unary-iteration';
import { inverseFourier } from './fourier';
import { prepareSineWindow, sineWindowToffoli } from './sine-window';

export type Window = 'sine' | 'rectangular';

/** What phase estimation needs of a walk. */
export interface Walk {
  /** U, its own inverse, with (⟨0|⊗1) U (|0⟩⊗1) = (H − c)/λ on `ancillas`. */
  readonly blockEncoding: Operation;
  readonly ancillas: readonly number[];
}

/** Uses of the block encoding: M − 1 for a register of M = 2^n values. */
export const blockEncodingUses = (bits: number): number => 2 ** bits - 1;

/**
 * Toffoli of phase estimation besides the uses of the block encoding: the window, the unfolding of the register, and
 * one reflection with its control for each use.
 */
export function phaseEstimationToffoli(bits: number, numAncillas: number, window: Window): number {
  const uses = blockEncodingUses(bits);
  return (
    (window === 'sine' ? sineWindowToffoli(bits) : 0) +
    unaryIterationToffoli(2 ** bits, false) +
    uses * reflectionToffoli(numAncillas + 1)
  );
}

/**
 * Phase estimation of the walk W = R·U, R = 2|0⟩⟨0| − 1: the register ends in a distribution about M·2φ/2π with
 * e^{±iφ} the eigenphases, cos φ = (E − c)/λ.
 *
 * Register value m is to see W^{2m − K}, K = M − 1: m steps forwards and K − m backwards. Since W† = U·R, the product
 * of a step forwards and one backwards differs from two forwards only in the reflection between them, which is then
 * left out: of the K reflections, value m switches off one (R. Babbush et al., Phys. Rev. X 8, 041015 (2018)). Each
 * step costs an AND of the unfolding and one for the control. A register steered only forwards would need twice the
 * uses for the same resolution.
 */
export function phaseEstimation(register: readonly number[], walk: Walk, window: Window): Operation {
  const values = 2 ** register.length;
  const prepare = window === 'sine' ? prepareSineWindow(register) : hadamards(register);
  const steps: Operation = unaryIteration(register, firstAddresses(values), null, (machine, m, flag) => {
    // Leaf m follows use number m: before the first use stands nothing, since R|0⟩ = |0⟩.
    if (m === 0) return;
    walk.blockEncoding.run(machine);
    const isLast = m === values - 1;
    // After use m < K the reflection is there unless the register holds m; after use K only if it holds K.
    const switched = sequence(
      isLast ? sequence() : gate('X', flag),
      flipZeros(walk.ancillas, [flag]),
      // 2|0⟩⟨0| − 1 is −1 times the flip.
      gate('Z', flag),
      isLast ? sequence() : gate('X', flag),
    );
    span('reflection of the walk', 'reflections', switched).run(machine);
  });
  return sequence(
    span('window', 'control', prepare),
    steps,
    span('inverse Fourier transform', 'control', inverseFourier(register)),
  );
}

/** Register value k → phase 2πk/M in [0, 2π), which is 2φ or −2φ up to the window's spread. */
export const phaseOfValue = (k: number, bits: number): number => (2 * Math.PI * k) / 2 ** bits;

/**
 * Probability of every register value for an eigenphase φ: the transform of the window's amplitudes, the average of
 * both signs. What a simulated circuit is compared with.
 */
export function valueDistribution(phi: number, bits: number, window: Window): Float64Array {
  const values = 2 ** bits;
  const amplitude = (m: number) =>
    window === 'sine'
      ? Math.sqrt(2 / (values + 1)) * Math.sin((Math.PI * (m + 1)) / (values + 1))
      : 1 / Math.sqrt(values);
  const out = new Float64Array(values);
  for (const sign of [1, -1]) {
    for (let k = 0; k < values; k++) {
      let re = 0;
      let im = 0;
      for (let m = 0; m < values; m++) {
        const angle = sign * phi * 2 * m - (2 * Math.PI * k * m) / values;
        re += amplitude(m) * Math.cos(angle);
        im += amplitude(m) * Math.sin(angle);
      }
      out[k]! += (re * re + im * im) / (2 * values);
    }
  }
  return out;
}

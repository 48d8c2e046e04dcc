import { gate, nothing, type Operation, repeat, scratch, sequence, within } from '../gates/operation';
import { constantComparisonToffoli, lessThanConstant } from './arithmetic';
import { gradientWires, rotateByGradient, rotationToffoli } from './phase-gradient';
import { hadamards } from './reflection';
import { addressBits } from './unary-iteration';

/** L = 2^e · odd, and the m = ⌈log₂L⌉ − e upper bits that hold the odd part. */
function partsOf(states: number): { lowBits: number; odd: number; highBits: number } {
  let odd = states;
  let lowBits = 0;
  for (; odd % 2 === 0; odd /= 2) lowBits++;
  return { lowBits, odd, highBits: addressBits(odd) };
}

/**
 * Toffoli of an equal superposition of L = 2^e · odd states: 3(m − 1) + 2(b_r − 3) with m = ⌈log₂L⌉ − e, which is
 * the published 3⌈log₂L⌉ − 3e + 2b_r − 9 (J. Lee et al., PRX Quantum 2, 030305 (2021)); 0 for a power of two.
 * The parts: two comparisons with L and one AND of the m bits, m − 1 each; two phases by odd multiples of 2π/2^{b_r},
 * whose lowest bit is free.
 *
 * @param phaseBits - b_r ≥ 3.
 */
export function uniformToffoli(states: number, phaseBits: number): number {
  const { odd, highBits } = partsOf(states);
  if (odd === 1) return 0;
  return 2 * constantComparisonToffoli(highBits) + (highBits - 1) + 2 * rotationToffoli(phaseBits - 1);
}

/** Wires of the gradient register that the phases are added into: its top b_r − 2. */
export function uniformGradientWires(phaseBits: number): number {
  return gradientWires(phaseBits - 1);
}

/** Wires lent at most: the comparison, which takes one more than the AND of the upper bits, and the phase. */
export function uniformWires(states: number, phaseBits: number): number {
  const { odd, highBits } = partsOf(states);
  // Number, and the carries of its addition.
  const phase = phaseBits - 1 + Math.max(0, phaseBits - 3);
  return odd === 1 ? 0 : highBits + phase;
}

/**
 * φ/2 as a number X: φ/2 = 2π(X + ½)/2^{b_r − 1}, the nearest to arcsin(½ √(2^m/odd)), with which one round of
 * amplification by phases φ succeeds for sure (G. L. Long, Phys. Rev. A 64, 022307 (2001)).
 */
function halfPhase(states: number, phaseBits: number): { number: number; angle: number } {
  const { odd, highBits } = partsOf(states);
  const unit = (2 * Math.PI) / 2 ** (phaseBits - 1);
  const exact = Math.asin(0.5 * Math.sqrt(2 ** highBits / odd));
  const number = Math.max(0, Math.round(exact / unit - 0.5));
  return { number, angle: (number + 0.5) * unit };
}

/**
 * Probability that the superposition fails and says so, from the rounding of φ alone: with amplitude s = √(odd/2^m)
 * of the wanted states and z = e^{iφ} the rest keeps |c|²·|1 − (1 − z)(s²z + 1 − s²)|², c² = 1 − s².
 */
export function uniformFailure(states: number, phaseBits: number): number {
  const { odd, highBits } = partsOf(states);
  if (odd === 1) return 0;
  const wanted = odd / 2 ** highBits;
  const phi = 2 * halfPhase(states, phaseBits).angle;
  const [zr, zi] = [Math.cos(phi), Math.sin(phi)];
  // (1 − z)(s²z + 1 − s²)
  const [ar, ai] = [1 - zr, -zi];
  const [br, bi] = [wanted * zr + 1 - wanted, wanted * zi];
  return (1 - wanted) * ((1 - (ar * br - ai * bi)) ** 2 + (ar * bi + ai * br) ** 2);
}

/**
 * |0⟩ → √(1/L) Σ_{l<L}|l⟩ up to a phase, with `succeeded` set to 1: one round of amplitude amplification by phases.
 * With the probability of {@link uniformFailure} the number is ≥ L and `succeeded` stays 0.
 *
 * @param register - ⌈log₂L⌉ wires in |0⟩, lowest bit first.
 * @param gradient - `uniformGradientWires` wires in the gradient state: the top ones of any larger register.
 * @param succeeded - wire in |0⟩.
 */
export function uniformSuperposition(
  register: readonly number[],
  states: number,
  phaseBits: number,
  gradient: readonly number[],
  succeeded: number,
): Operation {
  const { lowBits, odd, highBits } = partsOf(states);
  if (register.length !== lowBits + highBits)
    throw new RangeError(`${states} states in ${register.length} wires`);
  if (odd === 1) return sequence(hadamards(register), gate('X', succeeded));
  const high = register.slice(lowBits);
  const { number } = halfPhase(states, phaseBits);
  /** Phase φ on a wire that is 1, up to a common one: exp(−iφ/2·Z), the complement of X being −X − 1. */
  const turn = (wire: number): Operation =>
    scratch(phaseBits - 1, (constant) =>
      within(
        repeat(constant.length, (i) =>
          Math.floor(number / 2 ** i) % 2 === 0 ? gate('X', constant[i]!) : nothing,
        ),
        rotateByGradient(wire, constant, gradient),
      ),
    );
  const compared = (use: (isBelow: number) => Operation): Operation =>
    scratch(highBits, (lent) => within(lessThanConstant(high, odd, lent), use(lent[highBits - 1]!)));
  const atZero = scratch(highBits - 1, (ladder) =>
    within(
      sequence(
        repeat(highBits, (i) => gate('X', high[i]!)),
        repeat(highBits - 1, (i) =>
          gate('AND', i === 0 ? high[0]! : ladder[i - 1]!, high[i + 1]!, ladder[i]!),
        ),
      ),
      turn(ladder[highBits - 2]!),
    ),
  );
  return sequence(
    hadamards(register),
    compared(turn),
    hadamards(high),
    atZero,
    hadamards(high),
    compared((isBelow) => gate('CX', isBelow, succeeded)),
  );
}

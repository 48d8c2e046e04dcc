import { gate, type Operation, repeat, sequence, within } from '../gates/operation';
import { turnZ } from './sine-window';

/** exp(iφ) where both wires are 1, up to nothing: Rz on each and on their parity, and the phase they leave. */
function controlledPhase(a: number, b: number, phi: number): Operation {
  // exp(iφ·ab) = exp(iφ/4·(1 − Z_a − Z_b + Z_aZ_b)); the scalar part is a global phase.
  return sequence(turnZ(a, phi / 2), turnZ(b, phi / 2), within(gate('CX', a, b), turnZ(b, -phi / 2)));
}

/**
 * Inverse quantum Fourier transform of an n-wire register (lowest bit first), up to a global phase:
 * |m⟩ → M^{−1/2} Σ_k exp(−2πi km/M) |k⟩. n(n−1)/2 controlled phases of three rotations each, and ⌊n/2⌋ swaps.
 */
export function inverseFourier(register: readonly number[]): Operation {
  const n = register.length;
  const steps = repeat(n, (i) => {
    // Highest bit first: wire n−1−i becomes bit i of the result.
    const target = n - 1 - i;
    return sequence(
      gate('H', register[target]!),
      repeat(target, (j) => controlledPhase(register[j]!, register[target]!, -Math.PI / 2 ** (target - j))),
    );
  });
  const reverse = repeat(n >> 1, (i) => gate('SWAP', register[i]!, register[n - 1 - i]!));
  return sequence(steps, reverse);
}

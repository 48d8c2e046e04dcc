import { gate, type Operation, repeat, scratch, sequence, within } from '../gates/operation';
import { rotationToffoli } from './phase-gradient';

/** Rotates a wire by exp(iφZ), φ = 2π(x + ½)/2^β, with x in the angle wires: see phase-gradient.ts. */
export type Rotate = (target: number, angle: readonly number[]) => Operation;

/**
 * Qubit of mode (orbital, spin) under Jordan–Wigner in orbital-major order: γ_{m,0} = Z_0…Z_{m−1} X_m,
 * γ_{m,1} = Z_0…Z_{m−1} Y_m with m = 2p + σ.
 */
export const modeOf = (orbital: number, spin: 0 | 1): number => 2 * orbital + spin;

/** Toffoli of one layer of controlled fermionic swaps ↑↔↓ over N orbitals: N. */
export function swapLayerToffoli(orbitals: number): number {
  return orbitals;
}

/** Toffoli of V or V†: N − 1 rotations of β − 2 each. */
export function majoranaRotationToffoli(orbitals: number, modulusBits: number): number {
  return (orbitals - 1) * rotationToffoli(modulusBits);
}

/**
 * Where `control` is 1, exchanges modes ↑ and ↓ of one orbital, with the sign of fermions. A CNOT puts the parity
 * on the second wire; at odd parity the first wire flips, at even parity it takes a Z. One AND.
 */
export function controlledFermionicSwap(control: number, up: number, down: number): Operation {
  return scratch(1, ([odd]) =>
    within(
      gate('CX', up, down),
      sequence(
        gate('AND', control, down, odd!),
        gate('CX', odd!, up),
        gate('CZ', odd!, up),
        gate('CZ', control, up),
        gate('UNAND', control, down, odd!),
      ),
    ),
  );
}

/** Controlled ↑↔↓ on every orbital of the system register (2N wires). */
export function swapLayer(control: number, system: readonly number[]): Operation {
  return repeat(system.length / 2, (p) =>
    controlledFermionicSwap(control, system[2 * p]!, system[2 * p + 1]!),
  );
}

/**
 * V = E_{N−2} … E_1 E_0 (E_0 first), E_p = exp(−θ_p/2 · γ_{p↑0} γ_{p+1,↑0}): V γ_{0↑0} V† = Σ_p u_p γ_{p↑0} with
 * u = (cos θ_0, sin θ_0 cos θ_1, …, sin θ_0 … sin θ_{N−2}). Each E_p is exp(iθ_p/2 · Y Z X) on three neighbouring
 * wires: a basis change to Z, a rotation, and back.
 *
 * @param angles - N − 1 registers; the number x in one stands for θ = 4π(x + ½)/2^β.
 */
export function majoranaRotation(
  system: readonly number[],
  angles: readonly (readonly number[])[],
  rotate: Rotate,
): Operation {
  return repeat(angles.length, (p) => {
    const [first, between, second] = [system[2 * p]!, system[2 * p + 1]!, system[2 * p + 2]!];
    return within(
      sequence(
        gate('SDG', first),
        gate('H', first),
        gate('H', second),
        gate('CX', first, second),
        gate('CX', between, second),
      ),
      rotate(second, angles[p]!),
    );
  });
}

/**
 * Unit vector from its angles, and back. Angles are θ_p ∈ [0, π] for p < N − 2 and θ_{N−2} ∈ [0, 2π).
 * Hyperspherical coordinates; a zero tail gets angle 0.
 */
export function anglesOf(vector: Float64Array): Float64Array {
  const n = vector.length;
  const angles = new Float64Array(Math.max(0, n - 1));
  let tail = 0;
  for (let p = n - 1; p >= 1; p--) {
    const x = vector[p - 1]!;
    tail = Math.hypot(tail, vector[p]!);
    angles[p - 1] = p === n - 1 ? Math.atan2(vector[p]!, x) : Math.atan2(tail, x);
  }
  const last = n - 2;
  if (last >= 0 && angles[last]! < 0) angles[last]! += 2 * Math.PI;
  return angles;
}

export function vectorOf(angles: Float64Array): Float64Array {
  const vector = new Float64Array(angles.length + 1);
  let product = 1;
  for (let p = 0; p < angles.length; p++) {
    vector[p] = product * Math.cos(angles[p]!);
    product *= Math.sin(angles[p]!);
  }
  vector[angles.length] = product;
  return vector;
}

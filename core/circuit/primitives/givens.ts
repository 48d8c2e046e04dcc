import { gate, nothing, type Operation, repeat, scratch, sequence, within } from '../gates/operation';
import type { Rotate } from './majorana';
import { rotationToffoli } from './phase-gradient';

/*
 * Rotations of modes, a† → Σ c a†, under Jordan–Wigner in orbital-major order (mode 2p + σ). An operation U here is
 * named by what U a† U† does. The number x in an angle register stands for x or x + ½ steps, whichever `rotate` adds.
 */

/** Toffoli of a Givens rotation between two modes: one Pauli rotation for each Majorana kind. */
export function givensToffoli(modulusBits: number): number {
  return 2 * rotationToffoli(modulusBits);
}

/**
 * a†_first → cos θ a†_first + sin θ a†_second for modes that are neighbours or have one mode between them:
 * exp(−θ/2 (γ_{f0}γ_{s0} + γ_{f1}γ_{s1})) = exp(iθ/2 · Y Z X) exp(−iθ/2 · X Z Y).
 *
 * @param between - wire of the mode between the two, or null
 */
export function givens(
  first: number,
  between: number | null,
  second: number,
  angle: readonly number[],
  rotate: Rotate,
): Operation {
  const gather = sequence(
    gate('CX', first, second),
    between === null ? nothing : gate('CX', between, second),
  );
  return sequence(
    within(sequence(gate('SDG', first), gate('H', first), gate('H', second), gather), rotate(second, angle)),
    within(
      // S turns Y into −X, which brings the sign of the second exponent.
      sequence(gate('H', first), gate('S', second), gate('H', second), gather),
      rotate(second, angle),
    ),
  );
}

/** a†_{0↑} → Σ_p u_p a†_{p↑}, u = (cos θ_0, sin θ_0 cos θ_1, …), by N − 1 rotations, the one of modes 0 and 1 first. */
export function givensChain(
  system: readonly number[],
  angles: readonly (readonly number[])[],
  rotate: Rotate,
): Operation {
  return repeat(angles.length, (p) =>
    givens(system[2 * p]!, system[2 * p + 1]!, system[2 * p + 2]!, angles[p]!, rotate),
  );
}

/**
 * a† → e^{±iφ} a†, − where `negated` is 1: exp(iφn) = exp(−iφZ/2) up to a phase. The sign costs nothing.
 *
 * @param negated - wire or null
 */
export function modePhase(
  mode: number,
  angle: readonly number[],
  rotate: Rotate,
  negated: number | null,
): Operation {
  return within(
    sequence(gate('X', mode), negated === null ? nothing : gate('CX', negated, mode)),
    rotate(mode, angle),
  );
}

/** Toffoli and T gates of {@link tiltLayer} over N orbitals. */
export function tiltLayerCost(orbitals: number): { toffoli: number; t: number } {
  return { toffoli: orbitals, t: 6 * orbitals };
}

/**
 * Where `control` is 1, turns the spin of every orbital by the reflection that exchanges z with x (or with y where
 * `towardsY` is 1): a†_↑ → (a†_↑ + a†_↓)/√2, or (a†_↑ + i a†_↓)/√2, up to a phase (−1)^N. A CNOT puts the parity on
 * the second wire; at odd parity the first one is the spin, at even parity fermions ask for a Z. One AND an orbital.
 */
export function tiltLayer(control: number, towardsY: number, system: readonly number[]): Operation {
  return repeat(system.length / 2, (p) => tilt(control, towardsY, system[2 * p]!, system[2 * p + 1]!));
}

function tilt(control: number, towardsY: number, up: number, down: number): Operation {
  // S where `towardsY` is 1, up to a phase that its undoing takes back.
  const quarterTurn = sequence(
    gate('T', up),
    gate('CX', towardsY, up),
    gate('TDG', up),
    gate('CX', towardsY, up),
  );
  const eighthTurn = sequence(gate('SDG', up), gate('H', up), gate('T', up), gate('H', up), gate('S', up));
  return scratch(1, ([odd]) =>
    within(
      sequence(gate('CX', up, down), quarterTurn),
      within(
        gate('AND', control, down, odd!),
        sequence(within(eighthTurn, gate('CZ', odd!, up)), gate('CZ', odd!, up), gate('CZ', control, up)),
      ),
    ),
  );
}

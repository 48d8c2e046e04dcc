import { Machine } from '../../../core/circuit/gates/machine';
import type { Operation } from '../../../core/circuit/gates/operation';
import { SparseState } from '../../../core/circuit/simulate/sparse-state';
import { addScaled, annihilator, type Dense, dagger, zeros } from './majorana-algebra';

/** Seeded numbers in (−1, 1). */
export function randomNumbers(seed: number): () => number {
  let a = seed;
  return () => {
    a = (a + 0x6d2b79f5) | 0;
    let t = Math.imul(a ^ (a >>> 15), 1 | a);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 2147483648 - 1;
  };
}

export interface Opened {
  readonly system: readonly number[];
  /** Must be 0 at the end for an amplitude to count. */
  readonly ancillas: readonly number[];
  readonly operation: Operation;
}

/**
 * Block of an operation on its system wires, from a simulation of all basis states at once, each with a copy of
 * itself as a label.
 */
export function simulatedBlock(
  modes: number,
  outcomes: 'random' | 0 | 1,
  open: (machine: Machine) => Opened,
): Dense {
  const state = new SparseState({ maxWires: 256, outcomes });
  const machine = new Machine(state);
  const label = machine.allocateRegister(modes);
  const { system, ancillas, operation } = open(machine);
  for (const [i, wire] of label.entries()) {
    machine.gate('H', wire);
    machine.gate('CX', wire, system[i]!);
  }
  operation.run(machine);
  const block = zeros(2 ** modes);
  const scale = Math.sqrt(2 ** modes);
  const read = (isSet: (w: number) => boolean, list: readonly number[]) =>
    list.reduce((sum, w, i) => sum + (isSet(w) ? 2 ** i : 0), 0);
  state.visit((isSet, re, im) => {
    if (ancillas.some((w) => isSet(w))) return;
    const at = read(isSet, system) * block.n + read(isSet, label);
    block.re[at]! += re * scale;
    block.im[at]! += im * scale;
  });
  return block;
}

export function distance(a: Dense, b: Dense): number {
  let worst = 0;
  for (let i = 0; i < a.re.length; i++) {
    worst = Math.max(worst, Math.hypot(a.re[i]! - b.re[i]!, a.im[i]! - b.im[i]!));
  }
  return worst;
}

/** Σ c_P a†_P. */
export function creator(re: ArrayLike<number>, im: ArrayLike<number>): Dense {
  const modes = re.length;
  const out = zeros(2 ** modes);
  for (let m = 0; m < modes; m++) addScaled(out, dagger(annihilator(modes, m)), re[m]!, im[m]!);
  return out;
}

export function identity(n: number): Dense {
  const out = zeros(n);
  for (let i = 0; i < n; i++) out.re[i * n + i] = 1;
  return out;
}

import type { Machine } from '../gates/machine';
import { gate, type Operation, repeat, scratch, sequence, within } from '../gates/operation';

/** Toffoli of a phase flip controlled by n wires in all: n − 2 ANDs joined in a ladder and one CZ. */
export function reflectionToffoli(wires: number): number {
  return Math.max(0, wires - 2);
}

/** −1 where all `wires` are 1: a ladder of ANDs, then a CZ. */
function flipAllOnes(wires: readonly number[]): Operation {
  const n = wires.length;
  if (n === 0) throw new RangeError('a reflection needs at least one wire');
  if (n === 1) return gate('Z', wires[0]!);
  if (n === 2) return gate('CZ', wires[0]!, wires[1]!);
  return scratch(n - 2, (ladder) =>
    within(
      repeat(n - 2, (i) => gate('AND', i === 0 ? wires[0]! : ladder[i - 1]!, wires[i + 1]!, ladder[i]!)),
      gate('CZ', ladder[n - 3]!, wires[n - 1]!),
    ),
  );
}

/**
 * 1 − 2|0…0⟩⟨0…0| on `zeros`, where all `ones` are 1; else nothing. The walk's reflection 2|0⟩⟨0| − 1 differs by
 * the sign −1 where it acts.
 */
export function flipZeros(zeros: readonly number[], ones: readonly number[] = []): Operation {
  return within(
    repeat(zeros.length, (i) => gate('X', zeros[i]!)),
    flipAllOnes([...zeros, ...ones]),
  );
}

/** H on `target` where `control` is 1: Ry(π/4)·CZ·Ry(−π/4), two T gates and no Toffoli. */
export function controlledHadamard(control: number, target: number): Operation {
  return within(
    sequence(
      gate('SDG', target),
      gate('H', target),
      gate('TDG', target),
      gate('H', target),
      gate('S', target),
    ),
    gate('CZ', control, target),
  );
}

/** H on every wire. */
export function hadamards(wires: readonly number[]): Operation {
  const all = (machine: Machine) => {
    for (const wire of wires) machine.gate('H', wire);
  };
  return { run: all, runAdjoint: all };
}

import { expect } from 'vitest';
import { type GateSink, Machine } from '../../../../core/circuit/gates/machine';
import { takeCensus } from '../../../../core/circuit/qasm/census';
import { writeQasm } from '../../../../core/circuit/qasm/write';
import { SparseState } from '../../../../core/circuit/simulate/sparse-state';
import { play } from './play';

type Circuit = (machine: Machine) => void;
type Registers = ReadonlyMap<string, readonly number[]>;

export function textOf(circuit: Circuit, comments: readonly string[] = []): string {
  const chunks: string[] = [];
  writeQasm(circuit, takeCensus(circuit), { comments, write: (chunk) => chunks.push(chunk) });
  return chunks.join('');
}

/** By the values of the named registers; all other wires must be 0. */
function amplitudes(state: SparseState, registers: Registers): Map<string, readonly [number, number]> {
  const out = new Map<string, readonly [number, number]>();
  state.visit((isSet, re, im) => {
    const key = [...registers]
      .map(([name, wires]) => `${name}=${wires.map((w) => +isSet(w)).join('')}`)
      .join(' ');
    expect(out.has(key)).toBe(false);
    out.set(key, [re, im]);
  });
  return out;
}

/** Entangles a register with a reference of the same size: the state then shows every column of what follows. */
function spread(sink: GateSink, wires: readonly number[], reference: readonly number[]): void {
  for (const [i, wire] of wires.entries()) {
    sink.gate('H', wire, -1, -1, -1);
    sink.gate('CX', wire, reference[i]!, -1, -1);
  }
}

/** Wires from here on are the reference. */
const REFERENCE = 160;

/**
 * Runs a circuit straight on the simulator and by way of its text, on all basis states of some named registers at
 * once, with measurement outcomes forced to `outcome`; both must give the same amplitudes.
 *
 * @param inputs - names of the registers that are spread; the others start at 0
 * @returns the number of basis states compared
 */
export function expectSame(circuit: Circuit, outcome: 0 | 1, inputs: readonly string[]): number {
  const { registers } = takeCensus(circuit);
  const named = new Map(registers.map(({ name, wires }) => [name, wires]));
  const reference = inputs.flatMap((name) => [...named.get(name)!]).map((_, i) => REFERENCE + i);
  const options = { maxWires: 192, outcomes: outcome } as const;

  const direct = new SparseState(options);
  let next = 0;
  const take = (wires: readonly number[]) => wires.map(() => reference[next++]!);
  for (const [name, wires] of named) if (inputs.includes(name)) spread(direct, wires, take(wires));
  circuit(new Machine(direct));

  const reread = new SparseState(options);
  next = 0;
  const { qubits } = play(textOf(circuit), reread, (name, wires) => {
    if (inputs.includes(name)) spread(reread, wires, take(wires));
  });
  const all = (found: Registers): Registers =>
    new Map(
      [...named.keys()]
        .map((name) => [name, found.get(name.replace(/ /g, '_')) ?? found.get(name)!] as const)
        .concat([['reference', reference]]),
    );
  const want = amplitudes(direct, all(named));
  const got = amplitudes(reread, all(qubits));
  expect(got.size).toBe(want.size);
  for (const [key, [re, im]] of want) {
    const [x, y] = got.get(key) ?? [Number.NaN, Number.NaN];
    if (!(Math.hypot(x - re, y - im) < 1e-11)) expect([key, x, y]).toEqual([key, re, im]);
  }
  return want.size;
}

import { addressBits, GateCounter, Machine, type Operation, SparseState } from '../circuit';
import type { JobContext } from '../job';
import type { ComplexMatrix } from '../linalg';
import type { SectorBasis } from './determinants';

/**
 * An emitted block encoding whose steering registers are kept out of superposition. Registers that no gate changes
 * between PREPARE and its undoing only steer: the block is the sum over their basis states of probability times the
 * block with that basis state put in, and each of those needs far fewer amplitudes than the whole.
 */
export interface SteeredBlock {
  /** One for each thing that the steering registers can lead to; they sum to 1. */
  readonly probabilities: readonly number[];
  /** Amplitudes that one determinant grows to under one basis state: how many are simulated together. */
  readonly spread: number;
  /** Allocates the circuit's wires. */
  open(machine: Machine): OpenBlock;
}

export interface OpenBlock {
  readonly system: readonly number[];
  /** Wires at 1 in a basis state of the steering registers. */
  readonly steering: (branch: number) => readonly number[];
  readonly operation: Operation;
  /** Wires, none of them steering, whose zero state the block is projected on. */
  readonly projected: readonly number[];
}

/** Amplitudes that one simulation may grow to: keeps it in fast memory. */
const AMPLITUDES = 20_000;

/**
 * ⟨0|U|0⟩ of an emitted block encoding on all determinants of a sector, by simulation of the circuit. Columns and
 * basis states of the steering registers are simulated together, each pair with its own number in a register that no
 * gate touches.
 *
 * @returns dim×dim matrix, row = final determinant. Times λ, plus the encoding's constant, it is to be H.
 */
export async function simulatedBlock(
  circuit: SteeredBlock,
  basis: SectorBasis,
  context: JobContext,
): Promise<ComplexMatrix> {
  const { dim } = basis;
  const block = { n: dim, re: new Float64Array(dim * dim), im: new Float64Array(dim * dim) };
  const branches = [...circuit.probabilities.keys()].filter((b) => circuit.probabilities[b]! > 0);
  const batch = Math.max(1, Math.floor(AMPLITUDES / (dim * circuit.spread)));
  const wires = peakWires(circuit) + addressBits(dim * Math.min(batch, branches.length));
  for (let from = 0; from < branches.length; from += batch) {
    context.report('simulating the circuit', from, branches.length);
    await context.checkpoint();
    addBranches(block, circuit, branches.slice(from, from + batch), basis, wires, context.seed);
  }
  context.report('simulating the circuit', branches.length, branches.length);
  return block;
}

/** A basis state takes as many words as it has wires, so the simulator is given no more than are used. */
function peakWires(circuit: SteeredBlock): number {
  const machine = new Machine(new GateCounter({ toffoliOnly: true }));
  circuit.open(machine).operation.run(machine);
  return machine.peak;
}

function addBranches(
  block: ComplexMatrix,
  circuit: SteeredBlock,
  branches: readonly number[],
  { dim, modes, states, rank }: SectorBasis,
  maxWires: number,
  seed: number,
): void {
  const state = new SparseState({ maxWires, seed });
  const machine = new Machine(state);
  const label = machine.allocateRegister(addressBits(dim * branches.length));
  const { system, steering, operation, projected } = circuit.open(machine);
  state.load(
    branches.flatMap((branch, b) => {
      const fixed = steering(branch);
      return Array.from(states, (determinant, j) => ({
        ones: [
          ...label.filter((_, i) => Math.floor((b * dim + j) / 2 ** i) % 2 === 1),
          ...system.filter((_, m) => (determinant >>> m) & 1),
          ...fixed,
        ],
        amplitude: 1,
      }));
    }),
  );
  operation.run(machine);
  state.visit((isSet, re, im) => {
    if (projected.some((wire) => isSet(wire))) return;
    let determinant = 0;
    for (let m = 0; m < modes; m++) if (isSet(system[m]!)) determinant |= 1 << m;
    let at = 0;
    for (const [i, wire] of label.entries()) if (isSet(wire)) at += 2 ** i;
    const probability = circuit.probabilities[branches[Math.floor(at / dim)]!]!;
    const to = rank(determinant >>> 0) * dim + (at % dim);
    block.re[to]! += probability * re;
    block.im[to]! += probability * im;
  });
}

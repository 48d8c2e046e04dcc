import type { SparseTables, Steering } from '../circuit';
import {
  addressBits,
  type Blocks,
  GateCounter,
  Machine,
  SparseState,
  sparseAncillas,
  sparseWires,
  steeringNumbers,
  withTerm,
} from '../circuit';
import type { JobContext } from '../job';
import type { ComplexMatrix } from '../linalg';
import type { SectorBasis } from './determinants';

/** Amplitudes that one simulation starts with, its |+⟩ qubits included: keeps it in fast memory. */
const AMPLITUDES = 20_000;

/**
 * ⟨0|U|0⟩ of an emitted sparse block encoding on all determinants of a sector, by simulation of the circuit.
 *
 * Address numbers only steer: no gate changes them between PREPARE and its undoing. So the block is a sum over them,
 * and all numbers that lead to the same row and the same word do the same: one of each stands for all. Columns and
 * numbers are simulated together, each with its own number in a register that no gate touches.
 *
 * @returns dim×dim matrix, row = final determinant. Times λ, plus the encoding's constant, it is to be H.
 */
export async function simulatedSparseBlock(
  tables: SparseTables,
  blocks: Blocks,
  basis: SectorBasis,
  context: JobContext,
): Promise<ComplexMatrix> {
  const { dim } = basis;
  const block = { n: dim, re: new Float64Array(dim * dim), im: new Float64Array(dim * dim) };
  const steering = [...steeringNumbers(tables)];
  const plusQubits = tables.layout.exchanged ? 6 : 5;
  const batch = Math.max(1, Math.floor(AMPLITUDES / (dim * 2 ** plusQubits)));
  const wires = peakWires(tables, blocks) + addressBits(dim * batch);
  for (let from = 0; from < steering.length; from += batch) {
    context.report('simulating the circuit', from, steering.length);
    await context.checkpoint();
    addBlock(block, tables, blocks, basis, steering.slice(from, from + batch), wires, context.seed);
  }
  context.report('simulating the circuit', steering.length, steering.length);
  return block;
}

/** A basis state takes as many words as it has wires, so the simulator is given no more than are used. */
function peakWires(tables: SparseTables, blocks: Blocks): number {
  const machine = new Machine(new GateCounter({ toffoliOnly: true }));
  withTerm(tables, sparseWires(tables.layout, machine), blocks).run(machine);
  return machine.peak;
}

function addBlock(
  block: ComplexMatrix,
  tables: SparseTables,
  blocks: Blocks,
  basis: SectorBasis,
  steering: readonly Steering[],
  maxWires: number,
  seed: number,
): void {
  const { dim, modes, states } = basis;
  const state = new SparseState({ maxWires, seed });
  const machine = new Machine(state);
  const label = machine.allocateRegister(addressBits(dim * steering.length));
  const wires = sparseWires(tables.layout, machine);
  const numbers = [wires.low, wires.uniform, wires.share];
  const ones = (register: readonly number[], value: number) =>
    register.filter((_, i) => Math.floor(value / 2 ** i) % 2 === 1);
  state.load(
    steering.flatMap(({ low, uniform, share }, s) =>
      Array.from(states, (determinant, j) => ({
        ones: [
          ...ones(label, s * dim + j),
          ...ones(wires.system, determinant),
          ...ones(wires.low, low),
          ...ones(wires.uniform, uniform),
          ...ones(wires.share, share),
        ],
        amplitude: 1,
      })),
    ),
  );
  const fixed = new Set(numbers.flat());
  const plus = sparseAncillas(wires).filter((wire) => !fixed.has(wire));
  for (const wire of plus) machine.gate('H', wire);
  withTerm(tables, wires, blocks).run(machine);
  for (const wire of plus) machine.gate('H', wire);
  state.visit((isSet, re, im) => {
    if (plus.some((wire) => isSet(wire))) return;
    let determinant = 0;
    for (let m = 0; m < modes; m++) if (isSet(wires.system[m]!)) determinant |= 1 << m;
    let at = 0;
    for (const [i, wire] of label.entries()) if (isSet(wire)) at += 2 ** i;
    const { probability } = steering[Math.floor(at / dim)]!;
    const row = basis.rank(determinant >>> 0);
    block.re[row * dim + (at % dim)]! += probability * re;
    block.im[row * dim + (at % dim)]! += probability * im;
  });
}

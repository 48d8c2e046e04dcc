import type { SpinTreatment, TripletTables, WalkBlocks } from '../circuit';
import {
  addressBits,
  ancillaWires,
  GateCounter,
  Machine,
  SparseState,
  walkWires,
  withItemData,
} from '../circuit';
import type { JobContext } from '../job';
import type { ComplexMatrix } from '../linalg';
import type { SectorBasis } from './determinants';

/**
 * ⟨0|U|0⟩ of an emitted triplet block encoding on all determinants of a sector, by simulation of the circuit.
 *
 * The outer registers only steer: gates never change them between PREPARE and its undoing. So the block is the sum
 * over their basis states of probability times the block with that basis state put in, and each of those needs far
 * fewer amplitudes than the whole (a small case with everything running is a unit test). All columns are simulated
 * at once, each with its number in a register that no gate touches.
 *
 * @returns dim×dim matrix, row = final determinant. Times λ, plus the encoding's constant, it is to be H.
 */
export async function simulatedBlock(
  tables: TripletTables,
  spin: SpinTreatment,
  blocks: WalkBlocks,
  basis: SectorBasis,
  context: JobContext,
): Promise<ComplexMatrix> {
  const { dim } = basis;
  const block = { n: dim, re: new Float64Array(dim * dim), im: new Float64Array(dim * dim) };
  const outerStates = tables.items.flatMap((item, t) =>
    item.lambda.flatMap((_, face) =>
      (item.paired ? [0, 1] : [0]).map((square) => ({
        t,
        face,
        square,
        probability: tables.outer.probabilities[face * 2 ** tables.itemBits + t]! / (item.paired ? 2 : 1),
      })),
    ),
  );
  const wires = peakWires(tables, spin, blocks) + addressBits(dim);
  for (const [done, outer] of outerStates.entries()) {
    context.report('simulating the circuit', done, outerStates.length);
    await context.checkpoint();
    if (outer.probability > 0) addItemBlock(block, tables, spin, blocks, basis, outer, wires, context.seed);
  }
  context.report('simulating the circuit', outerStates.length, outerStates.length);
  return block;
}

/** A basis state takes as many words as it has wires, so the simulator is given no more than are used. */
function peakWires(tables: TripletTables, spin: SpinTreatment, blocks: WalkBlocks): number {
  const machine = new Machine(new GateCounter({ toffoliOnly: true }));
  withItemData(tables, walkWires(tables, machine, 'exact'), spin, blocks).run(machine);
  return machine.peak;
}

interface OuterState {
  readonly t: number;
  readonly face: number;
  readonly square: number;
  readonly probability: number;
}

function addItemBlock(
  block: ComplexMatrix,
  tables: TripletTables,
  spin: SpinTreatment,
  blocks: WalkBlocks,
  basis: SectorBasis,
  outer: OuterState,
  maxWires: number,
  seed: number,
): void {
  const { dim, modes, states } = basis;
  const state = new SparseState({ maxWires, seed });
  const machine = new Machine(state);
  const column = machine.allocateRegister(addressBits(dim));
  const wires = walkWires(tables, machine, 'exact');
  const steering = [
    ...wires.item.filter((_, i) => (outer.t >> i) & 1),
    ...(outer.face === 1 ? [wires.face!] : []),
    ...(outer.square === 1 ? [wires.square!] : []),
  ];
  state.load(
    Array.from(states, (determinant, j) => ({
      ones: [
        ...column.filter((_, i) => (j >> i) & 1),
        ...wires.system.filter((_, m) => (determinant >>> m) & 1),
        ...steering,
      ],
      amplitude: 1,
    })),
  );
  withItemData(tables, wires, spin, blocks).run(machine);
  const ancillas = ancillaWires(wires).filter((wire) => !steering.includes(wire));
  state.visit((isSet, re, im) => {
    if (ancillas.some((wire) => isSet(wire))) return;
    let determinant = 0;
    for (let m = 0; m < modes; m++) if (isSet(wires.system[m]!)) determinant |= 1 << m;
    let j = 0;
    for (const [i, wire] of column.entries()) if (isSet(wire)) j |= 1 << i;
    const row = basis.rank(determinant >>> 0);
    block.re[row * dim + j]! += outer.probability * re;
    block.im[row * dim + j]! += outer.probability * im;
  });
}

import { constantComparisonToffoli } from '../primitives/arithmetic';
import { type Blocks, erasureToffoli, oneHotToffoli } from '../primitives/look-up';
import { readToffoli } from '../primitives/reading';
import { addressBits } from '../primitives/unary-iteration';
import type { Subroutine } from '../recipe';
import {
  BABBUSH,
  BERRY,
  DERIVED,
  GIDNEY,
  leaf,
  type PhaseEstimationPart,
  readingText,
  reflectionLeaves,
} from '../squares/leaves';
import type { SparseLayout } from './layout';
import { multipleToffoli } from './multiple';
import { pairsToffoli, pairsWires } from './pairs';
import { orbitalExchangeToffoli, pairExchangeToffoli } from './select';
import { kindExchangeT, selectedMajoranaToffoli, selectedMajoranaWires } from './selected-majorana';
import { preparedWires } from './walk';

/** Toffoli of reading and of erasing a table of `rows` rows without gaps. */
export function tableToffoli(rows: number, width: number, blocks: Blocks): { read: number; erase: number } {
  return {
    read: readToffoli(Math.ceil(rows / blocks.read), width, blocks),
    erase: erasureToffoli(Math.ceil(rows / blocks.erase), blocks.erase),
  };
}

/** Wires of unary iteration over 0 … count − 1 without control: its depth less one, or a constant wire. */
const iterationWires = (count: number) => (count === 1 ? 1 : addressBits(count) - 1);

/** Toffoli of PREPARE and its undoing besides the table. */
export function preparationToffoli({ address, keepBits, wordWidth, share }: SparseLayout): number {
  return (
    multipleToffoli(address.factor, address.uniformBits) +
    keepBits +
    wordWidth +
    (share ? constantComparisonToffoli(share.bits) : 0)
  );
}

/**
 * The walk step of the sparse form as a tree of counts, Toffoli by Toffoli that of the circuit which
 * `sparseWalkStep` emits, and with the same peak of wires.
 */
export function sparseRecipe(layout: SparseLayout, blocks: Blocks, phase: PhaseEstimationPart): Subroutine {
  const { address, share, exchanged } = layout;
  const ancillas = [
    { name: 'lower address bits', qubits: address.lowBits },
    { name: 'uniform number', qubits: address.uniformBits },
    { name: 'uniform number of the spin–orbit kind', qubits: share?.bits ?? 0 },
    { name: 'order of the pairs', qubits: layout.spins === 'fixed' ? 0 : 1 },
    { name: 'spins', qubits: layout.spins === 'fixed' ? 1 : 2 },
    { name: 'Majorana kinds', qubits: 2 },
    { name: 'placing of two components', qubits: exchanged ? 1 : 0 },
  ].filter((register) => register.qubits > 0);
  const reflected = ancillas.reduce((sum, register) => sum + register.qubits, 0);
  return {
    name: 'walk step, sparse',
    registers: [
      { name: 'system', qubits: 2 * layout.orbitals },
      ...phase.registers.filter((register) => register.qubits > 0),
      ...ancillas,
    ],
    children: [blockEncodingRecipe(layout, blocks), ...reflectionLeaves(reflected, phase)],
  };
}

function blockEncodingRecipe(layout: SparseLayout, blocks: Blocks): Subroutine {
  const { address, keepBits, wordWidth, rowWidth, share } = layout;
  const held = preparedWires(layout, blocks);
  const table = tableToffoli(address.rows, rowWidth, blocks);
  const read = Math.ceil(address.rows / blocks.read);
  const reading = readingText(rowWidth, blocks);
  const erase = Math.ceil(address.rows / blocks.erase);
  return {
    name: 'block encoding',
    registers: [
      { name: 'row number', qubits: held.multiple },
      { name: 'rows of the table', qubits: held.output },
      { name: 'carries of the comparison', qubits: held.carries },
      { name: 'change of the word', qubits: held.chosen },
      { name: 'spin–orbit kind', qubits: held.share },
    ].filter((register) => register.qubits > 0),
    children: [
      leaf({
        name: 'row number',
        part: 'prepare',
        toffoli: multipleToffoli(address.factor, address.uniformBits),
        formula: 'g(ones of m − 1): m·u for a g-bit number u, taken back by measurement',
        inputs: { m: address.factor, g: address.uniformBits },
        source: DERIVED,
      }),
      leaf({
        name: 'coefficient look-up',
        part: 'prepare',
        toffoli: table.read,
        formula: reading.formula,
        inputs: { rows: address.rows, B: read, ...reading.inputs },
        source: reading.source,
        // Through borrowed wires, the flags of the low address bits stay.
        scratch: iterationWires(read) + (blocks.slice === undefined ? 0 : blocks.read),
      }),
      leaf({
        name: 'comparison',
        part: 'prepare',
        toffoli: keepBits,
        formula: 'keep: one AND a bit, taken back by measurement',
        inputs: { keep: keepBits },
        source: `${BABBUSH}; ${GIDNEY}`,
      }),
      leaf({
        name: 'choice of the word',
        part: 'prepare',
        toffoli: wordWidth,
        formula: 'w: one AND a bit of the word, taken back by measurement',
        inputs: { w: wordWidth },
        source: DERIVED,
      }),
      leaf({
        name: 'spin–orbit kind',
        part: 'prepare',
        toffoli: share ? constantComparisonToffoli(share.bits) : 0,
        formula: 'n − 1: a number compared with a constant',
        inputs: { n: share?.bits ?? 1 },
        source: DERIVED,
      }),
      selectRecipe(layout),
      leaf({
        name: 'coefficient erasure',
        part: 'prepare',
        toffoli: table.erase,
        formula: 'B − 2 + (k − 1 − log₂k)',
        inputs: { rows: address.rows, B: erase, k: blocks.erase, flags: oneHotToffoli(blocks.erase) },
        source: BERRY,
        // The flags lie in the measured output if it has enough wires.
        scratch:
          (blocks.erase === 1 || held.output >= blocks.erase ? 0 : blocks.erase) + iterationWires(erase),
      }),
    ],
  };
}

/** Two row operators, each of two selected Majorana operators. */
function selectRecipe(layout: SparseLayout): Subroutine {
  const { orbitals, orbitalBits, spin } = layout;
  const modes = 2 * orbitals;
  const exchanged = orbitalExchangeToffoli(layout);
  const majorana = (times: number) =>
    leaf({
      name: 'selected Majorana operator',
      part: 'select.other',
      times,
      toffoli: selectedMajoranaToffoli(modes),
      t: spin ? kindExchangeT(modes) : 0,
      formula: spin ? '2N − 1; two T gates a mode for the Majorana kind' : '2N − 1',
      inputs: { N: orbitals },
      source: BABBUSH,
      scratch: selectedMajoranaWires(modes),
    });
  const pair = (): Subroutine => ({
    name: 'row operator',
    registers: exchanged > 0 ? [{ name: 'exchanged orbitals', qubits: exchanged }] : [],
    children: [
      leaf({
        name: 'orbitals of a pair',
        part: 'select.other',
        toffoli: exchanged,
        formula: 'n: one AND a bit of an orbital number, taken back by measurement; 0 with spin',
        inputs: { n: orbitalBits },
        source: DERIVED,
      }),
      majorana(2),
    ],
  });
  return {
    name: 'SELECT',
    registers: [
      { name: 'spin of the second pair', qubits: layout.spins === 'mixed' ? 1 : 0 },
      { name: 'pairs of the coefficient', qubits: pairsWires(layout) },
    ].filter((r) => r.qubits > 0),
    children: [
      leaf({
        name: 'spin of the second pair',
        part: 'select.other',
        toffoli: layout.spins === 'mixed' ? 1 : 0,
        formula: '1 where some rows fix the spins of their pairs and others do not',
        inputs: {},
        source: DERIVED,
      }),
      leaf({
        name: 'pairs of the coefficient',
        part: 'select.other',
        toffoli: pairsToffoli(layout),
        formula: 'ANDs that place the spin components and find the Majorana kinds',
        inputs: { n: orbitalBits },
        source: DERIVED,
      }),
      {
        name: 'product of two row operators',
        registers: [{ name: 'exchanged pairs', qubits: pairExchangeToffoli(layout) }].filter(
          (r) => r.qubits > 0,
        ),
        children: [
          leaf({
            name: 'order of the pairs',
            part: 'select.other',
            toffoli: pairExchangeToffoli(layout),
            formula:
              '2n, and what else describes a pair: one AND a bit, taken back by measurement; 0 where all commute',
            inputs: { n: orbitalBits },
            source: DERIVED,
          }),
          { ...pair(), times: 2 },
        ],
      },
    ],
  };
}

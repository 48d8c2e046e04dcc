import type { Machine } from '../gates/machine';
import type { Operation } from '../gates/operation';
import {
  blockAddresses,
  controlledSwap,
  erase,
  lookUpWires,
  membership,
  oneHot,
  oneHotToffoli,
  type Table,
} from './look-up';
import { unaryIteration, unaryIterationToffoli } from './unary-iteration';

/**
 * How a table is read with wires borrowed in any state: k = 2^j rows at a time (k ≥ 2), the row in slices of at most
 * `slice` bits, one slice after the other through the same k − 1 borrowed words.
 */
export interface BorrowedBlock {
  readonly block: number;
  readonly slice: number;
}

/** Borrowed wires: k − 1 words of one slice. */
export function borrowedWires({ block, slice }: BorrowedBlock): number {
  return slice * (block - 1);
}

/** Wires lent in |0⟩ while it runs: the flags of the low address bits and the iteration. */
export function borrowedLookUpWires(addresses: Uint32Array, block: number, controlled = false): number {
  return block + lookUpWires(addresses, block, controlled);
}

/**
 * Toffoli of {@link borrowedLookUp}: with m = ⌈b/c⌉ slices of c bits, m + 1 iterations over the blocks, (b + c)(k − 1)
 * for the copies and k − 1 − log₂k for the flags. One slice gives 2·iteration + 2b(k − 1) + (k − 1 − log₂k), where
 * the preprint that introduced copies in place of swaps has 2L/k + 2b(k − 1) + 2k − 6 ("Halving the cost of QROM",
 * arXiv:2605.20334 (2026)); its 2k − 6 is what two iterations and two sets of flags come to if the flags are made
 * twice at k − 2 and each iteration costs L/k − 1. Narrow slices tend to (1 + 1/b)L/k per borrowed word of b bits, as
 * there. Construction and count derived here.
 */
export function borrowedLookUpToffoli(
  blocks: number,
  width: number,
  { block, slice }: BorrowedBlock,
  controlled = false,
): number {
  const passes = Math.ceil(width / slice) + 1;
  return (
    passes * unaryIterationToffoli(blocks, controlled) + (width + slice) * (block - 1) + oneHotToffoli(block)
  );
}

/**
 * |l⟩|z⟩ → |l⟩|z ⊕ row at l⟩ for any z, with borrowed wires that may hold anything and get it back.
 *
 * Each borrowed word D_j gets slice after slice of row j (as its difference from row 0) added in turn; after each,
 * the word whose number is in the low address bits is copied onto the output, which then holds the slice of the row
 * and, in every slice alike, the foreign content D. Once D is all that is left in the words, it is copied onto the
 * first slice alone: CNOTs between the slices take it out of the others.
 *
 * The adjoint is the measurement-based erasure, for an output that was |0⟩ before.
 *
 * @param register - address, lowest bit first; must hold one of the table's addresses.
 * @param output - as many wires as a row has bits.
 * @param borrowed - `borrowedWires` wires that neither the address, the output nor the control is among.
 * @param eraseBlock - rows a time of the erasure.
 * @param flags - where the erasure keeps its flags, as for `lookUp`.
 */
export function borrowedLookUp(
  register: readonly number[],
  output: readonly number[],
  borrowed: readonly number[],
  table: Table,
  how: BorrowedBlock,
  eraseBlock: number,
  control: number | null = null,
  flags: 'fresh' | 'in output' = 'fresh',
): Operation {
  const { width, addresses } = table;
  const { block, slice } = how;
  check(output, borrowed, table, how);
  const lowBits = Math.log2(block);
  const slices = Math.ceil(width / slice);
  const word = (j: number) => borrowed.slice((j - 1) * slice, j * slice);
  const target = (s: number) => output.slice(s * slice, Math.min(width, (s + 1) * slice));

  const content = differences(table, block);
  const run = (machine: Machine): void => {
    const low = oneHot(register.slice(0, lowBits), null);
    const selected = low.begin(machine);
    /** The selected word, or what of it a last, shorter slice takes. */
    const copyTo = (s: number): void => {
      for (let j = 1; j < block; j++) {
        const from = word(j);
        for (const [i, wire] of target(s).entries()) machine.gate('CCX', selected[j]!, from[i]!, wire);
      }
    };
    for (let s = 0; s <= slices; s++) {
      // Slice s replaces slice s − 1 in the words; row 0 goes onto the output in the first pass, all of it.
      const add = (m: Machine, high: number, flag: number): void => {
        if (m.skipsClifford) {
          m.skip(((block - 1) * slice) / 2);
          return;
        }
        if (s === 0) {
          for (let b = 0; b < width; b++) if (content(high, 0, b)) m.gate('CX', flag, output[b]!);
        }
        for (let j = 1; j < block; j++) {
          const into = word(j);
          for (let i = 0; i < slice; i++) {
            const before = s > 0 && content(high, j, (s - 1) * slice + i);
            const after = s < slices && content(high, j, s * slice + i);
            if (before !== after) m.gate('CX', flag, into[i]!);
          }
        }
      };
      unaryIteration(register.slice(lowBits), blockAddresses(addresses, block), control, add).run(machine);
      if (s < slices) copyTo(s);
    }
    const first = target(0);
    const spread = () => {
      for (let s = 1; s < slices; s++) {
        for (const [i, wire] of target(s).entries()) machine.gate('CX', first[i]!, wire);
      }
    };
    spread();
    copyTo(0);
    spread();
    low.end(machine);
  };
  const lent = flags === 'in output' ? output : [];
  return {
    run,
    runAdjoint: (machine) => eraseRow(machine, register, output, table, eraseBlock, control, lent),
  };
}

/**
 * Toffoli of {@link borrowedSwapLookUp}: 2·iteration + 4b(k − 1). G. H. Low, V. Kliuchnikov, L. Schaeffer,
 * arXiv:1812.00954 (2018); D. W. Berry et al., Quantum 3, 208 (2019), who write the iteration as ⌈L/k⌉.
 */
export function borrowedSwapToffoli(
  blocks: number,
  width: number,
  block: number,
  controlled = false,
): number {
  return 2 * unaryIterationToffoli(blocks, controlled) + 4 * width * (block - 1);
}

/**
 * The published way, by swaps: |l⟩|0⟩ → |l⟩|row at l⟩. The output changes places with the borrowed word that belongs
 * to the address, all words get their rows added, and places are changed back. Done once with the output in |+⟩,
 * which no addition changes, it leaves the rows in the borrowed words; the second time, with the output in |0⟩, it
 * takes them out again.
 *
 * @param borrowed - (k − 1)·width wires in any state.
 */
export function borrowedSwapLookUp(
  register: readonly number[],
  output: readonly number[],
  borrowed: readonly number[],
  table: Table,
  block: number,
  eraseBlock: number,
  control: number | null = null,
): Operation {
  const { width, addresses, bit } = table;
  check(output, borrowed, table, { block, slice: width });
  const lowBits = Math.log2(block);
  const words = [...output, ...borrowed];
  const isListed = membership(addresses);
  const run = (machine: Machine): void => {
    const swap = (level: number): void => {
      for (let i = 0; i < 2 ** level * width; i++) {
        controlledSwap(machine, register[level]!, words[i]!, words[i + 2 ** level * width]!);
      }
    };
    const add = (m: Machine, high: number, flag: number): void => {
      for (let j = 0; j < block && !m.skipsClifford; j++) {
        const address = high * block + j;
        if (!isListed(address)) continue;
        for (let b = 0; b < width; b++) if (bit(address, b)) m.gate('CX', flag, words[j * width + b]!);
      }
    };
    for (const pass of [0, 1]) {
      if (pass === 0) for (const wire of output) machine.gate('H', wire);
      for (let level = 0; level < lowBits; level++) swap(level);
      unaryIteration(register.slice(lowBits), blockAddresses(addresses, block), control, add).run(machine);
      for (let level = lowBits - 1; level >= 0; level--) swap(level);
      if (pass === 0) for (const wire of output) machine.gate('H', wire);
    }
  };
  return { run, runAdjoint: (machine) => eraseRow(machine, register, output, table, eraseBlock, control) };
}

function check(
  output: readonly number[],
  borrowed: readonly number[],
  { width }: Table,
  how: BorrowedBlock,
): void {
  if (how.block < 2 || !Number.isInteger(Math.log2(how.block)) || how.slice > width || how.slice < 1) {
    throw new RangeError(`a block of ${how.block} rows in slices of ${how.slice} of ${width} bits`);
  }
  if (output.length !== width || borrowed.length !== borrowedWires(how)) {
    throw new RangeError(
      `${output.length} output and ${borrowed.length} borrowed wires for rows of ${width} bits`,
    );
  }
}

/** Row 0 of a block as it is, the others as their difference from it; rows that are not listed as row 0. */
function differences({ addresses, width, bit }: Table, block: number) {
  const isListed = membership(addresses);
  const own = (address: number, b: number) => isListed(address) && bit(address, b);
  return (high: number, j: number, b: number): boolean => {
    if (b >= width) return false;
    const address = high * block + j;
    const zero = own(high * block, b);
    return j === 0 ? zero : isListed(address) && bit(address, b) !== zero;
  };
}

function eraseRow(
  machine: Machine,
  register: readonly number[],
  output: readonly number[],
  { addresses, bit }: Table,
  block: number,
  control: number | null,
  lent: readonly number[] = [],
): void {
  erase(machine, register, output, addresses, bit, block, control, lent);
}

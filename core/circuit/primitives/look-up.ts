import type { Machine } from '../gates/machine';
import type { Operation } from '../gates/operation';
import { unaryIteration, unaryIterationToffoli } from './unary-iteration';

/** Bit `bit` of row `row` of a table. */
export type TableBit = (row: number, bit: number) => boolean;

export interface Table {
  readonly rows: number;
  /** Output bits per row. */
  readonly width: number;
  readonly bit: TableBit;
}

/**
 * Toffoli of a look-up with block k: ⌈L/k⌉ − 2 for the iteration over blocks (−1 with a control; 0 for at most
 * two blocks without one) and b(k−1) for the swaps that bring the wanted row to the front.
 * G. H. Low, V. Kliuchnikov, L. Schaeffer, Quantum 8, 1375 (2024) (arXiv:1812.00954); D. W. Berry et al.,
 * Quantum 3, 208 (2019), who write the iteration as ⌈L/k⌉.
 */
export function lookUpToffoli(rows: number, width: number, block: number, controlled = false): number {
  const blocks = Math.ceil(rows / block);
  return unaryIterationToffoli(blocks, controlled) + width * (block - 1);
}

/**
 * Toffoli of the measurement-based erasure with block k: the iteration over ⌈L/k⌉ blocks, and k − 1 − log₂k for
 * the one-hot form of the low address bits. Berry et al. 2019, Appendix C, with the iteration written as ⌈L/k⌉
 * and the one-hot form as k.
 */
export function erasureToffoli(rows: number, block: number, controlled = false): number {
  return unaryIterationToffoli(Math.ceil(rows / block), controlled) + oneHotToffoli(block);
}

/** ANDs of turning log₂k bits into k flags: k − 1 − log₂k (each doubling saves one by the sum rule). */
export function oneHotToffoli(block: number): number {
  return block - 1 - Math.log2(block);
}

/** Wires the look-up holds until it is erased: k copies of the output. */
export function lookUpWires(width: number, block: number): number {
  return width * block;
}

/**
 * |l⟩|0⟩ → |l⟩|table row l⟩, with `block` = k = 2^j rows read at once and the wanted one swapped to the front
 * (select-swap with clean wires). The adjoint is the measurement-based erasure with block `erasureBlock`.
 *
 * @param address - lowest bit first; must hold a value below `table.rows`.
 * @param output - k·width wires in |0⟩: the row comes out in the first `width`, the rest holds other rows until
 *   the erasure.
 */
export function lookUp(
  address: readonly number[],
  output: readonly number[],
  table: Table,
  block: number,
  erasureBlock: number,
  control: number | null = null,
): Operation {
  const { rows, width } = table;
  if (output.length !== block * width) {
    throw new RangeError(`a look-up of ${width} bits in blocks of ${block} needs ${block * width} wires`);
  }
  const lowBits = Math.log2(block);
  const low = address.slice(0, lowBits);
  const high = address.slice(lowBits);
  const blocks = Math.ceil(rows / block);
  const write = unaryIteration(high, blocks, control, (machine, index, flag) => {
    for (let j = 0; j < block; j++) {
      const row = index * block + j;
      if (row >= rows) break;
      for (let b = 0; b < width; b++) {
        if (table.bit(row, b)) machine.gate('CX', flag, output[j * width + b]!);
      }
    }
  });
  return {
    run(machine) {
      write.run(machine);
      selectBlock(machine, low, output, width);
    },
    runAdjoint(machine) {
      erase(machine, address, output, rows, placedTable(table, block), erasureBlock, control);
    },
  };
}

/** Brings copy number `low` to the front: Σ over bits of 2^bit·width controlled swaps, width(k−1) in all. */
function selectBlock(
  machine: Machine,
  low: readonly number[],
  output: readonly number[],
  width: number,
): void {
  for (let bit = low.length - 1; bit >= 0; bit--) {
    const half = 2 ** bit;
    for (let j = 0; j < half; j++) {
      for (let b = 0; b < width; b++) {
        controlledSwap(machine, low[bit]!, output[j * width + b]!, output[(j + half) * width + b]!);
      }
    }
  }
}

/** One Toffoli: a and b change places where the control is 1. */
export function controlledSwap(machine: Machine, control: number, a: number, b: number): void {
  machine.gate('CX', b, a);
  machine.gate('CCX', control, a, b);
  machine.gate('CX', b, a);
}

/** What each of the k·width wires holds after the swaps, as a function of the address. */
function placedTable(table: Table, block: number): TableBit {
  const { rows, width, bit } = table;
  const lowBits = Math.log2(block);
  return (row, position) => {
    let copy = Math.floor(position / width);
    // Undo the swaps: the last one applied (bit 0) comes first.
    const low = row % block;
    for (let b = 0; b < lowBits; b++) {
      const half = 2 ** b;
      if (((low >> b) & 1) === 1 && copy < 2 * half) copy = copy < half ? copy + half : copy - half;
    }
    const source = row - low + copy;
    return source < rows && bit(source, position % width);
  };
}

/**
 * Measures every output wire in the X basis, which leaves the phase (−1)^{outcomes · content(l)}, and takes that
 * phase back: flags of the low address bits are paired with flags of the high ones in CZ gates.
 */
function erase(
  machine: Machine,
  address: readonly number[],
  output: readonly number[],
  rows: number,
  content: TableBit,
  block: number,
  control: number | null,
): void {
  const outcomes = output.map((wire) => machine.measureX(wire));
  const lowBits = Math.log2(block);
  const low = oneHot(address.slice(0, lowBits));
  const flags = low.begin(machine);
  const phases = unaryIteration(
    address.slice(lowBits),
    Math.ceil(rows / block),
    control,
    (m, index, flag) => {
      for (let j = 0; j < block && index * block + j < rows; j++) {
        for (let b = 0; b < output.length; b++) {
          if (!content(index * block + j, b)) continue;
          if (block === 1) m.gate('Z', flag, -1, -1, outcomes[b]!);
          else m.gate('CZ', flag, flags[j]!, -1, outcomes[b]!);
        }
      }
    },
  );
  phases.run(machine);
  low.end(machine);
}

/** Flags of all 2^j values of j bits. Doubling m flags costs m − 1 ANDs: the last product follows by the sum rule. */
function oneHot(bits: readonly number[]): { begin(m: Machine): number[]; end(m: Machine): void } {
  const flags: number[] = [];
  return {
    begin(machine) {
      for (const [level, bit] of bits.entries()) {
        const upper = machine.allocateRegister(2 ** level);
        if (level === 0) {
          flags.push(machine.allocate());
          machine.gate('X', flags[0]!);
        }
        const last = upper.length - 1;
        machine.gate('CX', bit, upper[last]!);
        for (let j = 0; j < last; j++) {
          machine.gate('AND', flags[j]!, bit, upper[j]!);
          machine.gate('CX', upper[j]!, upper[last]!);
        }
        for (let j = 0; j <= last; j++) machine.gate('CX', upper[j]!, flags[j]!);
        flags.push(...upper);
      }
      return flags;
    },
    end(machine) {
      for (let level = bits.length - 1; level >= 0; level--) {
        const bit = bits[level]!;
        const upper = flags.splice(2 ** level);
        const last = upper.length - 1;
        for (let j = last; j >= 0; j--) machine.gate('CX', upper[j]!, flags[j]!);
        for (let j = last - 1; j >= 0; j--) {
          machine.gate('CX', upper[j]!, upper[last]!);
          machine.gate('UNAND', flags[j]!, bit, upper[j]!);
        }
        machine.gate('CX', bit, upper[last]!);
        if (level === 0) {
          machine.gate('X', flags[0]!);
          machine.releaseRegister(upper);
          machine.releaseRegister(flags.splice(0));
        } else machine.releaseRegister(upper);
      }
    },
  };
}

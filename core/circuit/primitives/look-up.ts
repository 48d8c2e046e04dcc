import type { Machine } from '../gates/machine';
import type { Operation } from '../gates/operation';
import { unaryIteration, unaryIterationToffoli, unaryIterationWires } from './unary-iteration';

/** A table whose rows stand at ascending addresses, gaps allowed. */
export interface Table {
  readonly addresses: Uint32Array;
  /** Output bits per row. */
  readonly width: number;
  /** Content of the row at an address; asked for listed addresses only. */
  readonly bit: (address: number, bit: number) => boolean;
}

/** How a table is read: k = 2^j rows at a time, and erased with a block of its own. */
export interface Blocks {
  readonly read: number;
  readonly erase: number;
  /** Bits at a time through borrowed wires, for k ≥ 2; undefined: through clean ones. See borrowed-look-up.ts. */
  readonly slice?: number;
}

/**
 * Toffoli of a look-up that visits `blocks` blocks of k rows: blocks − 2 for the iteration (−1 with a control; 0
 * for at most two without one) and b(k−1) for the swaps that bring the wanted row to the front. Without gaps
 * blocks = ⌈L/k⌉. G. H. Low, V. Kliuchnikov, L. Schaeffer, arXiv:1812.00954; D. W. Berry et al., Quantum 3, 208
 * (2019), who write the iteration as ⌈L/k⌉.
 */
export function lookUpToffoli(blocks: number, width: number, block: number, controlled = false): number {
  return unaryIterationToffoli(blocks, controlled) + width * (block - 1);
}

/**
 * Toffoli of the measurement-based erasure: the iteration over the blocks, and k − 1 − log₂k for the flags of the
 * low address bits. Berry et al. 2019, Appendix C, with the iteration written as ⌈L/k⌉ and the flags as k.
 */
export function erasureToffoli(blocks: number, block: number, controlled = false): number {
  return unaryIterationToffoli(blocks, controlled) + oneHotToffoli(block);
}

/** ANDs of turning log₂k bits into k flags: k − 1 − log₂k (each doubling saves one by the sum rule). */
export function oneHotToffoli(block: number): number {
  return block - 1 - Math.log2(block);
}

/** Number of blocks of k addresses that hold any of the ascending addresses, which must not change any more. */
export function countBlocks(addresses: Uint32Array, block: number): number {
  let counts = blockCounts.get(addresses);
  if (!counts) {
    counts = countAllBlocks(addresses);
    blockCounts.set(addresses, counts);
  }
  return counts[Math.log2(block)]!;
}

/** Choosing a block asks for every size: all are counted at once. */
const blockCounts = new WeakMap<Uint32Array, Uint32Array>();

/** Of every block size 2^0 … 2^32: two neighbours are in different blocks up to the highest bit that they differ in. */
function countAllBlocks(addresses: Uint32Array): Uint32Array {
  const counts = new Uint32Array(33);
  for (let i = 1; i < addresses.length; i++) counts[32 - Math.clz32(addresses[i]! ^ addresses[i - 1]!)]!++;
  let sum = addresses.length > 0 ? 1 : 0;
  for (let bits = 32; bits >= 0; bits--) {
    const steps = counts[bits]!;
    counts[bits] = sum;
    sum += steps;
  }
  return counts;
}

/** Wires lent while a look-up runs, besides its k·b output wires. */
export function lookUpWires(addresses: Uint32Array, block: number, controlled = false): number {
  return unaryIterationWires(blockAddresses(addresses, block), controlled);
}

/** Wires lent while an erasure runs: the flags of the low address bits and the iteration. */
export function erasureWires(addresses: Uint32Array, block: number, controlled = false): number {
  return (block === 1 ? 0 : block) + lookUpWires(addresses, block, controlled);
}

/** Addresses of the blocks of k that hold any of the ascending addresses. */
export function blockAddresses(addresses: Uint32Array, block: number): Uint32Array {
  const shift = Math.log2(block);
  const found = new Uint32Array(addresses.length);
  let count = 0;
  for (const address of addresses) {
    const high = address >>> shift;
    if (count === 0 || found[count - 1] !== high) found[count++] = high;
  }
  return found.subarray(0, count);
}

/**
 * |l⟩|0⟩ → |l⟩|row at l⟩, with k = `blocks.read` rows read at once and the wanted one swapped to the front
 * (select-swap with clean wires). The adjoint is the measurement-based erasure.
 *
 * @param register - address, lowest bit first; must hold one of the table's addresses.
 * @param output - k·width wires in |0⟩: the row comes out in the first `width`, the rest holds other rows until
 *   the erasure.
 * @param flags - where the erasure keeps its flags: in wires of its own, or in the output just measured if that has
 *   enough.
 */
export function lookUp(
  register: readonly number[],
  output: readonly number[],
  table: Table,
  blocks: Blocks,
  control: number | null = null,
  flags: 'fresh' | 'in output' = 'fresh',
): Operation {
  return {
    run: (machine) => read(machine, register, output, table, blocks.read, control),
    runAdjoint(machine) {
      erase(
        machine,
        register,
        output,
        table.addresses,
        contentAfterSwaps(table, blocks.read),
        blocks.erase,
        control,
        flags === 'in output' ? output : [],
      );
    },
  };
}

function read(
  machine: Machine,
  register: readonly number[],
  output: readonly number[],
  table: Table,
  block: number,
  control: number | null,
): void {
  const { addresses, width } = table;
  if (output.length !== block * width) {
    throw new RangeError(`a look-up of ${width} bits in blocks of ${block} needs ${block * width} wires`);
  }
  const lowBits = Math.log2(block);
  const isListed = membership(addresses);
  unaryIteration(register.slice(lowBits), blockAddresses(addresses, block), control, (m, high, flag) => {
    if (m.skipsClifford) {
      m.skip((block * width) / 2);
      return;
    }
    for (let j = 0; j < block; j++) {
      const address = high * block + j;
      if (!isListed(address)) continue;
      for (let b = 0; b < width; b++) {
        if (table.bit(address, b)) m.gate('CX', flag, output[j * width + b]!);
      }
    }
  }).run(machine);
  // Copy number `low` to the front: bit by bit, 2^bit·width controlled swaps, width(k − 1) in all.
  for (let bit = lowBits - 1; bit >= 0; bit--) {
    for (let i = 0; i < 2 ** bit * width; i++) {
      controlledSwap(machine, register[bit]!, output[i]!, output[i + 2 ** bit * width]!);
    }
  }
}

/** Whether an address is in the list; millions of them are not gathered unless someone asks. */
export function membership(addresses: Uint32Array): (address: number) => boolean {
  let listed: Set<number> | null = null;
  return (address) => {
    listed ??= new Set(addresses);
    return listed.has(address);
  };
}

/** One Toffoli: a and b change places where the control is 1. */
export function controlledSwap(machine: Machine, control: number, a: number, b: number): void {
  machine.gate('CX', b, a);
  machine.gate('CCX', control, a, b);
  machine.gate('CX', b, a);
}

/** What each of the k·width wires holds after the swaps, as a function of the address. */
export function contentAfterSwaps(
  table: Table,
  block: number,
): (address: number, position: number) => boolean {
  const { width, bit } = table;
  const lowBits = Math.log2(block);
  const isListed = membership(table.addresses);
  return (address, position) => {
    let copy = Math.floor(position / width);
    // Undo the swaps: the last one applied (bit 0) comes first.
    for (let b = 0; b < lowBits; b++) {
      const half = 2 ** b;
      if (((address >>> b) & 1) === 1 && copy < 2 * half) copy = copy < half ? copy + half : copy - half;
    }
    const source = address - (address % block) + copy;
    return isListed(source) && bit(source, position % width);
  };
}

/**
 * Measures every output wire in the X basis, which leaves the phase (−1)^{outcomes · content(address)}, and takes
 * that phase back: flags of the low address bits are paired with flags of the high ones in CZ gates.
 *
 * @param lent - wires in |0⟩ once the output is measured, used for the flags if there are enough.
 */
export function erase(
  machine: Machine,
  register: readonly number[],
  output: readonly number[],
  addresses: Uint32Array,
  content: (address: number, position: number) => boolean,
  block: number,
  control: number | null,
  lent: readonly number[] = [],
): void {
  const outcomes = machine.measureRegisterX(output);
  const lowBits = Math.log2(block);
  const low = oneHot(register.slice(0, lowBits), lent.length >= block ? lent : null);
  const flags = low.begin(machine);
  const isListed = membership(addresses);
  unaryIteration(register.slice(lowBits), blockAddresses(addresses, block), control, (m, high, flag) => {
    if (m.skipsClifford) {
      m.skip((block * output.length) / 2);
      return;
    }
    for (let j = 0; j < block; j++) {
      const address = high * block + j;
      if (!isListed(address)) continue;
      for (let b = 0; b < output.length; b++) {
        if (!content(address, b)) continue;
        if (block === 1) m.gate('Z', flag, -1, -1, outcomes[b]!);
        else m.gate('CZ', flag, flags[j]!, -1, outcomes[b]!);
      }
    }
  }).run(machine);
  low.end(machine);
}

/**
 * Flags of all 2^j values of j bits. Doubling m flags costs m − 1 ANDs: the last product follows by the sum rule.
 *
 * @param lent - 2^j wires in |0⟩ to put them in, or null: wires of their own.
 */
export function oneHot(
  bits: readonly number[],
  lent: readonly number[] | null,
): { begin(m: Machine): number[]; end(m: Machine): void } {
  const flags: number[] = [];
  const take = (machine: Machine, size: number) =>
    lent === null ? machine.allocateRegister(size) : lent.slice(flags.length, flags.length + size);
  const giveBack = (machine: Machine, wires: readonly number[]) => {
    if (lent === null) machine.releaseRegister(wires);
  };
  return {
    begin(machine) {
      for (const [level, bit] of bits.entries()) {
        if (level === 0) {
          flags.push(...take(machine, 1));
          machine.gate('X', flags[0]!);
        }
        const upper = take(machine, 2 ** level);
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
        giveBack(machine, upper);
        if (level === 0) {
          machine.gate('X', flags[0]!);
          giveBack(machine, flags.splice(0));
        }
      }
    },
  };
}

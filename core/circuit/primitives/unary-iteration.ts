import type { Machine } from '../gates/machine';
import type { Operation } from '../gates/operation';

/** Number of address bits for `count` items, ⌈log₂ count⌉; 0 for one item. */
export function addressBits(count: number): number {
  return count <= 1 ? 0 : 32 - Math.clz32(count - 1);
}

/** 0 … count − 1, the addresses of a table without gaps. */
export function firstAddresses(count: number): Uint32Array {
  return Uint32Array.from({ length: count }, (_, i) => i);
}

/**
 * Toffoli count of unary iteration over `count` ≥ 1 addresses: count − 1 with a control, count − 2 without (and 0
 * for one or two). Each branching of the binary tree costs one AND; without a control the first costs none. Gaps
 * between the addresses are free, since a node with one child does not branch.
 * R. Babbush et al., Phys. Rev. X 8, 041015 (2018), Sec. III A; the remark on gaps is ours.
 */
export function unaryIterationToffoli(count: number, controlled: boolean): number {
  return controlled ? count - 1 : Math.max(0, count - 2);
}

/**
 * Wires that unary iteration lends at the deepest point: the branchings above a leaf, one less without a control,
 * or the constant wire of a table with one row.
 */
export function unaryIterationWires(addresses: Uint32Array, controlled: boolean): number {
  if (addresses.length === 1) return controlled ? 0 : 1;
  const depth = (bit: number, from: number, to: number): number => {
    let level = bit;
    while (to - from > 1) {
      const middle = firstWithBit(addresses, level, from, to);
      if (middle > from && middle < to) {
        return 1 + Math.max(depth(level - 1, from, middle), depth(level - 1, middle, to));
      }
      level--;
    }
    return 0;
  };
  return depth(31, 0, addresses.length) - (controlled ? 0 : 1);
}

/** Position of the first of addresses[from…to) whose bit is set: they are sorted and agree above it. */
function firstWithBit(addresses: Uint32Array, bit: number, from: number, to: number): number {
  let low = from;
  let high = to;
  while (low < high) {
    const middle = (low + high) >> 1;
    if ((addresses[middle]! >>> bit) & 1) high = middle;
    else low = middle + 1;
  }
  return low;
}

/** What happens at one address; `flag` is 1 exactly when the register holds it (and the control is 1). */
export type Leaf = (machine: Machine, address: number, flag: number) => void;

/**
 * Runs `leaf` once for each of the ascending `addresses` with a wire that flags the address. The register (lowest
 * bit first) must hold one of the listed addresses: others are not blocked but flag a neighbour.
 *
 * @param control - wire that switches the whole iteration, or null.
 * @param leafAdjoint - used instead of `leaf` by the adjoint; leaves must commute.
 */
export function unaryIteration(
  register: readonly number[],
  addresses: Uint32Array,
  control: number | null,
  leaf: Leaf,
  leafAdjoint: Leaf = leaf,
): Operation {
  const last = addresses[addresses.length - 1];
  if (last === undefined || last >= 2 ** register.length) {
    throw new RangeError(`address ${last} does not fit ${register.length} bits`);
  }
  const from = (use: Leaf) => (machine: Machine) => {
    const walk = new Walk(machine, register, addresses, use);
    if (control !== null) walk.branch(register.length, 0, addresses.length, control);
    else walk.root();
  };
  return { run: from(leaf), runAdjoint: from(leafAdjoint) };
}

class Walk {
  readonly #machine: Machine;
  readonly #register: readonly number[];
  readonly #addresses: Uint32Array;
  readonly #leaf: Leaf;

  constructor(machine: Machine, register: readonly number[], addresses: Uint32Array, leaf: Leaf) {
    this.#machine = machine;
    this.#register = register;
    this.#addresses = addresses;
    this.#leaf = leaf;
  }

  /** Without a control the first branching needs no AND: its flags are the bit and its complement. */
  root(): void {
    const machine = this.#machine;
    const count = this.#addresses.length;
    for (let level = this.#register.length; level > 0; level--) {
      const middle = firstWithBit(this.#addresses, level - 1, 0, count);
      if (middle === 0 || middle === count) continue;
      const bit = this.#register[level - 1]!;
      machine.gate('X', bit);
      this.branch(level - 1, 0, middle, bit);
      machine.gate('X', bit);
      this.branch(level - 1, middle, count, bit);
      return;
    }
    // A single address: leaves still expect a flag, a wire that is 1 throughout.
    const one = machine.allocate();
    machine.gate('X', one);
    this.#leaf(machine, this.#addresses[0]!, one);
    machine.gate('X', one);
    machine.release(one);
  }

  /** Addresses number from…to−1, which agree in all bits from `level` upward, under the flag of their node. */
  branch(level: number, from: number, to: number, flag: number): void {
    if (to - from === 1) {
      this.#leaf(this.#machine, this.#addresses[from]!, flag);
      return;
    }
    const middle = firstWithBit(this.#addresses, level - 1, from, to);
    if (middle === from || middle === to) {
      this.branch(level - 1, from, to, flag);
      return;
    }
    // flag·¬bit for the lower half; a CNOT from the flag turns it into flag·bit for the upper one.
    const machine = this.#machine;
    const bit = this.#register[level - 1]!;
    const child = machine.allocate();
    machine.gate('X', bit);
    machine.gate('AND', flag, bit, child);
    machine.gate('X', bit);
    this.branch(level - 1, from, middle, child);
    machine.gate('CX', flag, child);
    this.branch(level - 1, middle, to, child);
    machine.gate('UNAND', flag, bit, child);
    machine.release(child);
  }
}

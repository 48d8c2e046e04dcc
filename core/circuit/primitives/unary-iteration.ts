import type { Machine } from '../gates/machine';
import type { Operation } from '../gates/operation';

/** Number of address bits for `count` items, ⌈log₂ count⌉; 0 for one item. */
export function addressBits(count: number): number {
  return count <= 1 ? 0 : 32 - Math.clz32(count - 1);
}

/**
 * Toffoli count of unary iteration over `count` ≥ 1 items: count − 1 with a control, count − 2 without (and 0 for
 * one or two items). Each branching of the binary tree costs one AND; without a control the root costs none.
 * R. Babbush et al., Phys. Rev. X 8, 041015 (2018), Sec. III A.
 */
export function unaryIterationToffoli(count: number, controlled: boolean): number {
  return controlled ? count - 1 : Math.max(0, count - 2);
}

/** Wires that unary iteration holds besides address and control: one for each level that branches. */
export function unaryIterationScratch(count: number, controlled: boolean): number {
  return Math.max(0, addressBits(count) - (controlled ? 0 : 1));
}

/** What happens at item `index`; `flag` is 1 exactly when the address holds that index (and the control is 1). */
export type Leaf = (machine: Machine, index: number, flag: number) => void;

/**
 * Runs `leaf` once for each index 0 … count−1 with a wire that flags the index. The address (lowest bit first)
 * must hold a value below `count`: branches beyond it are left out, not blocked. Leaves must commute where the
 * adjoint is to be the inverse; `leafAdjoint` replaces `leaf` there.
 *
 * @param control - wire that switches the whole iteration, or null.
 */
export function unaryIteration(
  address: readonly number[],
  count: number,
  control: number | null,
  leaf: Leaf,
  leafAdjoint: Leaf = leaf,
): Operation {
  if (count < 1 || count > 2 ** address.length) {
    throw new RangeError(`${count} items do not fit ${address.length} address bits`);
  }
  const from = (use: Leaf) => (machine: Machine) => {
    if (control === null) withoutControl(machine, address, count, use);
    else branch(machine, address, address.length, 0, count, control, use);
  };
  return { run: from(leaf), runAdjoint: from(leafAdjoint) };
}

/** Items [first, first + 2^level) ∩ [0, count) below a node whose flag is `flag`. */
function branch(
  machine: Machine,
  address: readonly number[],
  level: number,
  first: number,
  count: number,
  flag: number,
  leaf: Leaf,
): void {
  if (level === 0) {
    leaf(machine, first, flag);
    return;
  }
  const bit = address[level - 1]!;
  const middle = first + 2 ** (level - 1);
  if (middle >= count) {
    branch(machine, address, level - 1, first, count, flag, leaf);
    return;
  }
  // flag·¬bit for the lower half; a CNOT from the flag turns it into flag·bit for the upper one.
  const child = machine.allocate();
  machine.gate('X', bit);
  machine.gate('AND', flag, bit, child);
  machine.gate('X', bit);
  branch(machine, address, level - 1, first, count, child, leaf);
  machine.gate('CX', flag, child);
  branch(machine, address, level - 1, middle, count, child, leaf);
  machine.gate('UNAND', flag, bit, child);
  machine.release(child);
}

/** The root needs no AND: its two flags are the top address bit and its complement. */
function withoutControl(machine: Machine, address: readonly number[], count: number, leaf: Leaf): void {
  const levels = addressBits(count);
  if (levels === 0) {
    // A wire that is 1 throughout: leaves expect one.
    const one = machine.allocate();
    machine.gate('X', one);
    leaf(machine, 0, one);
    machine.gate('X', one);
    machine.release(one);
    return;
  }
  const top = address[levels - 1]!;
  machine.gate('X', top);
  branch(machine, address, levels - 1, 0, 2 ** (levels - 1), top, leaf);
  machine.gate('X', top);
  branch(machine, address, levels - 1, 2 ** (levels - 1), count, top, leaf);
}

import type { Operation } from '../gates/operation';
import {
  borrowedLookUp,
  borrowedLookUpToffoli,
  borrowedLookUpWires,
  borrowedWires,
} from './borrowed-look-up';
import { type Blocks, contentAfterSwaps, lookUp, lookUpToffoli, lookUpWires, type Table } from './look-up';

/**
 * Reading a table in whichever way its blocks say: row by row, k rows side by side on clean wires, or through k − 1
 * words of borrowed wires.
 */
export function readTable(
  register: readonly number[],
  output: readonly number[],
  table: Table,
  how: Blocks,
  idle: readonly number[],
  control: number | null = null,
  flags: 'fresh' | 'in output' = 'fresh',
): Operation {
  const { read: block, erase, slice } = how;
  if (slice === undefined) return lookUp(register, output, table, how, control, flags);
  const wires = borrowedWires({ block, slice });
  if (idle.length < wires) throw new RangeError(`${wires} wires to be borrowed, ${idle.length} are idle`);
  const borrowed = idle.slice(0, wires);
  return borrowedLookUp(register, output, borrowed, table, { block, slice }, erase, control, flags);
}

/** Wires that the result takes until it is erased. */
export function outputWires(width: number, { read, slice }: Blocks): number {
  return slice === undefined ? width * read : width;
}

/** What those wires hold, as a function of the address. */
export function contentAfterReading(
  table: Table,
  { read, slice }: Blocks,
): (address: number, position: number) => boolean {
  return slice === undefined ? contentAfterSwaps(table, read) : table.bit;
}

/** @param blocks - blocks of k rows that are visited. */
export function readToffoli(blocks: number, width: number, how: Blocks, controlled = false): number {
  const { read: block, slice } = how;
  return slice === undefined
    ? lookUpToffoli(blocks, width, block, controlled)
    : borrowedLookUpToffoli(blocks, width, { block, slice }, controlled);
}

/** Wires lent in |0⟩ while it runs, besides the output. */
export function readWires(addresses: Uint32Array, { read, slice }: Blocks, controlled = false): number {
  return slice === undefined
    ? lookUpWires(addresses, read, controlled)
    : borrowedLookUpWires(addresses, read, controlled);
}

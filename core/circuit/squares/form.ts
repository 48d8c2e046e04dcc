import type { Machine } from '../gates/machine';
import type { Operation } from '../gates/operation';
import type { Blocks } from '../primitives/look-up';
import type { ItemDataWires, ItemFacts } from './item-data';
import type { WeightTables } from './tables';

/** Blocks of the tables that PREPARE reads. */
export interface SquaresBlocks {
  readonly outer: Blocks;
  readonly items: Blocks;
  readonly inner: Blocks;
}

/** Wires that the outer PREPARE puts into superposition. */
export interface PrepareWires {
  /** Number of the item, or of the entry where there are products; lowest bit first. */
  readonly item: readonly number[];
  /** Which of the two faces of an item; null where none has two, or it is a datum of the entry. */
  readonly face: number | null;
  /** Which of the two squares of a paired item, or which vector of a product comes first; null without such. */
  readonly square: number | null;
  readonly outerUniform: readonly number[];
}

/** Index registers that live through a walk step: the block encoding is projected on their zero state. */
export interface SquaresWires extends PrepareWires {
  readonly row: readonly number[];
  readonly innerUniform: readonly number[];
  /** Wires in the plus state beside the row number: spin, Majorana kind, partner. */
  readonly plus: readonly number[];
  /** Stand-ins of the first of these in the second use of a product; empty where there are none. */
  readonly standIns: readonly number[];
}

/** What a form of encoding adds to the squares: flags of its items, and SELECT of one row. */
export interface SquaresForm extends ItemFacts {
  readonly blocks: SquaresBlocks;
  readonly system: readonly number[];
  /** What goes around the square of an item, which it may lend further wires. */
  readonly aroundItem: (item: ItemWires, square: (extra: readonly number[]) => Operation) => Operation;
  /** SELECT of one row: its adjoint applies the adjoint. */
  readonly product: (use: ProductUse) => Operation;
}

/** Data of the item that a form may look at. */
export type ItemWires = Pick<ItemDataWires, 'paired' | 'isSquare' | 'isTwofold' | 'face' | 'flags'>;

export interface ProductUse extends ItemWires {
  /** Of the row, lowest bit first. */
  readonly address: readonly number[];
  /** The second use, which must do nothing where `isTwofold` is 0. */
  readonly second: boolean;
  /** What the form lent itself. */
  readonly extra: readonly number[];
}

/** Allocates the wires of the outer PREPARE alone. */
export function prepareWires(weights: WeightTables, hasPaired: boolean, machine: Machine): PrepareWires {
  const allocate = (size: number, name: string) => machine.allocateRegister(size, name);
  return {
    item: allocate(weights.itemBits, 'item'),
    face: allocate(weights.outerBits - weights.itemBits, 'face')[0] ?? null,
    square: allocate(hasPaired || weights.places ? 1 : 0, 'square')[0] ?? null,
    outerUniform: allocate(weights.keepBits.keep, 'outer uniform'),
  };
}

/**
 * @param plus - names of the wires in the plus state
 * @param standIns - names of those that take the place of the first of these in the second use of a product
 */
export function squaresWires(
  weights: WeightTables,
  hasPaired: boolean,
  plus: readonly string[],
  machine: Machine,
  standIns: readonly string[] = [],
): SquaresWires {
  const each = (names: readonly string[]) => names.flatMap((name) => machine.allocateRegister(1, name));
  return {
    ...prepareWires(weights, hasPaired, machine),
    row: machine.allocateRegister(weights.rowBits, 'row'),
    innerUniform: machine.allocateRegister(weights.keepBits.innerKeep, 'inner uniform'),
    plus: each(plus),
    standIns: each(weights.places ? standIns : []),
  };
}

/** Wires whose all-zero state the block encoding is projected on. */
export function squaresAncillas(wires: SquaresWires): number[] {
  const single = [wires.face, wires.square].filter((w) => w !== null);
  return [
    ...wires.item,
    ...single,
    ...wires.outerUniform,
    ...wires.row,
    ...wires.innerUniform,
    ...wires.plus,
    ...wires.standIns,
  ];
}

/** Wires that a look-up addressed by `address` may borrow: all that live through the step, but those. */
export function idleWires(
  system: readonly number[],
  wires: SquaresWires,
  address: readonly (number | null)[],
): number[] {
  return [...system, ...squaresAncillas(wires)].filter((wire) => !address.includes(wire));
}

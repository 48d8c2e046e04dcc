import type { Machine } from '../gates/machine';
import { gate, nothing, type Operation, repeat, scratch, sequence, span, within } from '../gates/operation';
import { aliasSampling } from '../primitives/alias-sampling';
import { borrowedWires } from '../primitives/borrowed-look-up';
import type { Blocks } from '../primitives/look-up';
import { outputWires, readTable } from '../primitives/reading';
import { controlledHadamard, flipZeros, hadamards } from '../primitives/reflection';
import { firstAddresses } from '../primitives/unary-iteration';
import type { WeightTables } from './tables';

/** Blocks of the tables that PREPARE reads. */
export interface SquaresBlocks {
  readonly outer: Blocks;
  readonly items: Blocks;
  readonly inner: Blocks;
}

/** Wires that the outer PREPARE puts into superposition. */
export interface PrepareWires {
  /** Item number, lowest bit first. */
  readonly item: readonly number[];
  /** Which of the two faces of an item; null where none has two. */
  readonly face: number | null;
  /** Which of the two squares of a paired item; null where no item is paired. */
  readonly square: number | null;
  readonly outerUniform: readonly number[];
}

/** Index registers that live through a walk step: the block encoding is projected on their zero state. */
export interface SquaresWires extends PrepareWires {
  readonly row: readonly number[];
  readonly innerUniform: readonly number[];
  /** Wires in the plus state beside the row number: spin, Majorana kind, partner. */
  readonly plus: readonly number[];
}

/** Item data beside the number of row bits: three flags that every form has, then the form's own. */
export const COMMON_FLAGS = 3;

/** What a form of encoding adds to the squares: flags of its items, and SELECT of one row. */
export interface SquaresForm {
  readonly weights: WeightTables;
  readonly blocks: SquaresBlocks;
  readonly system: readonly number[];
  /** Items that are squared; the others are the one-body part, applied once. */
  readonly isSquare: (t: number) => boolean;
  readonly isNegative: (t: number) => boolean;
  readonly isPaired: (t: number) => boolean;
  /** Flags of an item of the form's own; every item has as many. */
  readonly flags: (t: number) => readonly boolean[];
  /** What goes around the square of an item, which it may lend further wires. */
  readonly aroundItem: (item: ItemWires, square: (extra: readonly number[]) => Operation) => Operation;
  /** SELECT of one row: its adjoint applies the adjoint. */
  readonly product: (use: ProductUse) => Operation;
}

/** Data of the item. */
export interface ItemWires {
  readonly paired: number;
  /** 0 for the one-body part. */
  readonly isSquare: number;
  readonly flags: readonly number[];
}

export interface ProductUse extends ItemWires {
  /** Of the row, lowest bit first. */
  readonly address: readonly number[];
  /** The use after the inner reflection, which must do nothing where `isSquare` is 0. */
  readonly second: boolean;
  /** What the form lent itself. */
  readonly extra: readonly number[];
}

/** Allocates the wires of the outer PREPARE alone. */
export function prepareWires(weights: WeightTables, hasPaired: boolean, machine: Machine): PrepareWires {
  const allocate = (size: number, name: string) => machine.allocateRegister(size, name);
  return {
    item: allocate(weights.itemBits, 'item'),
    face: allocate(weights.hasFaces ? 1 : 0, 'face')[0] ?? null,
    square: allocate(hasPaired ? 1 : 0, 'square')[0] ?? null,
    outerUniform: allocate(weights.keepBits.keep, 'outer uniform'),
  };
}

/** @param plus - names of the wires in the plus state. */
export function squaresWires(
  weights: WeightTables,
  hasPaired: boolean,
  plus: readonly string[],
  machine: Machine,
): SquaresWires {
  return {
    ...prepareWires(weights, hasPaired, machine),
    row: machine.allocateRegister(weights.rowBits, 'row'),
    innerUniform: machine.allocateRegister(weights.keepBits.innerKeep, 'inner uniform'),
    plus: plus.flatMap((name) => machine.allocateRegister(1, name)),
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

/**
 * U with (⟨0|⊗1) U (|0⟩⊗1) = (H − c)/λ on the system: PREPARE† · SELECT · PREPARE with the squares of the items
 * inside SELECT. Everything allocated inside returns to |0⟩.
 */
export function squaresBlockEncoding(form: SquaresForm, wires: SquaresWires): Operation {
  return scratch(outerScratch(form), (lent) =>
    within(
      outerPrepare(form, wires, lent, idleWires(form.system, wires, [...wires.item, wires.face])),
      squaresItem(form, wires),
    ),
  );
}

type Prepared = Pick<SquaresForm, 'weights' | 'blocks'>;

/** Wires that the outer PREPARE leaves in use: alternate and keep value, and the carries of their comparison. */
export function outerScratch({ weights, blocks }: Prepared): number {
  const { keep } = weights.keepBits;
  return outputWires(weights.outer.indexBits + keep, blocks.outer) + keep;
}

/** Wires that the look-up of the outer PREPARE borrows. */
export const outerBorrows = ({ outer: { read, slice } }: Pick<SquaresBlocks, 'outer'>): number =>
  slice === undefined ? 0 : borrowedWires({ block: read, slice });

/**
 * Puts items, faces and squares into superposition with the square roots of their weights as amplitudes.
 *
 * @param lent - `outerScratch` wires in |0⟩, which stay entangled with the rest until the adjoint.
 * @param idle - wires that its look-up may borrow.
 */
export function outerPrepare(
  { weights, blocks }: Prepared,
  wires: PrepareWires,
  lent: readonly number[],
  idle: readonly number[],
): Operation {
  const { outer, keepBits } = weights;
  const index = [...wires.item, ...(wires.face === null ? [] : [wires.face])];
  const sampled = aliasSampling(
    index,
    {
      uniform: wires.outerUniform,
      output: lent.slice(0, -keepBits.keep),
      carries: lent.slice(-keepBits.keep),
      idle,
    },
    {
      address: index,
      addresses: firstAddresses(2 ** index.length),
      alternate: (i) => outer.alternate[i]!,
      keep: (i) => outer.keep[i]!,
    },
    blocks.outer,
  );
  return span(
    'outer PREPARE',
    'prepare',
    sequence(hadamards(index), wires.square === null ? nothing : hadamards([wires.square]), sampled),
  );
}

/** One step of the walk: the block encoding and the reflection about the ancillas' zero state. */
export function squaresWalkStep(form: SquaresForm, wires: SquaresWires, control: number | null): Operation {
  return sequence(
    squaresBlockEncoding(form, wires),
    span(
      'reflection of the walk',
      'reflections',
      flipZeros(squaresAncillas(wires), control === null ? [] : [control]),
    ),
  );
}

/** Loads what depends on the item alone, applies the item, and takes the data back. */
export function squaresItem(form: SquaresForm, wires: SquaresWires): Operation {
  const { itemCount, rowBits, sizeBits } = form.weights;
  const data = Array.from({ length: itemCount }, (_, t) => [
    form.isNegative(t),
    form.isPaired(t),
    form.isSquare(t),
    ...form.flags(t),
  ]);
  const width = rowBits + data[0]!.length;
  const table = {
    addresses: firstAddresses(itemCount),
    width,
    bit: (t: number, b: number) => (b < rowBits ? sizeBits[t]! > b : data[t]![b - rowBits]!),
  };
  return scratch(outputWires(width, form.blocks.items), (output) => {
    const sizes = output.slice(0, rowBits);
    const [negative, paired, isSquare, ...flags] = output.slice(rowBits, width) as [number, number, number];
    const item: ItemWires = { paired, isSquare, flags };
    const apply = sequence(
      // 2|0⟩⟨0| − 1 is −1 times the flip.
      gate('Z', isSquare),
      gate('Z', negative),
      wires.square === null ? nothing : gate('CZ', paired, wires.square),
      form.aroundItem(item, (extra) => square(form, wires, sizes, item, extra)),
    );
    const idle = idleWires(form.system, wires, wires.item);
    const load = readTable(wires.item, output, table, form.blocks.items, idle);
    return within(span('item data', 'prepare', load), apply);
  });
}

/**
 * B₂†·R·B₁ with B = PREPARE†·SELECT·PREPARE over the rows of the item. For a square R = 2|0⟩⟨0| − 1 (up to sign)
 * and B₁ = B₂, which gives 2(M/Λ)² − 1 however the angles are rounded; for a one-body item R and the product in
 * B₂ are switched off.
 */
function square(
  form: SquaresForm,
  wires: SquaresWires,
  sizes: readonly number[],
  item: ItemWires,
  extra: readonly number[],
): Operation {
  const address = [...wires.row, ...wires.item];
  const use = (second: boolean) =>
    innerBlock(form, wires, sizes, form.product({ ...item, address, second, extra }));
  const zeros = [...wires.row, ...wires.innerUniform, ...wires.plus];
  const reflection = span('inner reflection', 'reflections', flipZeros(zeros, [item.isSquare]));
  const first = use(false);
  const second = use(true);
  return {
    run(machine) {
      first.run(machine);
      reflection.run(machine);
      second.runAdjoint(machine);
    },
    runAdjoint(machine) {
      second.run(machine);
      reflection.run(machine);
      first.runAdjoint(machine);
    },
  };
}

function innerBlock(
  form: SquaresForm,
  wires: SquaresWires,
  sizes: readonly number[],
  product: Operation,
): Operation {
  const { keepBits, rowBits, sizeBits, inner } = form.weights;
  const { innerKeep } = keepBits;
  const address = [...wires.row, ...wires.item, ...(wires.face === null ? [] : [wires.face])];
  const entries = new Map(
    inner.flatMap((table) =>
      Array.from(
        table.keep,
        (keep, j) => [table.base + j, { keep, alternate: table.alternate[j]! }] as const,
      ),
    ),
  );
  const allEqual = sizeBits.every((size) => size === rowBits);
  const uniform = allEqual
    ? hadamards(wires.row)
    : repeat(rowBits, (i) => controlledHadamard(sizes[i]!, wires.row[i]!));
  return scratch(outputWires(rowBits + innerKeep, form.blocks.inner) + innerKeep, (lent) => {
    const prepare = sequence(
      uniform,
      hadamards(wires.plus),
      aliasSampling(
        wires.row,
        {
          uniform: wires.innerUniform,
          output: lent.slice(0, -innerKeep),
          carries: lent.slice(-innerKeep),
          idle: idleWires(form.system, wires, address),
        },
        {
          address,
          addresses: Uint32Array.from(entries.keys()).sort(),
          alternate: (a) => entries.get(a)!.alternate,
          keep: (a) => entries.get(a)!.keep,
        },
        form.blocks.inner,
      ),
    );
    return within(span('inner PREPARE', 'prepare', prepare), product);
  });
}

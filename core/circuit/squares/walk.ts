import type { Machine } from '../gates/machine';
import { gate, nothing, type Operation, repeat, scratch, sequence, span, within } from '../gates/operation';
import { aliasData, aliasSampling } from '../primitives/alias-sampling';
import { borrowedWires } from '../primitives/borrowed-look-up';
import { type Blocks, controlledSwap } from '../primitives/look-up';
import { outputWires, readTable } from '../primitives/reading';
import { controlledHadamard, flipZeros, hadamards } from '../primitives/reflection';
import { firstAddresses } from '../primitives/unary-iteration';
import { type ItemDataWires, type ItemFacts, itemDataTable, itemDataWidth, itemDataWires } from './item-data';
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

/**
 * U with (⟨0|⊗1) U (|0⟩⊗1) = (H − c)/λ on the system: PREPARE† · SELECT · PREPARE with the squares of the items
 * inside SELECT. Everything allocated inside returns to |0⟩.
 */
export function squaresBlockEncoding(form: SquaresForm, wires: SquaresWires): Operation {
  const prepared = { ...form, facts: form };
  return scratch(outerScratch(prepared), (lent) =>
    within(
      outerPrepare(prepared, wires, lent, idleWires(form.system, wires, [...wires.item, wires.face])),
      squaresItem(form, wires, lent),
    ),
  );
}

/** What the outer PREPARE depends on; `facts` only where it reads the data of entries. */
type Prepared = Pick<SquaresForm, 'weights' | 'blocks'> & { readonly facts?: ItemFacts };

function factsOf({ facts }: Prepared): ItemFacts {
  if (!facts) throw new RangeError('entries with places are prepared together with their data');
  return facts;
}

/** Wires that the outer PREPARE leaves in use: alternate and keep value, and the carries of their comparison. */
export function outerScratch(prepared: Prepared): number {
  const { weights, blocks } = prepared;
  const { keep } = weights.keepBits;
  const read = weights.places
    ? 2 * itemDataWidth(weights, factsOf(prepared).flags(0).length)
    : weights.outer.indexBits;
  return outputWires(read + keep, blocks.outer) + keep;
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
  prepared: Prepared,
  wires: PrepareWires,
  lent: readonly number[],
  idle: readonly number[],
): Operation {
  const { weights, blocks } = prepared;
  const { outer, keepBits, places } = weights;
  const index = [...wires.item, ...(wires.face === null ? [] : [wires.face])];
  const sampled = places
    ? sequence(hadamards(wires.outerUniform), drawnData(prepared, wires, lent, idle))
    : aliasSampling(
        index,
        samplingWires(wires, lent, keepBits.keep, idle),
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

const samplingWires = (
  wires: PrepareWires,
  lent: readonly number[],
  keepBits: number,
  idle: readonly number[],
) => ({
  uniform: wires.outerUniform,
  output: lent.slice(0, -keepBits),
  carries: lent.slice(-keepBits),
  idle,
});

/** Brings the data of the entry that index and uniform number draw into the first of the lent wires. */
function drawnData(
  prepared: Prepared,
  wires: PrepareWires,
  lent: readonly number[],
  idle: readonly number[],
): Operation {
  const { outer, keepBits } = prepared.weights;
  const table = itemDataTable(factsOf(prepared));
  return aliasData(
    samplingWires(wires, lent, keepBits.keep, idle),
    {
      address: wires.item,
      addresses: firstAddresses(2 ** wires.item.length),
      alternate: (i) => outer.alternate[i]!,
      keep: (i) => outer.keep[i]!,
      dataBits: table.width,
      data: table.bit,
    },
    prepared.blocks.outer,
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

/**
 * Loads what depends on the item alone, applies the item, and takes the data back.
 *
 * @param drawn - wires that the outer PREPARE left in use: where entries have places, their data are there already
 */
function squaresItem(form: SquaresForm, wires: SquaresWires, drawn: readonly number[]): Operation {
  if (form.weights.places) return applied(form, wires, drawn);
  const table = itemDataTable(form);
  return scratch(outputWires(table.width, form.blocks.items), (output) => {
    const idle = idleWires(form.system, wires, wires.item);
    const load = readTable(wires.item, output, table, form.blocks.items, idle);
    return within(span('item data', 'prepare', load), applied(form, wires, output));
  });
}

/** What the outer index leads to, where nothing but its wires (and the uniform number, where entries have places) steers. */
export function steeredItem(form: SquaresForm, wires: SquaresWires): Operation {
  if (!form.weights.places) return squaresItem(form, wires, []);
  const prepared = { ...form, facts: form };
  return scratch(outerScratch(prepared), (lent) =>
    within(
      drawnData(prepared, wires, lent, idleWires(form.system, wires, wires.item)),
      squaresItem(form, wires, lent),
    ),
  );
}

/** The item whose data are in the first of the wires. */
function applied(form: SquaresForm, wires: SquaresWires, output: readonly number[]): Operation {
  const data = itemDataWires(form.weights, form.flags(0).length, output);
  return withChangeApart(data, (item) =>
    sequence(
      // 2|0⟩⟨0| − 1 is −1 times the flip.
      gate('Z', item.isSquare),
      gate('Z', item.negative),
      wires.square === null ? nothing : gate('CZ', item.paired, wires.square),
      form.aroundItem(item, (extra) => twoUses(form, wires, item, extra)),
    ),
  );
}

/** Moves the change of a product out of the wires that have another meaning for other entries: one AND each. */
function withChangeApart(data: ItemDataWires, apply: (item: ItemDataWires) => Operation): Operation {
  const { shared, change } = data;
  if (shared === 0) return apply(data);
  return scratch(shared, (own) =>
    within(
      within(
        asProduct(data),
        span(
          'change of a product',
          'select.other',
          repeat(shared, (i) =>
            sequence(gate('AND', data.isTwofold, change[i]!, own[i]!), gate('CX', own[i]!, change[i]!)),
          ),
        ),
      ),
      apply({ ...data, change: [...own, ...change.slice(shared)] }),
    ),
  );
}

/** Makes `isTwofold` say whether the entry is a product: twofold and no square. */
const asProduct = ({ isSquare, isTwofold }: Pick<ItemDataWires, 'isSquare' | 'isTwofold'>): Operation =>
  gate('CX', isSquare, isTwofold);

/**
 * B₂†·R·B₁ with B = PREPARE†·SELECT·PREPARE over the rows of the item. For a square R = 2|0⟩⟨0| − 1 (up to sign)
 * and B₁ = B₂, which gives 2(M/Λ)² − 1 however the angles are rounded; for a one-body item R and the product in
 * B₂ are switched off; for a product R is, see {@link productOrder}.
 */
function twoUses(
  form: SquaresForm,
  wires: SquaresWires,
  data: ItemDataWires,
  extra: readonly number[],
): Operation {
  if (form.weights.places) return productOrder(form, wires, data, extra);
  const address = [...wires.row, ...wires.item];
  const use = (second: boolean) =>
    innerBlock(
      form,
      wires,
      data,
      address,
      form.product({ ...data, face: wires.face, address, second, extra }),
    );
  return oneAfterTheOther(use(false), innerReflection(wires, data), use(true));
}

/** second†·between·first, `between` its own adjoint. */
function oneAfterTheOther(first: Operation, between: Operation, second: Operation): Operation {
  return {
    run(machine) {
      first.run(machine);
      between.run(machine);
      second.runAdjoint(machine);
    },
    runAdjoint(machine) {
      second.run(machine);
      between.runAdjoint(machine);
      first.runAdjoint(machine);
    },
  };
}

function innerReflection(wires: SquaresWires, { isSquare }: ItemDataWires): Operation {
  const zeros = [...wires.row, ...wires.innerUniform, ...wires.plus];
  return span('inner reflection', 'reflections', flipZeros(zeros, [isSquare]));
}

/**
 * Both uses where some entries are products of two vectors.
 *
 * P_n(τ)·P_m(σ) goes from order 0 to order 1, with the spins σ and τ changing wires; from order 1 to 0 the vectors
 * have changed places, and so have the spins. The two are each other's adjoints, so the whole is Hermitian, and with
 * the order and both spins projected on the plus state it is ½{M_m, M_n}, M = ½(P_↑ + P_↓). One AND a bit in which
 * vectors are told apart, and one for the spins.
 */
function productOrder(
  form: SquaresForm,
  wires: SquaresWires,
  data: ItemDataWires,
  extra: readonly number[],
): Operation {
  const { rowBits } = form.weights;
  const { place, change, isTwofold } = data;
  const order = wires.square!;
  const address = [...wires.row, ...place.slice(rowBits)];
  const product = form.product;
  const exchangeSpins = within(
    asProduct(data),
    span(
      'spins of a product',
      'select.other',
      repeat(wires.standIns.length, (i) => swapped(isTwofold, wires.plus[i]!, wires.standIns[i]!)),
    ),
  );
  return sequence(
    scratch(change.length, (first) => {
      const use = (second: boolean) => {
        const moved = sequence(
          repeat(change.length, (i) => gate('CX', first[i]!, place[i]!)),
          second ? repeat(change.length, (i) => gate('CX', change[i]!, place[i]!)) : nothing,
          repeat(rowBits, (i) => gate('CX', place[i]!, wires.row[i]!)),
        );
        return within(
          moved,
          innerBlock(form, wires, data, address, product({ ...data, address, second, extra })),
        );
      };
      return within(
        span(
          'order of a product',
          'select.other',
          repeat(change.length, (i) => gate('AND', order, change[i]!, first[i]!)),
        ),
        oneAfterTheOther(use(false), sequence(innerReflection(wires, data), exchangeSpins), use(true)),
      );
    }),
    within(asProduct(data), gate('CX', isTwofold, order)),
  );
}

function swapped(control: number, a: number, b: number): Operation {
  const run = (machine: Machine) => controlledSwap(machine, control, a, b);
  return { run, runAdjoint: run };
}

/** @param address - of the row, without a face that belongs to the outer index or the entry */
function innerBlock(
  form: SquaresForm,
  wires: SquaresWires,
  { sizes, face: faceOfEntry }: ItemDataWires,
  rowAddress: readonly number[],
  product: Operation,
): Operation {
  const { keepBits, rowBits, sizeBits, inner, places } = form.weights;
  const { innerKeep } = keepBits;
  const face = wires.face ?? faceOfEntry;
  const address = [...rowAddress, ...(face === null ? [] : [face])];
  const entries = new Map(
    inner.flatMap((table) =>
      // The index that alternates stand for is the low part of the address.
      Array.from(
        table.keep,
        (keep, j) =>
          [table.base + j, { keep, alternate: (table.base % 2 ** rowBits) + table.alternate[j]! }] as const,
      ),
    ),
  );
  const allEqual = !places && sizeBits.every((size) => size === rowBits);
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

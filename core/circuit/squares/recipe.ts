import { aliasSamplingToffoli } from '../primitives/alias-sampling';
import { type Blocks, erasureWires } from '../primitives/look-up';
import { outputWires, readWires } from '../primitives/reading';
import { reflectionToffoli } from '../primitives/reflection';
import type { Subroutine } from '../recipe';
import type { SquaresBlocks } from './form';
import { itemDataWidth, sharedWires } from './item-data';
import type { SquaresLayout } from './layout';
import {
  BABBUSH,
  BERRY,
  blockCounts,
  DERIVED,
  eraseLeaf,
  leaf,
  loadLeaf,
  type PhaseEstimationPart,
  readingText,
  reflectionLeaves,
  type TableSizes,
} from './leaves';
import type { KeepBits } from './tables';

/** What a form of encoding adds to the recipe of its squares. */
export interface FormRecipe {
  readonly name: string;
  /** Registers that live through the step before the index registers: system, phase gradient. */
  readonly registers: readonly { readonly name: string; readonly qubits: number }[];
  /** Wires in the plus state beside the row number, by name. */
  readonly plus: readonly string[];
  /** What takes the place of the first of these in the second use of a product, by name. */
  readonly standIns: readonly string[];
  /** Flags of an item of the form's own. */
  readonly flags: number;
  /** Around the square: wires it lends, and what is done before and after. */
  readonly aroundItem: Pick<Subroutine, 'registers' | 'children'>;
  readonly product: (second: boolean) => Subroutine;
}

/**
 * The walk step of an encoding by squares as a tree of counts, Toffoli by Toffoli that of the circuit which
 * `squaresWalkStep` emits, and with the same peak of wires. The step meets phase estimation only as controls: its
 * registers are carried along, and each control costs one Toffoli.
 */
export function squaresRecipe(
  form: FormRecipe,
  layout: SquaresLayout,
  bits: KeepBits,
  blocks: SquaresBlocks,
  phase: PhaseEstimationPart,
): Subroutine {
  const ancillas = ancillaRegisters(layout, bits, form);
  const reflected = ancillas.reduce((sum, register) => sum + register.qubits, 0);
  return {
    name: form.name,
    registers: [...form.registers, ...phase.registers.filter((register) => register.qubits > 0), ...ancillas],
    children: [blockEncodingRecipe(form, layout, bits, blocks), ...reflectionLeaves(reflected, phase)],
  };
}

type PlusWires = Pick<FormRecipe, 'plus' | 'standIns'>;

function ancillaRegisters(layout: SquaresLayout, bits: KeepBits, { plus, standIns }: PlusWires) {
  const square = layout.places ? 'square of a pair, or order of a product' : 'square of a pair';
  return [
    { name: 'item', qubits: layout.itemBits },
    { name: 'face', qubits: layout.outerBits - layout.itemBits },
    { name: square, qubits: layout.hasPaired || layout.places ? 1 : 0 },
    { name: 'uniform number, outer', qubits: bits.keep },
    { name: 'row', qubits: layout.rowBits },
    { name: 'uniform number, inner', qubits: bits.innerKeep },
    ...[...plus, ...(layout.places ? standIns : [])].map((name) => ({ name, qubits: 1 })),
  ].filter((register) => register.qubits > 0);
}

/** Wires that the look-ups of each table may borrow: as many as `idleWires` lists. */
export function idleQubits(
  layout: SquaresLayout,
  bits: KeepBits,
  system: number,
  plus: PlusWires,
): { readonly outer: number; readonly items: number; readonly inner: number; readonly rows: number } {
  const registers = ancillaRegisters(layout, bits, plus);
  const all = system + registers.reduce((sum, { qubits }) => sum + qubits, 0);
  const { itemBits, outerBits, rowBits, places } = layout;
  return {
    outer: all - outerBits,
    items: all - itemBits,
    // Beside the row number, what a datum of the entry says is no register of the step.
    inner: all - rowBits - (places ? 0 : outerBits),
    rows: all - rowBits - (places ? 0 : itemBits),
  };
}

/** Tables that PREPARE reads. */
export function squaresTables(layout: SquaresLayout, bits: KeepBits, flags: number) {
  const { itemBits, outerBits, rowBits, blockBits, places } = layout;
  const data = itemDataWidth(layout, flags);
  /** Bits that alias sampling exchanges, and what it reads for that beside the keep value. */
  const [exchanged, read] = places ? [data, 2 * data] : [outerBits, outerBits];
  return {
    outer: {
      addresses: layout.outerAddresses,
      width: read + bits.keep,
      limit: 2 ** outerBits,
      exchanged,
    },
    items: {
      addresses: layout.itemAddresses,
      width: data,
      limit: 2 ** itemBits,
    },
    inner: { addresses: layout.innerAddresses, width: rowBits + bits.innerKeep, limit: 2 ** blockBits },
  };
}

function blockEncodingRecipe(
  form: FormRecipe,
  layout: SquaresLayout,
  bits: KeepBits,
  blocks: SquaresBlocks,
): Subroutine {
  const { outer, items } = squaresTables(layout, bits, form.flags);
  const { registers, children } = form.aroundItem;
  const applied = {
    name: 'square of the item, or the one-body part',
    ...(registers ? { registers } : {}),
    children: [...(children ?? []), ...usesRecipe(form, layout, bits, blocks)],
  };
  return {
    name: 'block encoding',
    registers: samplingRegisters('outer', outer.width, bits.keep, blocks.outer),
    children: [
      ...samplingLeaves('outer PREPARE', outer, outer.exchanged, bits.keep, blocks.outer, 0),
      layout.places
        ? {
            name: 'entry',
            registers: [{ name: 'change of a product', qubits: sharedWires(layout) }],
            children: [
              leaf({
                name: 'change of a product',
                part: 'select.other',
                toffoli: sharedWires(layout),
                formula: 'one AND for each wire that other entries use otherwise',
                inputs: {},
                source: DERIVED,
              }),
              applied,
            ],
          }
        : {
            name: 'item',
            registers: [{ name: 'item data', qubits: outputWires(items.width, blocks.items) }],
            children: [
              loadLeaf('item data', 'prepare', items, blocks.items),
              applied,
              eraseLeaf('item data, undone', 'prepare', items.addresses, blocks.items.erase),
            ],
          },
    ],
  };
}

const samplingRegisters = (which: string, width: number, keepBits: number, blocks: Blocks) => [
  { name: `alternate and keep, ${which}`, qubits: outputWires(width, blocks) },
  { name: `carries of the comparison, ${which}`, qubits: keepBits },
];

/** Alias sampling and its undoing; they run one after the other with what they steer in between. */
function samplingLeaves(
  name: string,
  table: TableSizes,
  exchanged: number,
  keepBits: number,
  blocks: Blocks,
  t: number,
): Subroutine[] {
  const counts = blockCounts(table.addresses, blocks);
  const reading = readingText(table.width, blocks);
  const { prepare, unprepare } = aliasSamplingToffoli(counts, exchanged, keepBits, blocks, table.width);
  return [
    leaf({
      name,
      part: 'prepare',
      toffoli: prepare,
      t,
      formula: `${reading.formula}; + keep + n: comparison, exchange`,
      inputs: { B: counts.read, ...reading.inputs, keep: keepBits, n: exchanged },
      source: `${BABBUSH}; ${reading.source}`,
      scratch: readWires(table.addresses, blocks),
    }),
    leaf({
      name: `${name}, undone`,
      part: 'prepare',
      toffoli: unprepare,
      t,
      formula: 'B − 2 + (k − 1 − log₂k) + n: erasure, exchange; the comparison is taken back by measurement',
      inputs: { B: counts.erase, k: blocks.erase, n: exchanged },
      source: `${BABBUSH}; ${BERRY}`,
      scratch: erasureWires(table.addresses, blocks.erase),
    }),
  ];
}

/** Both uses of the rows, with what orders the vectors of a product around them. */
function usesRecipe(
  form: FormRecipe,
  layout: SquaresLayout,
  bits: KeepBits,
  blocks: SquaresBlocks,
): Subroutine[] {
  const uses = squareRecipe(form, layout, bits, blocks);
  if (!layout.places) return uses;
  const { changeBits } = layout.places;
  return [
    {
      name: 'both uses',
      registers: [{ name: 'change of the first vector', qubits: changeBits }],
      children: [
        leaf({
          name: 'order of a product',
          part: 'select.other',
          toffoli: changeBits,
          formula: '⌈log₂M⌉: one AND a bit of the vector numbers',
          inputs: { bits: changeBits },
          source: DERIVED,
        }),
        ...uses,
        leaf({
          name: 'spins of a product',
          part: 'select.other',
          toffoli: form.standIns.length,
          formula: 'one controlled swap',
          inputs: {},
          source: DERIVED,
        }),
      ],
    },
  ];
}

/** Both uses of the rows and the reflection between them. */
function squareRecipe(
  form: FormRecipe,
  layout: SquaresLayout,
  bits: KeepBits,
  blocks: SquaresBlocks,
): Subroutine[] {
  const { rowBits } = layout;
  const { inner } = squaresTables(layout, bits, form.flags);
  const hadamardT = layout.equalSizes ? 0 : 2 * rowBits;
  const use = (second: boolean): Subroutine => ({
    name: second ? 'second use of the rows' : 'first use of the rows',
    registers: samplingRegisters('inner', inner.width, bits.innerKeep, blocks.inner),
    children: [
      ...samplingLeaves('inner PREPARE', inner, rowBits, bits.innerKeep, blocks.inner, hadamardT),
      form.product(second),
    ],
  });
  const reflected = rowBits + bits.innerKeep + form.plus.length + 1;
  return [
    use(false),
    leaf({
      name: 'inner reflection',
      part: 'reflections',
      toffoli: reflectionToffoli(reflected),
      formula: 'n − 2',
      inputs: { n: reflected },
      source: 'common practice, no source',
      scratch: Math.max(0, reflected - 2),
    }),
    use(true),
  ];
}

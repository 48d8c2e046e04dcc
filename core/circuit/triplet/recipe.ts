import type { ItemSizes } from '../../encode';
import { aliasSamplingToffoli } from '../primitives/alias-sampling';
import {
  type Blocks,
  countBlocks,
  erasureToffoli,
  erasureWires,
  lookUpToffoli,
  lookUpWires,
} from '../primitives/look-up';
import { majoranaRotationToffoli, swapLayerToffoli } from '../primitives/majorana';
import { gradientWires } from '../primitives/phase-gradient';
import { reflectionToffoli } from '../primitives/reflection';
import type { StepPart, Subroutine } from '../recipe';
import type { SpinTreatment } from './product';
import { FACE_FLAGS } from './rounded-row';
import type { TripletLayout } from './sizes';
import type { TripletBits } from './tables';
import type { WalkBlocks } from './walk';

const LOW = 'G. H. Low, V. Kliuchnikov, L. Schaeffer, arXiv:1812.00954 (2018)';
const BERRY = 'D. W. Berry et al., Quantum 3, 208 (2019)';
const BABBUSH = 'R. Babbush et al., Phys. Rev. X 8, 041015 (2018)';
const GIDNEY = 'C. Gidney, Quantum 2, 74 (2018)';
const DERIVED = 'derived; equal to the emitted circuit, see DEVELOPERS';

/** What phase estimation adds to a walk step. */
export interface PhaseEstimationPart {
  readonly registers: readonly { readonly name: string; readonly qubits: number }[];
  /** Toffoli a step: controls of the last reflection. */
  readonly controls: number;
}

interface Leaf {
  readonly name: string;
  readonly part: StepPart;
  readonly times?: number;
  readonly toffoli?: number;
  readonly t?: number;
  readonly formula: string;
  readonly inputs: Readonly<Record<string, number>>;
  readonly source: string;
  /** Wires lent while it runs. */
  readonly scratch?: number;
}

const leaf = ({ scratch, ...rest }: Leaf): Subroutine => ({
  ...rest,
  ...(scratch ? { registers: [{ name: `scratch of ${rest.name}`, qubits: scratch }] } : {}),
});

/** A table as the recipe sees it. */
interface TableSizes {
  readonly addresses: Uint32Array;
  readonly width: number;
}

const loadLeaf = (
  name: string,
  part: StepPart,
  { addresses, width }: TableSizes,
  k: number,
  controlled = false,
): Subroutine => {
  const blocks = countBlocks(addresses, k);
  return leaf({
    name,
    part,
    toffoli: lookUpToffoli(blocks, width, k, controlled),
    formula: controlled ? 'B − 1 + b(k − 1)' : 'B − 2 + b(k − 1)',
    inputs: { rows: addresses.length, B: blocks, b: width, k },
    source: `${LOW}; ${BERRY}`,
    scratch: lookUpWires(addresses, k, controlled),
  });
};

const eraseLeaf = (
  name: string,
  part: StepPart,
  addresses: Uint32Array,
  k: number,
  controlled = false,
): Subroutine => {
  const blocks = countBlocks(addresses, k);
  return leaf({
    name,
    part,
    toffoli: erasureToffoli(blocks, k, controlled),
    formula: controlled ? 'B − 1 + (k − 1 − log₂k)' : 'B − 2 + (k − 1 − log₂k)',
    inputs: { rows: addresses.length, B: blocks, k },
    source: BERRY,
    scratch: erasureWires(addresses, k, controlled),
  });
};

/**
 * The walk step of the triplet form as a tree of counts, Toffoli by Toffoli that of the circuit which `walkStep`
 * emits, and with the same peak of wires. The step meets phase estimation only as controls: its registers are
 * carried along, and each control costs one Toffoli.
 */
export function tripletRecipe(
  sizes: ItemSizes,
  layout: TripletLayout,
  bits: TripletBits,
  spin: SpinTreatment,
  blocks: WalkBlocks,
  phase: PhaseEstimationPart,
): Subroutine {
  const { orbitals } = sizes;
  const { itemBits, rowBits, hasFaces } = layout;
  const ancillas = [
    { name: 'item', qubits: itemBits },
    { name: 'face', qubits: hasFaces ? 1 : 0 },
    { name: 'square of a pair', qubits: sizes.hasPaired ? 1 : 0 },
    { name: 'uniform number, outer', qubits: bits.keep },
    { name: 'row', qubits: rowBits },
    { name: 'uniform number, inner', qubits: bits.innerKeep },
    { name: 'spin', qubits: 1 },
    { name: 'Majorana kind', qubits: 1 },
  ].filter((register) => register.qubits > 0);
  const reflected = ancillas.reduce((sum, register) => sum + register.qubits, 0);
  const modulusBits = layout.angleBits + 2;
  return {
    name: `walk step, triplet, ${spin}`,
    registers: [
      { name: 'system', qubits: 2 * orbitals },
      { name: 'phase gradient', qubits: gradientWires(modulusBits) },
      ...phase.registers.filter((register) => register.qubits > 0),
      ...ancillas,
    ],
    children: [
      blockEncodingRecipe(sizes, layout, bits, spin, blocks),
      leaf({
        name: 'reflection of the walk',
        part: 'reflections',
        toffoli: reflectionToffoli(reflected),
        formula: 'n − 2',
        inputs: { n: reflected },
        source: 'common practice, no source',
        scratch: Math.max(0, reflected + phase.controls - 2),
      }),
      leaf({
        name: 'control by the phase register',
        part: 'control',
        toffoli: phase.controls,
        formula: 'one AND for each control of the reflection',
        inputs: { controls: phase.controls },
        source: BABBUSH,
      }),
    ],
  };
}

function blockEncodingRecipe(
  sizes: ItemSizes,
  layout: TripletLayout,
  bits: TripletBits,
  spin: SpinTreatment,
  blocks: WalkBlocks,
): Subroutine {
  const { itemBits, rowBits } = layout;
  const index = itemBits + (layout.hasFaces ? 1 : 0);
  const outer = { addresses: layout.outerAddresses, width: index + bits.keep };
  const items = { addresses: layout.itemAddresses, width: rowBits + 3 };
  return {
    name: 'block encoding',
    registers: samplingRegisters('outer', outer.width, bits.keep, blocks.outer),
    children: [
      ...samplingLeaves('outer PREPARE', outer, index, bits.keep, blocks.outer, 1, 0),
      {
        name: 'item',
        registers: [{ name: 'item data', qubits: items.width * blocks.items.read }],
        children: [
          loadLeaf('item data', 'prepare', items, blocks.items.read),
          squareRecipe(sizes, layout, bits, spin, blocks),
          eraseLeaf('item data, undone', 'prepare', items.addresses, blocks.items.erase),
        ],
      },
    ],
  };
}

const samplingRegisters = (which: string, width: number, keepBits: number, blocks: Blocks) => [
  { name: `alternate and keep, ${which}`, qubits: width * blocks.read },
  { name: `carries of the comparison, ${which}`, qubits: keepBits },
];

/** Alias sampling and its undoing; they run one after the other with what they steer in between. */
function samplingLeaves(
  name: string,
  table: TableSizes,
  index: number,
  keepBits: number,
  blocks: Blocks,
  times: number,
  t: number,
): Subroutine[] {
  const counts = {
    read: countBlocks(table.addresses, blocks.read),
    erase: countBlocks(table.addresses, blocks.erase),
  };
  const { prepare, unprepare } = aliasSamplingToffoli(counts, index, keepBits, blocks);
  const inputs = { B: counts.read, b: table.width, k: blocks.read, keep: keepBits, n: index };
  return [
    leaf({
      name,
      part: 'prepare',
      times,
      toffoli: prepare,
      t,
      formula: 'B − 2 + b(k − 1) + keep + n: look-up, comparison, exchange',
      inputs,
      source: `${BABBUSH}; ${LOW}`,
      scratch: lookUpWires(table.addresses, blocks.read),
    }),
    leaf({
      name: `${name}, undone`,
      part: 'prepare',
      times,
      toffoli: unprepare,
      t,
      formula: 'B − 2 + (k − 1 − log₂k) + n: erasure, exchange; the comparison is taken back by measurement',
      inputs: { B: counts.erase, k: blocks.erase, n: index },
      source: `${BABBUSH}; ${BERRY}`,
      scratch: erasureWires(table.addresses, blocks.erase),
    }),
  ];
}

/** Both uses of the rows and the reflection between them. */
function squareRecipe(
  sizes: ItemSizes,
  layout: TripletLayout,
  bits: TripletBits,
  spin: SpinTreatment,
  blocks: WalkBlocks,
): Subroutine {
  const { rowBits, innerAddresses } = layout;
  const inner = { addresses: innerAddresses, width: rowBits + bits.innerKeep };
  const hadamardT = layout.equalSizes ? 0 : 2 * rowBits;
  const use = (second: boolean): Subroutine => ({
    name: second ? 'second use of the rows' : 'first use of the rows',
    registers: samplingRegisters('inner', inner.width, bits.innerKeep, blocks.inner),
    children: [
      ...samplingLeaves('inner PREPARE', inner, rowBits, bits.innerKeep, blocks.inner, 1, hadamardT),
      productRecipe(sizes, layout, spin, blocks, second),
    ],
  });
  const reflected = rowBits + bits.innerKeep + 3;
  return {
    name: 'square of the item, or the one-body part',
    children: [
      use(false),
      leaf({
        name: 'inner reflection',
        part: 'reflections',
        toffoli: reflectionToffoli(reflected),
        formula: 'n − 2',
        inputs: { n: reflected },
        source: 'common practice, no source',
        scratch: reflected - 2,
      }),
      use(true),
    ],
  };
}

/** SELECT: one product of two rotated Majorana operators. */
function productRecipe(
  sizes: ItemSizes,
  layout: TripletLayout,
  spin: SpinTreatment,
  blocks: WalkBlocks,
  second: boolean,
): Subroutine {
  const { orbitals } = sizes;
  const { angleBits, anglesWidth, rowAddresses, pairAddresses, rowWidth } = layout;
  const tracks = spin === 'index' ? 2 : 1;
  const rows = { addresses: rowAddresses, width: rowWidth };
  const modulusBits = angleBits + 2;
  return {
    name: 'product of two rotated Majorana operators',
    registers: [{ name: 'angles and row flags', qubits: rowWidth * blocks.rows.read }],
    children: [
      loadLeaf('angle look-up', 'select.lookup', rows, blocks.rows.read, second),
      {
        name: 'Majorana operators',
        registers: layout.hasFaces ? [{ name: 'face of the row', qubits: FACE_FLAGS }] : [],
        children: [
          leaf({
            name: 'face of the row',
            part: 'select.other',
            toffoli: layout.hasFaces ? FACE_FLAGS : 0,
            formula: 'one AND for each flag that depends on the face',
            inputs: { flags: FACE_FLAGS },
            source: DERIVED,
          }),
          leaf({
            name: 'swap layer',
            part: 'select.swaps',
            times: spin === 'swap-layers' ? 3 : 0,
            toffoli: swapLayerToffoli(orbitals),
            formula: 'N: one AND an orbital',
            inputs: { N: orbitals },
            source: DERIVED,
            scratch: spin === 'swap-layers' ? 1 : 0,
          }),
          leaf({
            name: 'orbital rotation',
            part: 'select.rotations',
            times: 4 * tracks,
            toffoli: majoranaRotationToffoli(orbitals, modulusBits),
            formula: '(N − 1)(β − 2), gradient modulus 2^β',
            inputs: { N: orbitals, β: modulusBits },
            source: GIDNEY,
            // Two more addend bits than are stored, and the carries.
            scratch: orbitals > 1 ? modulusBits : 0,
          }),
          leaf({
            name: 'Majorana kind',
            part: 'select.other',
            times: 4,
            t: orbitals * tracks,
            formula: 'one T gate a rotated mode',
            inputs: { modes: orbitals * tracks },
            source: DERIVED,
          }),
          leaf({
            name: 'spin and switch',
            part: 'select.other',
            times: second && spin === 'index' ? 2 : 0,
            toffoli: 1,
            formula: 'one AND of spin and switch for each central operator',
            inputs: {},
            source: DERIVED,
          }),
          ...secondVector(pairAddresses, anglesWidth, blocks.pairs),
        ],
      },
      eraseLeaf('angle erasure', 'select.lookup', rowAddresses, blocks.rows.erase, second),
    ],
  };
}

/** The look-up of what turns the first vector into the second, where a row has two. */
function secondVector(addresses: Uint32Array, width: number, blocks: Blocks): Subroutine[] {
  if (addresses.length === 0) return [];
  const load = loadLeaf('second vector', 'select.lookup', { addresses, width }, blocks.read, true);
  if (blocks.read === 1) return [load];
  return [
    {
      name: 'second vector',
      registers: [{ name: 'change of the angles', qubits: width * blocks.read }],
      children: [load, eraseLeaf('second vector, undone', 'select.lookup', addresses, blocks.erase, true)],
    },
  ];
}

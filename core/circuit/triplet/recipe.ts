import type { Blocks } from '../primitives/look-up';
import { majoranaRotationToffoli, swapLayerToffoli } from '../primitives/majorana';
import { gradientWires } from '../primitives/phase-gradient';
import { outputWires } from '../primitives/reading';
import type { Subroutine } from '../recipe';
import type { PhaseEstimationPart } from '../squares/leaves';
import { DERIVED, eraseLeaf, GIDNEY, leaf, loadLeaf } from '../squares/leaves';
import { squaresRecipe } from '../squares/recipe';
import { addsOnto, type ProductBlocks, type SpinTreatment } from './product';
import { FACE_FLAGS } from './rounded-row';
import type { TripletLayout } from './sizes';
import type { TripletBits } from './tables';
import type { WalkBlocks } from './walk';

/** Wires of the triplet form in the plus state. */
export const TRIPLET_WIRES = {
  plus: ['spin', 'Majorana kind'],
  standIns: ['spin of a second vector'],
} as const;

/** The walk step of the triplet form: see {@link squaresRecipe}. */
export function tripletRecipe(
  orbitals: number,
  layout: TripletLayout,
  bits: TripletBits,
  spin: SpinTreatment,
  blocks: WalkBlocks,
  phase: PhaseEstimationPart,
): Subroutine {
  const form = {
    name: `walk step, triplet, ${spin}`,
    registers: [
      { name: 'system', qubits: 2 * orbitals },
      { name: 'phase gradient', qubits: gradientWires(layout.angleBits + 2) },
    ],
    ...TRIPLET_WIRES,
    flags: 0,
    aroundItem: {},
    product: (second: boolean) => productRecipe(orbitals, layout, spin, blocks, second),
  };
  return squaresRecipe(form, layout, bits, blocks, phase);
}

/** SELECT: one product of two rotated Majorana operators. */
function productRecipe(
  orbitals: number,
  layout: TripletLayout,
  spin: SpinTreatment,
  blocks: ProductBlocks,
  second: boolean,
): Subroutine {
  const { angleBits, anglesWidth, rowAddresses, pairAddresses, rowWidth } = layout;
  const tracks = spin === 'index' ? 2 : 1;
  const rows = { addresses: rowAddresses, width: rowWidth };
  const modulusBits = angleBits + 2;
  return {
    name: 'product of two rotated Majorana operators',
    registers: [{ name: 'angles and row flags', qubits: outputWires(rowWidth, blocks.rows) }],
    children: [
      loadLeaf('angle look-up', 'select.lookup', rows, blocks.rows, second),
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
  const load = loadLeaf('second vector', 'select.lookup', { addresses, width }, blocks, true);
  if (addsOnto(blocks)) return [load];
  return [
    {
      name: 'second vector',
      registers: [{ name: 'change of the angles', qubits: outputWires(width, blocks) }],
      children: [load, eraseLeaf('second vector, undone', 'select.lookup', addresses, blocks.erase, true)],
    },
  ];
}

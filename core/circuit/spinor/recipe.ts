import { givensToffoli, tiltLayerCost } from '../primitives/givens';
import { swapLayerToffoli } from '../primitives/majorana';
import { gradientWires, rotationToffoli } from '../primitives/phase-gradient';
import type { Subroutine } from '../recipe';
import type { PhaseEstimationPart } from '../squares/leaves';
import { DERIVED, eraseLeaf, GIDNEY, leaf, loadLeaf } from '../squares/leaves';
import { squaresRecipe } from '../squares/recipe';
import type { KeepBits } from '../squares/tables';
import type { SpinorLayout } from './layout';
import { type ProductBlocks, turnsSpins } from './product';
import type { SpinorBlocks } from './walk';

/** Wires of the spinor form in the plus state. */
export const spinorPlus = ({ partners }: Pick<SpinorLayout, 'partners'>) => ({
  plus: partners ? ['time-reversed partner'] : [],
  standIns: [],
});

/** The walk step of the spinor form: see {@link squaresRecipe}. */
export function spinorRecipe(
  layout: SpinorLayout,
  bits: KeepBits,
  blocks: SpinorBlocks,
  phase: PhaseEstimationPart,
): Subroutine {
  const form = {
    name: 'walk step, spinor',
    registers: [
      { name: 'system', qubits: 2 * layout.orbitals },
      { name: 'phase gradient', qubits: gradientWires(layout.angleBits + 2) },
    ],
    ...spinorPlus(layout),
    flags: layout.flags.length,
    aroundItem: layout.hasPaired
      ? {
          registers: [{ name: 'second square', qubits: 1 }],
          children: [
            leaf({
              name: 'second square',
              part: 'select.other',
              toffoli: 1,
              formula: 'one AND: the square of a paired item',
              inputs: {},
              source: DERIVED,
            }),
          ],
        }
      : {},
    product: (second: boolean) => productRecipe(layout, blocks, second),
  };
  return squaresRecipe(form, layout, bits, blocks, phase);
}

/** SELECT: the occupation of one spinor. */
function productRecipe(layout: SpinorLayout, blocks: ProductBlocks, second: boolean): Subroutine {
  const { orbitals, angleBits, phaseBits, sharedBits, partners, hasAxes, rowAddresses, rowWidth } = layout;
  const modulusBits = angleBits + 2;
  const spins = turnsSpins(layout, second);
  const groups = [...layout.tables].filter(([group]) => group === 'phases' || spins);
  const rotations = (name: string, angles: number, each: number, formula: string, modulus = modulusBits) =>
    leaf({
      name,
      part: 'select.rotations',
      times: angles > 0 ? 2 : 0,
      toffoli: angles * each,
      formula,
      inputs: { N: orbitals, β: modulus },
      source: GIDNEY,
      // Two more addend bits than are stored, and the carries.
      scratch: angles > 0 ? modulus : 0,
    });
  const givensEach = givensToffoli(modulusBits);
  const phaseEach = rotationToffoli(modulusBits);
  const tilt = tiltLayerCost(orbitals);
  return {
    name: 'occupation of a spinor',
    registers: [
      { name: 'angles and signs', qubits: rowWidth * blocks.rows.read },
      ...groups.map(([group, { width }]) => ({
        name: `angles, ${group}`,
        qubits: width * blocks.groups[group],
      })),
    ],
    children: [
      loadLeaf(
        'angle look-up',
        'select.lookup',
        { addresses: rowAddresses, width: rowWidth },
        blocks.rows,
        second,
      ),
      ...groups.map(([group, table]) =>
        loadLeaf(`${group} look-up`, 'select.lookup', table, { read: blocks.groups[group], erase: 1 }, true),
      ),
      withPhases(orbitals - 1, sharedBits, {
        name: 'occupation in its frame',
        registers: partners && hasAxes ? [{ name: 'whether spins are swapped', qubits: 1 }] : [],
        children: [
          leaf({
            name: 'whether spins are swapped',
            part: 'select.other',
            times: partners && hasAxes ? 1 : 0,
            toffoli: 1,
            formula: 'one AND: spin reversed, and its axis is z',
            inputs: {},
            source: DERIVED,
          }),
          rotations('orbital rotation', orbitals - 1, givensEach, '2(N − 1)(β − 2), gradient modulus 2^β'),
          rotations(
            'phases of the orbitals',
            layout.hasPhases ? orbitals - 1 : 0,
            rotationToffoli(phaseBits + 2),
            '(N − 1)(β − 2)',
            phaseBits + 2,
          ),
          rotations(
            'spins of the orbitals',
            spins ? orbitals : 0,
            givensEach + phaseEach,
            '3N(β − 2): a Givens rotation and a phase an orbital',
          ),
          leaf({
            name: 'spin axis',
            part: 'select.other',
            times: hasAxes ? 2 : 0,
            ...tilt,
            formula: 'N: one AND an orbital; 6N T gates',
            inputs: { N: orbitals },
            source: DERIVED,
            scratch: hasAxes ? 1 : 0,
          }),
          leaf({
            name: 'swap of the spins',
            part: 'select.swaps',
            times: partners ? 2 : 0,
            toffoli: swapLayerToffoli(orbitals),
            formula: 'N: one AND an orbital',
            inputs: { N: orbitals },
            source: DERIVED,
            scratch: partners ? 1 : 0,
          }),
        ],
      }),
      eraseLeaf('angle erasure', 'select.lookup', rowAddresses, blocks.rows.erase, second),
    ],
  };
}

/** Takes shared phases out of the chain's words around what uses them. */
function withPhases(words: number, sharedBits: number, inner: Subroutine): Subroutine {
  if (sharedBits === 0) return inner;
  return {
    name: 'with phases out of the chain',
    registers: [{ name: 'phases out of the chain', qubits: words * sharedBits }],
    children: [
      leaf({
        name: 'phases out of the chain',
        part: 'select.other',
        toffoli: words * sharedBits,
        formula: '(N − 1)·bits: one AND a shared bit, taken back by measurement',
        inputs: { words, bits: sharedBits },
        source: DERIVED,
      }),
      inner,
    ],
  };
}

import type { SpinorBlocks, SpinorTables } from '../circuit';
import { spinorAncillas, spinorWires, withSpinorItem } from '../circuit';
import type { SteeredBlock } from './block-encoding';
import { squaresBranches } from './squares-branches';

/** The block encoding of a spinor form; item, face and square of a pair steer. */
export function spinorBlock(tables: SpinorTables, blocks: SpinorBlocks): SteeredBlock {
  const { weights, layout, items } = tables;
  const branches = squaresBranches(
    weights,
    items.map(({ faces, paired }) => ({ numFaces: faces.length, paired })),
  );
  return {
    probabilities: branches.probabilities,
    // Row, uniform number and partner; rotations of modes keep the number of electrons, but not the spin.
    spread: 2 ** (weights.rowBits + weights.keepBits.innerKeep + 1 + layout.orbitals),
    open(machine) {
      const wires = spinorWires(tables, machine, 'exact');
      return {
        system: wires.system,
        steering: (branch) => branches.steering(wires, branch),
        operation: withSpinorItem(tables, wires, blocks),
        projected: branches.projected(wires, spinorAncillas(wires)),
      };
    },
  };
}

import type { SpinTreatment, TripletTables, WalkBlocks } from '../circuit';
import { ancillaWires, walkWires, withItemData } from '../circuit';
import type { SteeredBlock } from './block-encoding';
import { squaresBranches } from './squares-branches';

/** The block encoding of a triplet form; item, face and square of a pair steer. */
export function tripletBlock(tables: TripletTables, spin: SpinTreatment, blocks: WalkBlocks): SteeredBlock {
  const branches = squaresBranches(
    tables,
    tables.items.map(({ lambda, paired }) => ({ numFaces: lambda.length, paired })),
  );
  return {
    probabilities: branches.probabilities,
    // Row, uniform number, σ and x; a Majorana rotation takes a determinant to any other.
    spread: 2 ** (tables.rowBits + tables.bits.innerKeep + 2 + 2 * tables.orbitals),
    open(machine) {
      const wires = walkWires(tables, machine, 'exact');
      return {
        system: wires.system,
        steering: (branch) => branches.steering(wires, branch),
        operation: withItemData(tables, wires, spin, blocks),
        projected: branches.projected(wires, ancillaWires(wires)),
      };
    },
  };
}

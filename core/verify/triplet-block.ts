import type { SpinTreatment, TripletTables, WalkBlocks } from '../circuit';
import { ancillaWires, hadamards, walkWires, withItemData, within } from '../circuit';
import type { SteeredBlock } from './block-encoding';
import { squaresBranches } from './squares-branches';

/**
 * The block encoding of a triplet form; item, face and square of a pair steer. Where there are products, they exchange
 * the values of the wire that tells squares and orders apart: it is then prepared and projected as in PREPARE.
 */
export function tripletBlock(tables: TripletTables, spin: SpinTreatment, blocks: WalkBlocks): SteeredBlock {
  const branches = squaresBranches(
    tables,
    tables.items.map(({ lambda, paired }) => ({ numFaces: lambda.length, paired })),
  );
  return {
    probabilities: branches.probabilities,
    // Row, uniform number, σ and x, what products add; a Majorana rotation takes a determinant to any other.
    spread: 2 ** (tables.rowBits + tables.bits.innerKeep + (tables.places ? 4 : 2) + 2 * tables.orbitals),
    open(machine) {
      const wires = walkWires(tables, machine, 'exact');
      const item = withItemData(tables, wires, spin, blocks);
      return {
        system: wires.system,
        steering: (branch) => branches.steering(wires, branch),
        operation: branches.squareSteers ? item : within(hadamards([wires.square!]), item),
        projected: branches.projected(wires, ancillaWires(wires)),
      };
    },
  };
}

import type { SpinTreatment, TripletTables, WalkBlocks } from '../circuit';
import { ancillaWires, walkWires, withItemData } from '../circuit';
import type { SteeredBlock } from './block-encoding';

/** The block encoding of a triplet form; item, face and square of a pair steer. */
export function tripletBlock(tables: TripletTables, spin: SpinTreatment, blocks: WalkBlocks): SteeredBlock {
  const branches = tables.items.flatMap((item, t) =>
    item.lambda.flatMap((_, face) =>
      (item.paired ? [0, 1] : [0]).map((square) => ({
        t,
        face,
        square,
        probability: tables.outer.probabilities[face * 2 ** tables.itemBits + t]! / (item.paired ? 2 : 1),
      })),
    ),
  );
  return {
    probabilities: branches.map(({ probability }) => probability),
    // Row, uniform number, σ and x; a Majorana rotation takes a determinant to any other.
    spread: 2 ** (tables.rowBits + tables.bits.innerKeep + 2 + 2 * tables.orbitals),
    open(machine) {
      const wires = walkWires(tables, machine, 'exact');
      const fixed = new Set([...wires.item, wires.face, wires.square, ...wires.outerUniform]);
      return {
        system: wires.system,
        steering(branch) {
          const { t, face, square } = branches[branch]!;
          return [
            ...wires.item.filter((_, i) => (t >> i) & 1),
            ...(face === 1 ? [wires.face!] : []),
            ...(square === 1 ? [wires.square!] : []),
          ];
        },
        operation: withItemData(tables, wires, spin, blocks),
        projected: ancillaWires(wires).filter((wire) => !fixed.has(wire)),
      };
    },
  };
}

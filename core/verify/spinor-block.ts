import type { SpinorBlocks, SpinorTables } from '../circuit';
import { spinorAncillas, spinorWires, withSpinorItem } from '../circuit';
import type { SteeredBlock } from './block-encoding';

/** The block encoding of a spinor form; item, face and square of a pair steer. */
export function spinorBlock(tables: SpinorTables, blocks: SpinorBlocks): SteeredBlock {
  const { weights, layout, items } = tables;
  const branches = items.flatMap((item, t) =>
    item.faces.flatMap((_, face) =>
      (item.paired ? [0, 1] : [0]).map((square) => ({
        t,
        face,
        square,
        probability: weights.outer.probabilities[face * 2 ** weights.itemBits + t]! / (item.paired ? 2 : 1),
      })),
    ),
  );
  return {
    probabilities: branches.map(({ probability }) => probability),
    // Row, uniform number and partner; rotations of modes keep the number of electrons, but not the spin.
    spread: 2 ** (weights.rowBits + weights.keepBits.innerKeep + 1 + layout.orbitals),
    open(machine) {
      const wires = spinorWires(tables, machine, 'exact');
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
        operation: withSpinorItem(tables, wires, blocks),
        projected: spinorAncillas(wires).filter((wire) => !fixed.has(wire)),
      };
    },
  };
}

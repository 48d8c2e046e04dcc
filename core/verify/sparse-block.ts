import type { Blocks, SparseTables } from '../circuit';
import { hadamards, sparseAncillas, sparseWires, steeringNumbers, within, withTerm } from '../circuit';
import type { SteeredBlock } from './block-encoding';

/**
 * The block encoding of a sparse form; the numbers that PREPARE reads addresses from steer. All numbers that lead to
 * the same row and the same word do the same: one of each stands for all.
 */
export function sparseBlock(tables: SparseTables, blocks: Blocks): SteeredBlock {
  const branches = [...steeringNumbers(tables)];
  return {
    probabilities: branches.map(({ probability }) => probability),
    spread: 2 ** ((tables.layout.spins === 'fixed' ? 3 : 5) + (tables.layout.exchanged ? 1 : 0)),
    open(machine) {
      const wires = sparseWires(tables.layout, machine);
      const fixed = new Set([...wires.low, ...wires.uniform, ...wires.share]);
      const plus = sparseAncillas(wires).filter((wire) => !fixed.has(wire));
      const ones = (register: readonly number[], value: number) =>
        register.filter((_, i) => Math.floor(value / 2 ** i) % 2 === 1);
      return {
        system: wires.system,
        steering(branch) {
          const { low, uniform, share } = branches[branch]!;
          return [...ones(wires.low, low), ...ones(wires.uniform, uniform), ...ones(wires.share, share)];
        },
        operation: within(hadamards(plus), withTerm(tables, wires, blocks)),
        projected: plus,
      };
    },
  };
}

import type { Machine } from '../gates/machine';
import { gate, nothing, type Operation, scratch } from '../gates/operation';
import { type Leaf, unaryIteration, unaryIterationWires } from './unary-iteration';

/** Wires lent: the iteration's, and the one that is 1 along the range. Toffoli are the iteration's alone. */
export function rangedIterationWires(addresses: Uint32Array, controlled: boolean): number {
  return unaryIterationWires(addresses, controlled) + 1;
}

/**
 * What happens at one address: `flag` is 1 where the register holds it, `inRange` where the register holds one further
 * on (`below`: this address lies below it) or one already passed (`above`).
 */
export type RangedLeaf = (machine: Machine, address: number, flag: number, inRange: number) => void;

/**
 * Unary iteration with a further wire that collects the flags: 1 for all addresses below the register's, or for all
 * above it, at no Toffoli of its own. What Jordan–Wigner strings need (R. Babbush et al., Phys. Rev. X 8, 041015
 * (2018), Sec. III C).
 *
 * @param control - wire that switches all flags and the range, or null.
 * @param leafAdjoint - used instead of `leaf` by the adjoint, which runs upward as well; leaves must commute.
 */
export function rangedIteration(
  register: readonly number[],
  addresses: Uint32Array,
  control: number | null,
  side: 'below' | 'above',
  leaf: RangedLeaf,
  leafAdjoint: RangedLeaf = leaf,
): Operation {
  return scratch(1, ([range]) => {
    // Below: 1 until the flag takes it away. Above: 0 until the flag puts it there.
    const switched = control === null ? gate('X', range!) : gate('CX', control, range!);
    const collect =
      (use: RangedLeaf): Leaf =>
      (machine, address, flag) => {
        if (side === 'below') machine.gate('CX', flag, range!);
        use(machine, address, flag, range!);
        if (side === 'above') machine.gate('CX', flag, range!);
      };
    const iterate = unaryIteration(register, addresses, control, collect(leaf), collect(leafAdjoint));
    const [before, after] = side === 'below' ? [switched, nothing] : [nothing, switched];
    const around = (run: (machine: Machine) => void) => (machine: Machine) => {
      before.run(machine);
      run(machine);
      after.run(machine);
    };
    return {
      run: around((machine) => iterate.run(machine)),
      runAdjoint: around((machine) => iterate.runAdjoint(machine)),
    };
  });
}

import type { StepPart } from '../recipe';
import type { GateKind, Machine } from './machine';

/**
 * A piece of circuit that knows its adjoint. Circuits are built from a few combinators instead of recorded and
 * reversed: a table look-up of millions of gates can then be run backwards without ever being stored, and the
 * adjoint of a look-up can be the cheaper measurement-based erasure.
 */
export interface Operation {
  run(machine: Machine): void;
  runAdjoint(machine: Machine): void;
}

const INVERSE: Partial<Record<GateKind, GateKind>> = {
  S: 'SDG',
  SDG: 'S',
  T: 'TDG',
  TDG: 'T',
  AND: 'UNAND',
  UNAND: 'AND',
};

/** One gate. */
export function gate(kind: GateKind, a: number, b = -1, c = -1): Operation {
  const inverse = INVERSE[kind] ?? kind;
  return {
    run: (machine) => machine.gate(kind, a, b, c),
    runAdjoint: (machine) => machine.gate(inverse, a, b, c),
  };
}

export const nothing: Operation = { run() {}, runAdjoint() {} };

/** `first` acts first. */
export function sequence(...operations: readonly Operation[]): Operation {
  return {
    run(machine) {
      for (const operation of operations) operation.run(machine);
    },
    runAdjoint(machine) {
      for (let i = operations.length - 1; i >= 0; i--) operations[i]!.runAdjoint(machine);
    },
  };
}

/** item(0), item(1), … one after the other, each made when its turn comes, so nothing is stored. */
export function repeat(count: number, item: (i: number) => Operation): Operation {
  return {
    run(machine) {
      for (let i = 0; i < count; i++) item(i).run(machine);
    },
    runAdjoint(machine) {
      for (let i = count - 1; i >= 0; i--) item(i).runAdjoint(machine);
    },
  };
}

export function adjoint(operation: Operation): Operation {
  return { run: (m) => operation.runAdjoint(m), runAdjoint: (m) => operation.run(m) };
}

/** outer† · inner · outer, outer acting first: compute, use, take back. */
export function within(outer: Operation, inner: Operation): Operation {
  return {
    run(machine) {
      outer.run(machine);
      inner.run(machine);
      outer.runAdjoint(machine);
    },
    runAdjoint(machine) {
      outer.run(machine);
      inner.runAdjoint(machine);
      outer.runAdjoint(machine);
    },
  };
}

/** Lends `size` wires in |0⟩ to the operation that `body` makes; they must be |0⟩ again at its end. */
export function scratch(size: number, body: (wires: readonly number[]) => Operation): Operation {
  const lend = (machine: Machine, use: (operation: Operation) => void) => {
    const wires = machine.allocateRegister(size);
    use(body(wires));
    machine.releaseRegister(wires);
  };
  return {
    run: (machine) => lend(machine, (operation) => operation.run(machine)),
    runAdjoint: (machine) => lend(machine, (operation) => operation.runAdjoint(machine)),
  };
}

/** Names a subroutine: the cost tree and a diagram follow from the same spans. */
export function span(name: string, part: StepPart | undefined, operation: Operation): Operation {
  return {
    run(machine) {
      machine.enter(name, part);
      operation.run(machine);
      machine.leave();
    },
    runAdjoint(machine) {
      machine.enter(`${name}, undone`, part);
      operation.runAdjoint(machine);
      machine.leave();
    },
  };
}

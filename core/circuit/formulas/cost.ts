import type { StepPart, Subroutine } from '../recipe';

/** What one run of a primitive costs. Toffoli and T are separate ledgers. */
export interface PrimitiveCost {
  readonly toffoli: number;
  readonly t: number;
  /** Clean wires in state zero that the primitive takes and gives back; its inputs and results not counted. */
  readonly scratch: number;
  /** Closed formula in the symbols of `inputs`. */
  readonly formula: string;
  readonly inputs: Readonly<Record<string, number>>;
  /** Published source, `derived: …`, or `common practice, no source`. */
  readonly source: string;
}

/** A primitive without Toffoli, T or scratch: for a size at which the gate vanishes. */
export function free(
  formula: string,
  inputs: Readonly<Record<string, number>>,
  source: string,
): PrimitiveCost {
  return { toffoli: 0, t: 0, scratch: 0, formula, inputs, source };
}

/** A primitive as a leaf of a recipe, booked under one part of the step. */
export function leaf(name: string, part: StepPart, cost: PrimitiveCost, times = 1): Subroutine {
  return {
    name,
    part,
    ...(times === 1 ? {} : { times }),
    toffoli: cost.toffoli,
    t: cost.t,
    formula: cost.formula,
    inputs: cost.inputs,
    source: cost.source,
    ...(cost.scratch > 0 ? { registers: [{ name: `scratch of ${name}`, qubits: cost.scratch }] } : {}),
  };
}

/** ⌈log₂ n⌉ for n ≥ 1, exact: the bits that count n states. 0 for n ≤ 1. */
export function bitsFor(n: number): number {
  let bits = 0;
  for (let states = 1; states < n; states *= 2) bits += 1;
  return bits;
}

/** Exponent of the largest power of two that divides n ≥ 1. */
export function powerOfTwo(n: number): number {
  let exponent = 0;
  for (let rest = n; rest > 0 && rest % 2 === 0; rest /= 2) exponent += 1;
  return exponent;
}

import { gate, type Operation, repeat, scratch, sequence, within } from '../gates/operation';

/** Toffoli of adding two n-bit numbers modulo 2^n: n − 1. C. Gidney, Quantum 2, 74 (2018). */
export function additionToffoli(bits: number): number {
  return Math.max(0, bits - 1);
}

/** Toffoli of comparing two n-bit numbers: n, one AND a carry. C. Gidney, Quantum 2, 74 (2018). */
export function comparisonToffoli(bits: number): number {
  return bits;
}

/**
 * One step of a carry chain: `carryOut` ← majority(x, y, carryIn), with x and y each left XORed with carryIn, so
 * that a later step can finish the sum. `carryIn` −1 means 0.
 */
export function carryStep(x: number, y: number, carryIn: number, carryOut: number): Operation {
  if (carryIn < 0) return gate('AND', x, y, carryOut);
  return sequence(
    gate('CX', carryIn, x),
    gate('CX', carryIn, y),
    gate('AND', x, y, carryOut),
    gate('CX', carryIn, carryOut),
  );
}

/** y ← x + y mod 2^n for n-wire registers, lowest bit first; the adjoint subtracts. */
export function addInto(x: readonly number[], y: readonly number[]): Operation {
  const n = x.length;
  if (n !== y.length) throw new RangeError(`cannot add ${n} wires into ${y.length}`);
  if (n === 0) return sequence();
  return scratch(n - 1, (carries) => {
    const carryInto = (i: number) => (i === 0 ? -1 : carries[i - 1]!);
    const up = repeat(n - 1, (i) => carryStep(x[i]!, y[i]!, carryInto(i), carries[i]!));
    // Going down, each carry is taken back and the sum bit y ⊕ x ⊕ carry is left in y.
    const down = repeat(n - 1, (step) => {
      const i = n - 2 - step;
      const carry = carryInto(i);
      const first = sequence(gate('CX', carry, carries[i]!), gate('UNAND', x[i]!, y[i]!, carries[i]!));
      return carry < 0
        ? sequence(gate('UNAND', x[0]!, y[0]!, carries[0]!), gate('CX', x[0]!, y[0]!))
        : sequence(first, gate('CX', carry, x[i]!), gate('CX', x[i]!, y[i]!));
    });
    const top =
      n === 1
        ? gate('CX', x[0]!, y[0]!)
        : sequence(gate('CX', carries[n - 2]!, y[n - 1]!), gate('CX', x[n - 1]!, y[n - 1]!));
    return sequence(up, top, down);
  });
}

/** flag ← flag ⊕ [x < y], both n-wire registers, lowest bit first: the last carry of y + (2^n − 1 − x). */
export function compareInto(x: readonly number[], y: readonly number[], flag: number): Operation {
  const n = x.length;
  if (n !== y.length || n === 0) throw new RangeError(`cannot compare ${n} wires with ${y.length}`);
  return scratch(n, (carries) => {
    const complement = repeat(n, (i) => gate('X', x[i]!));
    const chain = repeat(n, (i) => carryStep(x[i]!, y[i]!, i === 0 ? -1 : carries[i - 1]!, carries[i]!));
    return within(sequence(complement, chain), gate('CX', carries[n - 1]!, flag));
  });
}

/** Toffoli of comparing a number of `bits` bits with an odd constant: the lowest bit is free. */
export function constantComparisonToffoli(bits: number): number {
  return Math.max(0, bits - 1);
}

/**
 * [number < threshold] for an odd constant, in the last of the lent wires (the number has as many): from the lowest
 * bit up, less_{i+1} = ¬x_i ∨ less_i where the constant has a 1, else ¬x_i ∧ less_i. Kept until taken back for free.
 */
export function lessThanConstant(
  number: readonly number[],
  threshold: number,
  lent: readonly number[],
): Operation {
  const steps = number.map((x, i): Operation => {
    const less = lent[i]!;
    if (i === 0) return sequence(gate('CX', x, less), gate('X', less));
    const below = lent[i - 1]!;
    // a ∨ b = ¬(¬a ∧ ¬b)
    if (Math.floor(threshold / 2 ** i) % 2 === 1) {
      return sequence(gate('X', below), gate('AND', x, below, less), gate('X', below), gate('X', less));
    }
    return sequence(gate('X', x), gate('AND', x, below, less), gate('X', x));
  });
  return repeat(steps.length, (i) => steps[i]!);
}

import { gate, nothing, type Operation, repeat, sequence } from '../gates/operation';

/** Toffoli of computing factor · u for a number u of `bits` bits: that many for each 1 of the factor but the lowest. */
export function multipleToffoli(factor: number, bits: number): number {
  return (ones(factor).length - 1) * bits;
}

/** Wires lent while the multiple is held: a sum bit and a carry for each Toffoli. */
export function multipleWires(factor: number, bits: number): number {
  return 2 * multipleToffoli(factor, bits);
}

/** Positions of the bits that are 1, ascending. */
function ones(factor: number): number[] {
  const positions: number[] = [];
  for (let i = 0; 2 ** i <= factor; i++) if (Math.floor(factor / 2 ** i) % 2 === 1) positions.push(i);
  return positions;
}

/**
 * factor · u in wires that stay until the operation is taken back, which is free: shifted copies of u are added one
 * after the other and all carries are kept. The result shares wires with u where nothing is added.
 *
 * @param factor - odd.
 * @param u - lowest bit first; at least as many bits as the factor has.
 * @param lent - `multipleWires` wires in |0⟩.
 * @returns `value`, lowest bit first.
 */
export function multiple(
  factor: number,
  u: readonly number[],
  lent: readonly number[],
): { readonly compute: Operation; readonly value: readonly number[] } {
  const free = [...lent];
  let value: number[] = [...u];
  const steps: Operation[] = [];
  for (const shift of ones(factor).slice(1)) {
    const addend = value;
    const sums: number[] = [];
    let carry = -1;
    for (const [i, bit] of u.entries()) {
      const sum = free.shift()!;
      const next = free.shift()!;
      steps.push(columnSum(bit, addend[shift + i] ?? -1, carry, sum, next));
      sums.push(sum);
      carry = next;
    }
    value = [...addend.slice(0, shift), ...sums, carry];
  }
  return { compute: repeat(steps.length, (i) => steps[i]!), value };
}

/** sum ← x ⊕ y ⊕ carry and next ← majority(x, y, carry); y or carry may be missing (−1), not both. */
function columnSum(x: number, y: number, carry: number, sum: number, next: number): Operation {
  const add = (wire: number) => (wire < 0 ? nothing : gate('CX', wire, sum));
  const bits = sequence(add(x), add(y), add(carry));
  if (y < 0 || carry < 0) return sequence(gate('AND', x, y < 0 ? carry : y, next), bits);
  const unite = sequence(gate('CX', carry, x), gate('CX', carry, y));
  return sequence(unite, gate('AND', x, y, next), gate('CX', carry, next), unite, bits);
}

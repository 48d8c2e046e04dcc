import { type Finding, InputError } from '../../job';
import type { IndexList } from '../readers';
import type { Slot, SlotMap } from './list-slots';
import type { ResolvedPart } from './part';
import { element, SYMMETRY_TOLERANCE, sectorFinding } from './symmetry';

function describeEntry(list: IndexList, part: ResolvedPart, e: number): string {
  const width = part.facts.numIndices;
  const name = list.components === null ? '' : `${part.components[list.components[e]!]} `;
  return `${name}${element([...list.indices.subarray(e * width, (e + 1) * width)])}`;
}

/** Two lines for the same element in the same order. */
export function duplicate(
  list: IndexList,
  part: ResolvedPart,
  first: number,
  second: number,
  plane: Float64Array,
): InputError {
  return new InputError({
    code: 'duplicate-element',
    where: `${list.origin}:${list.lines[second]}`,
    found: `${describeEntry(list, part, second)} = ${plane[second]}, but ${plane[first]} on line ${list.lines[first]}`,
    expected: 'each element once, or twice with the same value',
    mend: 'Remove the wrong line; if the lines are different components, add a component column.',
  });
}

/** Two lines for partners that the role makes equal or opposite. */
export function disagreement(
  list: IndexList,
  part: ResolvedPart,
  first: number,
  second: number,
  plane: Float64Array,
): Finding {
  return {
    severity: 'error',
    code: 'symmetry',
    where: `${list.origin}:${list.lines[second]} (part "${part.id}")`,
    found: `${describeEntry(list, part, second)} = ${plane[second]} but ${describeEntry(list, part, first)} = ${plane[first]} on line ${list.lines[first]}`,
    expected: `partners that agree as the role "${part.role}" demands`,
    mend: 'Check role, "order" and "momentum" of this part.',
  };
}

/** An element that antisymmetry makes zero. */
export function diagonal(list: IndexList, part: ResolvedPart, e: number, value: number): Finding {
  return {
    severity: 'error',
    code: 'symmetry',
    where: `${list.origin}:${list.lines[e]} (part "${part.id}")`,
    found: `${describeEntry(list, part, e)} = ${value}`,
    expected: 'zero, because the array is antisymmetric in this pair',
    mend: 'Check role and "momentum" of this part.',
  };
}

/** What a complete list does not list. */
export function missingPartners(
  list: IndexList,
  part: ResolvedPart,
  map: SlotMap,
  slots: Float64Array,
  firstEntry: Int32Array,
  listed: Uint8Array,
  max: number,
): Finding[] {
  const slot: Slot = { at: 0, order: 0, numOrders: 1, sign: 1 };
  let count = 0;
  let example = -1;
  for (let at = 0; at < slots.length; at++) {
    const e = firstEntry[at]!;
    if (e < 0 || Math.abs(slots[at]!) <= SYMMETRY_TOLERANCE * max) continue;
    map.locate(slot, list, e);
    if (bitCount(listed[at]!) === slot.numOrders) continue;
    if (count === 0) example = e;
    count++;
  }
  if (count === 0) return [];
  return [
    {
      severity: 'error',
      code: 'missing-element',
      where: `${list.origin}:${list.lines[example]} (part "${part.id}")`,
      found: `${describeEntry(list, part, example)} without all its symmetry partners${count > 1 ? `, and ${count - 1} more such elements` : ''}`,
      expected: 'every partner listed, because "fill" is "as-listed" (absent = 0)',
      mend: 'If the file lists each element once, set "fill": "symmetry".',
    },
  ];
}

/** The plane of the other time-reversal sector. */
export function otherPlane(list: IndexList, part: ResolvedPart, imaginary: boolean, max: number): Finding[] {
  if (list.im === null) return [];
  const plane = imaginary ? list.re : list.im;
  const width = part.facts.numIndices;
  let worst = 0;
  let at = 0;
  for (let e = 0; e < list.count; e++) {
    if (Math.abs(plane[e]!) > worst) [worst, at] = [Math.abs(plane[e]!), e];
  }
  const scale = Math.abs(part.factor);
  const indices = [...list.indices.subarray(at * width, (at + 1) * width)];
  return sectorFinding(part, list.origin, scale * worst, scale * max, indices);
}

function bitCount(bits: number): number {
  let count = 0;
  for (let rest = bits; rest > 0; rest >>= 1) count += rest & 1;
  return count;
}

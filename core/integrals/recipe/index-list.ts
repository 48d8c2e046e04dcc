import { type Finding, InputError } from '../../job';
import {
  numAntisymmetricPairs,
  numSymmetricPairs,
  pairsTriangleLength,
  symmetricPair,
} from '../integral-set';
import type { IndexList } from '../readers';
import { tensorIndex } from './eightfold';
import type { ResolvedPart } from './part';
import type { Component } from './recipe';
import { element, SYMMETRY_TOLERANCE, sectorFinding } from './symmetry';

/** A duplicate may differ by this much of the largest element: two printouts of the same number. */
const DUPLICATE_TOLERANCE = 1e-10;

/** Where an element lives in the canonical array, which of its symmetry partners it is, and its sign there. */
interface Slot {
  at: number;
  /** Bit set: which of the orders of the same element was listed. */
  order: number;
  numOrders: number;
  sign: number;
}

/**
 * Fills the canonical array of a part from a list.
 *
 * With "fill": "symmetry" the partners are implied by the role and both listed must agree; with "as-listed" an
 * element that is absent is zero, so a partner that is not listed breaks the symmetry.
 *
 * @returns values in the canonical layout of the role: n×n; 3·n·n; pairs-triangle; six of them; 3 × nanti × npair.
 * @throws InputError `duplicate-element` with both line numbers.
 */
export function convertList(
  list: IndexList,
  part: ResolvedPart,
  n: number,
): { values: Float64Array; findings: Finding[] } {
  const kind = kindOf(part, n);
  const slots = new Float64Array(kind.size);
  const firstEntry = new Int32Array(kind.size).fill(-1);
  const listed = new Uint8Array(kind.size);
  const imaginary = part.facts.values.includes('imaginary');
  const plane = part.value === 'complex' && imaginary ? list.im! : list.re;
  const slot: Slot = { at: 0, order: 0, numOrders: 1, sign: 1 };
  const findings: Finding[] = [];
  let max = 0;
  for (let e = 0; e < list.count; e++) max = Math.max(max, Math.abs(plane[e]!));
  /** Which entry listed exactly this element in this order; only needed to find duplicates. */
  const seen = new Map<number, number>();
  for (let e = 0; e < list.count; e++) {
    kind.locate(slot, list, e);
    const value = slot.sign * plane[e]!;
    if (slot.sign === 0) {
      if (Math.abs(plane[e]!) > SYMMETRY_TOLERANCE * max) findings.push(diagonal(list, part, e, plane[e]!));
      continue;
    }
    const key = slot.at * 8 + slot.order;
    const earlier = seen.get(key);
    if (earlier !== undefined && Math.abs(slots[slot.at]! - value) > DUPLICATE_TOLERANCE * max) {
      throw duplicate(list, part, earlier, e, plane);
    }
    seen.set(key, e);
    const first = firstEntry[slot.at]!;
    if (first < 0) {
      firstEntry[slot.at] = e;
      slots[slot.at] = value;
    } else if (Math.abs(slots[slot.at]! - value) > SYMMETRY_TOLERANCE * max && findings.length < 4) {
      findings.push(disagreement(list, part, first, e, plane));
    }
    listed[slot.at] = listed[slot.at]! | (1 << slot.order);
  }
  if (part.list.asListed) findings.push(...missingPartners(list, part, kind, slots, firstEntry, listed, max));
  findings.push(...otherPlane(list, part, imaginary, max));
  for (let i = 0; i < slots.length; i++) slots[i] = slots[i]! * part.factor;
  return { values: kind.expand(slots), findings };
}

interface Kind {
  readonly size: number;
  locate(slot: Slot, list: IndexList, entry: number): void;
  expand(slots: Float64Array): Float64Array;
}

function kindOf(part: ResolvedPart, n: number): Kind {
  const vectorOf = (list: IndexList, e: number) =>
    'xyz'.indexOf(part.components[list.components?.[e] ?? 0] as Component);
  if (part.facts.numIndices === 2) return twoIndexKind(part, n, vectorOf);
  if (part.facts.components === 'vector') return spinOrbitKind(part, n, vectorOf);
  return eightfoldKind(part, n);
}

function twoIndexKind(part: ResolvedPart, n: number, vectorOf: (list: IndexList, e: number) => number): Kind {
  const vector = part.facts.components === 'vector';
  const pairs = numSymmetricPairs(n);
  return {
    size: (vector ? 3 : 1) * pairs,
    locate(slot, list, e) {
      const [p, q] = [list.indices[2 * e]!, list.indices[2 * e + 1]!];
      slot.at = (vector ? vectorOf(list, e) * pairs : 0) + symmetricPair(p, q);
      slot.order = p < q ? 1 : 0;
      slot.numOrders = p === q ? 1 : 2;
      slot.sign = vector ? Math.sign(p - q) : 1;
    },
    expand(slots) {
      const values = new Float64Array((vector ? 3 : 1) * n * n);
      for (let k = 0; k < values.length / (n * n); k++) {
        for (let p = 0; p < n; p++) {
          for (let q = 0; q <= p; q++) {
            const value = slots[k * pairs + symmetricPair(p, q)]!;
            values[k * n * n + p * n + q] = value;
            if (p !== q) values[k * n * n + q * n + p] = vector ? -value : value;
          }
        }
      }
      return values;
    },
  };
}

function spinOrbitKind(
  part: ResolvedPart,
  n: number,
  vectorOf: (list: IndexList, e: number) => number,
): Kind {
  const [anti, sym] = [numAntisymmetricPairs(n), numSymmetricPairs(n)];
  return {
    size: 3 * anti * sym,
    locate(slot, list, e) {
      const [p, q, r, s] = chemists(part, list, e);
      const high = Math.max(p, q);
      const pair = (high * (high - 1)) / 2 + Math.min(p, q);
      slot.at = (vectorOf(list, e) * anti + pair) * sym + symmetricPair(r, s);
      slot.order = (p < q ? 1 : 0) + (r < s ? 2 : 0);
      slot.numOrders = r === s ? 2 : 4;
      slot.sign = Math.sign(p - q);
    },
    expand: (slots) => slots,
  };
}

function eightfoldKind(part: ResolvedPart, n: number): Kind {
  const size = pairsTriangleLength(n);
  const tensor = part.facts.components === 'tensor';
  return {
    size: (tensor ? 6 : 1) * size,
    locate(slot, list, e) {
      const [p, q, r, s] = chemists(part, list, e);
      const [P, Q] = [symmetricPair(p, q), symmetricPair(r, s)];
      const k = tensor ? tensorIndex(part.components[list.components?.[e] ?? 0]!) : 0;
      slot.at = k * size + symmetricPair(P, Q);
      slot.order = (p < q ? 1 : 0) + (r < s ? 2 : 0) + (P < Q ? 4 : 0);
      slot.numOrders = (p === q ? 1 : 2) * (r === s ? 1 : 2) * (P === Q ? 1 : 2);
      slot.sign = 1;
    },
    expand: (slots) => slots,
  };
}

/** p q r s of (pq|rs), pq the momentum pair where there is one. */
function chemists(part: ResolvedPart, list: IndexList, e: number): [number, number, number, number] {
  const { indices } = list;
  const [i, j, k, l] = [indices[4 * e]!, indices[4 * e + 1]!, indices[4 * e + 2]!, indices[4 * e + 3]!];
  const [p, q, r, s] = part.physicists ? [i, k, j, l] : [i, j, k, l];
  return part.momentumSecond ? [r, s, p, q] : [p, q, r, s];
}

/**
 * The list of a summed spin–orbit part as a full array [component][p][q][r][s] with value as stored, for the
 * conversion that splits it. Partners A_qpsr = −A_pqrs are filled in unless the list is complete by itself.
 */
export function expandSummedList(list: IndexList, part: ResolvedPart, n: number): Float64Array {
  const size = n ** 4;
  const full = new Float64Array(Math.max(1, part.components.length) * size);
  const seen = new Int32Array(full.length).fill(-1);
  const plane = part.value === 'complex' ? list.im! : list.re;
  let max = 0;
  for (let e = 0; e < list.count; e++) max = Math.max(max, Math.abs(plane[e]!));
  for (let e = 0; e < list.count; e++) {
    const [p, q, r, s] = chemists(part, list, e);
    const at = (list.components?.[e] ?? 0) * size + ((p * n + q) * n + r) * n + s;
    const earlier = seen[at]!;
    if (earlier >= 0 && Math.abs(full[at]! - plane[e]!) > DUPLICATE_TOLERANCE * max) {
      throw duplicate(list, part, earlier, e, plane);
    }
    seen[at] = e;
    full[at] = plane[e]!;
  }
  if (part.list.asListed) return full;
  for (let at = 0; at < full.length; at++) {
    if (seen[at]! < 0) continue;
    const c = Math.floor(at / size);
    const [p, q, r, s] = [
      Math.floor(at / n ** 3) % n,
      Math.floor(at / n ** 2) % n,
      Math.floor(at / n) % n,
      at % n,
    ];
    const partner = c * size + ((q * n + p) * n + s) * n + r;
    if (seen[partner]! < 0) full[partner] = -full[at]!;
  }
  return full;
}

function describeEntry(list: IndexList, part: ResolvedPart, e: number): string {
  const width = part.facts.numIndices;
  const name = list.components === null ? '' : `${part.components[list.components[e]!]} `;
  return `${name}${element([...list.indices.subarray(e * width, (e + 1) * width)])}`;
}

function duplicate(
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

function disagreement(
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

function diagonal(list: IndexList, part: ResolvedPart, e: number, value: number): Finding {
  return {
    severity: 'error',
    code: 'symmetry',
    where: `${list.origin}:${list.lines[e]} (part "${part.id}")`,
    found: `${describeEntry(list, part, e)} = ${value}`,
    expected: 'zero, because the array is antisymmetric in this pair',
    mend: 'Check role and "momentum" of this part.',
  };
}

function missingPartners(
  list: IndexList,
  part: ResolvedPart,
  kind: Kind,
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
    kind.locate(slot, list, e);
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

function otherPlane(list: IndexList, part: ResolvedPart, imaginary: boolean, max: number): Finding[] {
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

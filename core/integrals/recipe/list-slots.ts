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

/** Where an element lives in the canonical array, which of its symmetry partners it is, and its sign there. */
export interface Slot {
  at: number;
  /** Bit set: which of the orders of the same element was listed. */
  order: number;
  numOrders: number;
  sign: number;
}

/** How a role maps listed elements to its canonical array. */
export interface SlotMap {
  readonly size: number;
  locate(slot: Slot, list: IndexList, entry: number): void;
  expand(slots: Float64Array): Float64Array;
}

/** The map of a part's role. */
export function slotMap(part: ResolvedPart, n: number): SlotMap {
  const vectorOf = (list: IndexList, e: number) =>
    'xyz'.indexOf(part.components[list.components?.[e] ?? 0] as Component);
  if (part.facts.numIndices === 2) return twoIndexMap(part, n, vectorOf);
  if (part.facts.components === 'vector') return spinOrbitMap(part, n, vectorOf);
  return eightfoldMap(part, n);
}

function twoIndexMap(
  part: ResolvedPart,
  n: number,
  vectorOf: (list: IndexList, e: number) => number,
): SlotMap {
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

function spinOrbitMap(
  part: ResolvedPart,
  n: number,
  vectorOf: (list: IndexList, e: number) => number,
): SlotMap {
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

function eightfoldMap(part: ResolvedPart, n: number): SlotMap {
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
export function chemists(part: ResolvedPart, list: IndexList, e: number): [number, number, number, number] {
  const { indices } = list;
  const [i, j, k, l] = [indices[4 * e]!, indices[4 * e + 1]!, indices[4 * e + 2]!, indices[4 * e + 3]!];
  const [p, q, r, s] = part.physicists ? [i, k, j, l] : [i, j, k, l];
  return part.momentumSecond ? [r, s, p, q] : [p, q, r, s];
}

import type { Finding, JobContext } from '../../job';
import type { IndexList } from '../readers';
import { diagonal, disagreement, duplicate, missingPartners, otherPlane } from './list-findings';
import { chemists, type Slot, type SlotMap, slotMap } from './list-slots';
import type { ResolvedPart } from './part';
import { SYMMETRY_TOLERANCE } from './symmetry';

/** A duplicate may differ by this much of the largest element: two printouts of the same number. */
const DUPLICATE_TOLERANCE = 1e-10;
/** Entries between two checkpoints. */
const BLOCK = 65536;

/**
 * Fills the canonical array of a part from a list.
 *
 * With "fill": "symmetry" the partners are implied by the role and both listed must agree; with "as-listed" an
 * element that is absent is zero, so a partner that is not listed breaks the symmetry.
 *
 * @returns values in the canonical layout of the role: n×n; 3·n·n; pairs-triangle; six of them; 3 × nanti × npair.
 * @throws InputError `duplicate-element` with both line numbers.
 */
export async function convertList(
  list: IndexList,
  part: ResolvedPart,
  n: number,
  context: JobContext,
): Promise<{ values: Float64Array; findings: Finding[] }> {
  const map = slotMap(part, n);
  const slots = new Float64Array(map.size);
  const firstEntry = new Int32Array(map.size).fill(-1);
  // One bit an order: which of the partners of a slot were listed.
  const listed = new Uint8Array(map.size);
  const imaginary = part.facts.values.includes('imaginary');
  const plane = part.value === 'complex' && imaginary ? list.im! : list.re;
  const max = largest(plane, list.count);
  const slot: Slot = { at: 0, order: 0, numOrders: 1, sign: 1 };
  const findings: Finding[] = [];
  for (let e = 0; e < list.count; e++) {
    if (e % BLOCK === 0) await context.checkpoint();
    map.locate(slot, list, e);
    const { at, order, sign } = slot;
    if (sign === 0) {
      if (Math.abs(plane[e]!) > SYMMETRY_TOLERANCE * max && findings.length < 4) {
        findings.push(diagonal(list, part, e, plane[e]!));
      }
      continue;
    }
    const value = sign * plane[e]!;
    if (firstEntry[at]! < 0) {
      firstEntry[at] = e;
      slots[at] = value;
    } else {
      const off = Math.abs(slots[at]! - value);
      if (off > DUPLICATE_TOLERANCE * max && listed[at]! & (1 << order)) {
        const earlier = earlierEntry(map, list, e, at, order);
        if (Math.abs(plane[earlier]! - plane[e]!) > DUPLICATE_TOLERANCE * max) {
          throw duplicate(list, part, earlier, e, plane);
        }
      }
      if (off > SYMMETRY_TOLERANCE * max && findings.length < 4) {
        findings.push(disagreement(list, part, firstEntry[at]!, e, plane));
      }
    }
    listed[at] = listed[at]! | (1 << order);
  }
  if (part.list.asListed) findings.push(...missingPartners(list, part, map, slots, firstEntry, listed, max));
  findings.push(...otherPlane(list, part, imaginary, max));
  for (let i = 0; i < slots.length; i++) slots[i] = slots[i]! * part.factor;
  return { values: map.expand(slots), findings };
}

function largest(values: Float64Array, count: number): number {
  let max = 0;
  for (let e = 0; e < count; e++) max = Math.max(max, Math.abs(values[e]!));
  return max;
}

/** The last entry before `before` in the same slot and order. Only looked for once two differ. */
function earlierEntry(map: SlotMap, list: IndexList, before: number, at: number, order: number): number {
  const slot: Slot = { at: 0, order: 0, numOrders: 1, sign: 1 };
  for (let e = before - 1; e >= 0; e--) {
    map.locate(slot, list, e);
    if (slot.at === at && slot.order === order && slot.sign !== 0) return e;
  }
  return before;
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
  const max = largest(plane, list.count);
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

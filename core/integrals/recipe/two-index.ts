import type { Finding } from '../../job';
import { symmetricPair } from '../integral-set';
import type { ResolvedPart } from './part';
import type { Component } from './recipe';
import type { StoredArray } from './stored';
import { Deviation, element, SYMMETRY_TOLERANCE, sectorFinding, symmetryFinding } from './symmetry';

const AXES: readonly Component[] = ['x', 'y', 'z'];

/**
 * Applies the conventions of a one-electron part.
 *
 * @returns `values`: n×n real symmetric for a charge part, 3·n·n real antisymmetric (A of iA) for a spin part, in
 *   hartree; components the part does not have are zero. `findings`: broken symmetries, mixed sectors.
 */
export function convertTwoIndex(
  stored: StoredArray,
  part: ResolvedPart,
  n: number,
): { values: Float64Array; findings: Finding[] } {
  const vector = part.facts.components === 'vector';
  const sign = vector ? -1 : 1;
  const values = new Float64Array((vector ? 3 : 1) * n * n);
  const deviation = new Deviation();
  const otherDeviation = { max: 0, at: [0, 0] as readonly number[] };
  const names: readonly (Component | null)[] = vector ? part.components : [null];
  for (const [c, name] of names.entries()) {
    const out = name === null ? 0 : AXES.indexOf(name) * n * n;
    const get = reader(stored, part, n, c, stored.plane, sign);
    for (let p = 0; p < n; p++) {
      for (let q = 0; q <= p; q++) {
        const a = part.factor * get(p, q);
        const b = part.factor * get(q, p);
        deviation.max = Math.max(deviation.max, Math.abs(a), Math.abs(b));
        deviation.note(Math.abs(a - sign * b), [p, q], [q, p], [a, b], name);
        values[out + p * n + q] = p === q && vector ? 0 : a;
        values[out + q * n + p] = p === q && vector ? 0 : sign * a;
      }
    }
    if (stored.otherPlane === null) continue;
    const other = reader(stored, part, n, c, stored.otherPlane, -sign);
    for (let p = 0; p < n; p++) {
      for (let q = 0; q < n; q++) {
        const size = Math.abs(part.factor * other(p, q));
        if (size > otherDeviation.max) Object.assign(otherDeviation, { max: size, at: [p, q] });
      }
    }
  }
  const mend = deviation.isBroken ? cure(stored, part, n, sign) : '';
  const expected = vector ? 'a real antisymmetric array (A of iA)' : 'a real symmetric array';
  return {
    values,
    findings: [
      ...symmetryFinding(part, stored.origin, deviation, expected, mend),
      ...sectorFinding(part, stored.origin, otherDeviation.max, deviation.max, otherDeviation.at),
    ],
  };
}

/** Stored element (p, q) of component c, without the factor. Triangles imply the other half with `sign`. */
function reader(stored: StoredArray, part: ResolvedPart, n: number, c: number, plane: number, sign: number) {
  const { data, stride, componentStride } = stored;
  const start = plane + c * componentStride;
  switch (part.layout) {
    case 'lower-triangle':
      return (p: number, q: number) => (p >= q ? 1 : sign) * data[start + stride * symmetricPair(p, q)]!;
    case 'strict-lower-triangle':
      return (p: number, q: number) => {
        if (p === q) return 0;
        const [high, low] = p > q ? [p, q] : [q, p];
        return (p > q ? 1 : sign) * data[start + stride * ((high * (high - 1)) / 2 + low)]!;
      };
    default:
      return (p: number, q: number) => data[start + stride * (p * n + q)]!;
  }
}

/** Looks whether the array has the opposite symmetry, which names the mistake. */
function cure(stored: StoredArray, part: ResolvedPart, n: number, sign: number): string {
  const get = reader(stored, part, n, 0, stored.plane, sign);
  const opposite = new Deviation();
  let where: readonly number[] = [0, 0];
  for (let p = 0; p < n; p++) {
    for (let q = 0; q < n; q++) {
      const [a, b] = [get(p, q), get(q, p)];
      if (Math.abs(a) > opposite.max) where = [p, q];
      opposite.max = Math.max(opposite.max, Math.abs(a));
      opposite.note(Math.abs(a + sign * b), [p, q], [q, p], [a, b]);
    }
  }
  if (opposite.worst <= SYMMETRY_TOLERANCE * opposite.max && opposite.max > 0) {
    return sign < 0
      ? `The array is symmetric (largest element at ${element(where)}): if it is spin-free, its role is "one-electron".`
      : `The array is antisymmetric (largest element at ${element(where)}): if it is spin–orbit, its role is "one-electron spin-orbit".`;
  }
  return 'Only one triangle may be filled (then choose a triangle layout), or the axes or the component axis are in another order.';
}

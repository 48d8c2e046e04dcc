import type { Finding, JobContext } from '../../job';
import { numSymmetricPairs, pairsTriangleLength } from '../integral-set';
import type { ResolvedPart } from './part';
import type { Component, TensorComponent } from './recipe';
import type { StoredArray } from './stored';
import { Deviation, sectorFinding, symmetryFinding, unpair } from './symmetry';

/** Order of the six components in a spin–spin part. */
export const TENSOR: readonly TensorComponent[] = ['xx', 'xy', 'xz', 'yy', 'yz', 'zz'];

/** Position of kl (or lk) among the six. */
export function tensorIndex(name: Component): number {
  const direct = TENSOR.indexOf(name as TensorComponent);
  return direct >= 0 ? direct : TENSOR.indexOf((name[1]! + name[0]!) as TensorComponent);
}

/**
 * Applies the conventions of a two-electron array with eightfold symmetry: Coulomb, Darwin, spin–spin (six
 * components, or nine of which kl and lk must agree) and contact.
 *
 * @returns `values`: one pairs-triangle, or six one after the other for the role spin-spin, in hartree.
 */
export async function convertEightfold(
  stored: StoredArray,
  part: ResolvedPart,
  n: number,
  context: JobContext,
): Promise<{ values: Float64Array; findings: Finding[] }> {
  const tensor = part.facts.components === 'tensor';
  const size = pairsTriangleLength(n);
  const names: readonly (Component | null)[] = tensor ? part.components : [null];
  const deviation = new Deviation();
  const transposed = new Deviation();
  const findings: Finding[] = [];
  const inPlace = part.layout === 'pairs-triangle' && stored.stride === 1 && (!tensor || isCanonical(names));
  if (inPlace) {
    const values = stored.data;
    for (let i = 0; i < values.length; i++) values[i] = values[i]! * part.factor;
    return { values, findings };
  }
  const values = new Float64Array((tensor ? 6 : 1) * size);
  const filled = new Map<number, Component>();
  for (const [c, name] of names.entries()) {
    const slot = name === null ? 0 : tensorIndex(name);
    const earlier = filled.get(slot);
    const out =
      earlier === undefined ? values.subarray(slot * size, (slot + 1) * size) : new Float64Array(size);
    await fillTriangle(out, stored, part, n, c, name, deviation, context);
    if (earlier !== undefined) compareTriangles(values.subarray(slot * size), out, n, earlier, transposed);
    filled.set(slot, name!);
    if (stored.otherPlane !== null) findings.push(...checkOtherPlane(stored, part, n, c, deviation.max));
  }
  transposed.max = deviation.max;
  const mend = deviation.isBroken ? await cure(stored, part, n, context) : '';
  return {
    values,
    findings: [
      ...symmetryFinding(part, stored.origin, deviation, expectation(part), mend),
      ...symmetryFinding(
        part,
        stored.origin,
        transposed,
        'equal components kl and lk',
        'Components are in another order than the recipe says.',
      ),
      ...findings,
    ],
  };
}

const isCanonical = (names: readonly (Component | null)[]) =>
  names.length === 6 && names.every((name, c) => name === TENSOR[c]);

const expectation = (part: ResolvedPart) =>
  part.layout === 'pairs' ? 'a matrix over pairs that is symmetric' : 'a real array with eightfold symmetry';

/** Strides of p, q, r, s in a full array, so that (pq|rs) is the element in chemists' order. */
export function fullStrides(part: ResolvedPart, n: number, stride: number): [number, number, number, number] {
  const [n3, n2] = [stride * n ** 3, stride * n ** 2];
  const n1 = stride * n;
  // Physicists' order stores p r q s. With the momentum pair second, what is called pq here was written as rs.
  const [first, second, third, fourth] = part.physicists ? [n3, n1, n2, stride] : [n3, n2, n1, stride];
  return part.momentumSecond ? [third, fourth, first, second] : [first, second, third, fourth];
}

async function fillTriangle(
  out: Float64Array,
  stored: StoredArray,
  part: ResolvedPart,
  n: number,
  c: number,
  name: Component | null,
  deviation: Deviation,
  context: JobContext,
): Promise<void> {
  const start = stored.plane + c * stored.componentStride;
  if (part.layout === 'full') await fillFromFull(out, stored, part, n, start, name, deviation, context);
  else if (part.layout === 'pairs') fillFromPairs(out, stored, part, n, start, name, deviation);
  else {
    const { data, stride } = stored;
    for (let i = 0; i < out.length; i++) {
      out[i] = part.factor * data[start + i * stride]!;
      deviation.max = Math.max(deviation.max, Math.abs(out[i]!));
    }
  }
}

/** One of the eight orders is used; how far the other seven are off is noted. */
async function fillFromFull(
  out: Float64Array,
  stored: StoredArray,
  part: ResolvedPart,
  n: number,
  start: number,
  name: Component | null,
  deviation: Deviation,
  context: JobContext,
): Promise<void> {
  const { data } = stored;
  const { factor } = part;
  const [dp, dq, dr, ds] = fullStrides(part, n, stored.stride);
  const at = new Int32Array(8);
  let position = 0;
  for (let p = 0; p < n; p++) {
    await context.checkpoint();
    for (let q = 0; q <= p; q++) {
      const [pq, qp] = [start + p * dp + q * dq, start + q * dp + p * dq];
      const [pqSecond, qpSecond] = [start + p * dr + q * ds, start + q * dr + p * ds];
      for (let r = 0; r <= p; r++) {
        const lastS = r === p ? q : r;
        for (let s = 0; s <= lastS; s++) {
          const [rs, sr] = [r * dr + s * ds, s * dr + r * ds];
          const [rsFirst, srFirst] = [r * dp + s * dq, s * dp + r * dq];
          at[0] = pq + rs;
          at[1] = qp + rs;
          at[2] = pq + sr;
          at[3] = qp + sr;
          at[4] = pqSecond + rsFirst;
          at[5] = qpSecond + rsFirst;
          at[6] = pqSecond + srFirst;
          at[7] = qpSecond + srFirst;
          const value = factor * data[at[0]]!;
          out[position++] = value;
          if (Math.abs(value) > deviation.max) deviation.max = Math.abs(value);
          for (let k = 1; k < 8; k++) {
            const partner = factor * data[at[k]!]!;
            if (Math.abs(partner) > deviation.max) deviation.max = Math.abs(partner);
            const off = Math.abs(partner - value);
            if (off > deviation.worst) {
              deviation.note(off, [p, q, r, s], permuted(p, q, r, s, k), [value, partner], name);
            }
          }
        }
      }
    }
  }
}

/** Bits of k: p↔q, r↔s, and the two pairs. */
function permuted(p: number, q: number, r: number, s: number, k: number): number[] {
  const first = k & 1 ? [q, p] : [p, q];
  const second = k & 2 ? [s, r] : [r, s];
  return k & 4 ? [...second, ...first] : [...first, ...second];
}

function fillFromPairs(
  out: Float64Array,
  stored: StoredArray,
  part: ResolvedPart,
  n: number,
  start: number,
  name: Component | null,
  deviation: Deviation,
): void {
  const { data, stride } = stored;
  const pairs = numSymmetricPairs(n);
  for (let P = 0, position = 0; P < pairs; P++) {
    for (let Q = 0; Q <= P; Q++, position++) {
      const value = part.factor * data[start + stride * (P * pairs + Q)]!;
      const partner = part.factor * data[start + stride * (Q * pairs + P)]!;
      out[position] = value;
      deviation.max = Math.max(deviation.max, Math.abs(value), Math.abs(partner));
      if (Math.abs(value - partner) > deviation.worst) {
        const [pq, rs] = [unpair(P), unpair(Q)];
        deviation.note(Math.abs(value - partner), [...pq, ...rs], [...rs, ...pq], [value, partner], name);
      }
    }
  }
}

function compareTriangles(
  a: Float64Array,
  b: Float64Array,
  n: number,
  name: Component,
  worst: Deviation,
): void {
  const pairs = numSymmetricPairs(n);
  for (let P = 0, position = 0; P < pairs; P++) {
    for (let Q = 0; Q <= P; Q++, position++) {
      const difference = Math.abs(a[position]! - b[position]!);
      if (difference <= worst.worst) continue;
      const indices = [...unpair(P), ...unpair(Q)];
      worst.note(difference, indices, indices, [a[position]!, b[position]!], name);
    }
  }
}

function checkOtherPlane(
  stored: StoredArray,
  part: ResolvedPart,
  n: number,
  c: number,
  max: number,
): Finding[] {
  const start = stored.otherPlane! + c * stored.componentStride;
  const size = part.layout === 'full' ? n ** 4 : numSymmetricPairs(n) ** 2;
  const length = part.layout === 'pairs-triangle' ? pairsTriangleLength(n) : size;
  let worst = 0;
  let at = 0;
  for (let i = 0; i < length; i++) {
    const value = Math.abs(part.factor * stored.data[start + i * stored.stride]!);
    if (value > worst) [worst, at] = [value, i];
  }
  return sectorFinding(part, stored.origin, worst, max, storedIndices(at, part, n));
}

/** Indices of a flat position as the file orders them: four orbitals of a full array, else the position itself. */
export function storedIndices(at: number, part: ResolvedPart, n: number): number[] {
  if (part.layout !== 'full') return [at];
  return [Math.floor(at / n ** 3), Math.floor(at / n ** 2) % n, Math.floor(at / n) % n, at % n];
}

/** Tries the other reading order of a full array: if it gives the symmetry, it names the mistake. */
async function cure(
  stored: StoredArray,
  part: ResolvedPart,
  n: number,
  context: JobContext,
): Promise<string> {
  if (part.layout === 'full') {
    const trial = new Deviation();
    const swapped = { ...part, physicists: !part.physicists };
    const out = new Float64Array(pairsTriangleLength(n));
    await fillFromFull(out, stored, swapped, n, stored.plane, null, trial, context);
    if (!trial.isBroken && trial.max > 0) {
      return `The symmetry holds with "order": "${swapped.physicists ? 'physicists' : 'chemists'}".`;
    }
  }
  return 'Not all permutations may be filled (then use an index-list with "fill": "symmetry"), or the axes, the role or the component axis differ.';
}

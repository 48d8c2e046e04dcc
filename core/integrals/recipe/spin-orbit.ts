import type { Finding, JobContext } from '../../job';
import { numAntisymmetricPairs, numSymmetricPairs, type SpinOrbitPart, symmetricPair } from '../integral-set';
import { fullStrides, storedIndices } from './eightfold';
import type { ResolvedPart } from './part';
import type { Component } from './recipe';
import type { StoredArray } from './stored';
import { Deviation, SYMMETRY_TOLERANCE, sectorFinding, symmetryFinding } from './symmetry';

type SpinOrbitArrays = Pick<SpinOrbitPart, 'same' | 'other'>;

const AXES: readonly Component[] = ['x', 'y', 'z'];

/**
 * Applies the conventions of a two-electron spin–orbit array: same-orbit, other-orbit, both in one array, or
 * the sum Im g^{k0} = S_pq,rs + O_rs,pq, which its symmetry splits in two.
 *
 * @returns arrays of 3 × nanti × npair, in hartree. A packed array in canonical order is scaled in place and used
 *   as it is: no second copy of the largest array of a set.
 */
export async function convertSpinOrbit(
  stored: StoredArray,
  part: ResolvedPart,
  n: number,
  context: JobContext,
): Promise<{ arrays: SpinOrbitArrays; findings: Finding[] }> {
  if (part.role === 'two-electron spin-orbit summed') return convertSummed(stored, part, n, context);
  const { values, findings } =
    part.layout === 'full' ? await fromFull(stored, part, n, context) : fromPacked(stored, part, n);
  return { arrays: asRole(part, values), findings };
}

/** Puts a converted array where its role says. */
export function asRole(part: ResolvedPart, values: Float64Array): SpinOrbitArrays {
  if (part.role === 'two-electron spin-same-orbit') return { same: values, other: null };
  if (part.role === 'two-electron spin-other-orbit') return { same: null, other: values };
  // Spin–other-orbit is the same integral with 2s_j in place of s_i: twice the array in the σ convention too.
  return { same: values, other: { timesSame: 2 } };
}

function fromPacked(stored: StoredArray, part: ResolvedPart, n: number) {
  const [anti, sym] = [numAntisymmetricPairs(n), numSymmetricPairs(n)];
  const { data, stride } = stored;
  const isCanonical = part.components.length === 3 && part.components.every((name, c) => name === AXES[c]);
  if (isCanonical && stride === 1 && !part.momentumSecond) {
    if (part.factor !== 1) for (let i = 0; i < data.length; i++) data[i] = data[i]! * part.factor;
    return { values: data, findings: [] };
  }
  const values = new Float64Array(3 * anti * sym);
  const findings: Finding[] = [];
  let max = 0;
  for (const [c, name] of part.components.entries()) {
    const out = AXES.indexOf(name) * anti * sym;
    const start = stored.plane + c * stored.componentStride;
    const [da, ds] = part.momentumSecond ? [1, anti] : [sym, 1];
    for (let a = 0; a < anti; a++) {
      for (let s = 0; s < sym; s++) {
        const value = part.factor * data[start + stride * (a * da + s * ds)]!;
        values[out + a * sym + s] = value;
        max = Math.max(max, Math.abs(value));
      }
    }
  }
  for (let c = 0; c < part.components.length; c++) findings.push(...checkOtherPlane(stored, part, n, c, max));
  return { values, findings };
}

async function fromFull(stored: StoredArray, part: ResolvedPart, n: number, context: JobContext) {
  const [anti, sym] = [numAntisymmetricPairs(n), numSymmetricPairs(n)];
  const values = new Float64Array(3 * anti * sym);
  const findings: Finding[] = [];
  const deviation = new Deviation();
  for (const [c, name] of part.components.entries()) {
    const out = values.subarray(AXES.indexOf(name) * anti * sym);
    await fillFromFull(out, stored, part, n, c, deviation, context);
  }
  for (let c = 0; c < part.components.length; c++) {
    findings.push(...checkOtherPlane(stored, part, n, c, deviation.max));
  }
  const expected = 'an array antisymmetric in its momentum pair and symmetric in the other';
  const mend = deviation.isBroken ? await cure(stored, part, n, context) : '';
  findings.push(...symmetryFinding(part, stored.origin, deviation, expected, mend));
  return { values, findings };
}

/** Fills one component, nanti × npair, and notes how far the other three orders and the diagonal p = q are off. */
async function fillFromFull(
  out: Float64Array,
  stored: StoredArray,
  part: ResolvedPart,
  n: number,
  c: number,
  deviation: Deviation,
  context: JobContext,
): Promise<void> {
  const { data } = stored;
  const { factor } = part;
  const name = part.components[c]!;
  const start = stored.plane + c * stored.componentStride;
  const [dp, dq, dr, ds] = fullStrides(part, n, stored.stride);
  let max = deviation.max;
  let worst = deviation.worst;
  let position = 0;
  for (let p = 0; p < n; p++) {
    await context.checkpoint();
    for (let q = 0; q <= p; q++) {
      for (let r = 0; r < n; r++) {
        for (let s = 0; s <= r; s++) {
          const a = factor * data[start + p * dp + q * dq + r * dr + s * ds]!;
          const swapRs = factor * data[start + p * dp + q * dq + s * dr + r * ds]!;
          const swapPq = factor * data[start + q * dp + p * dq + r * dr + s * ds]!;
          const swapBoth = factor * data[start + q * dp + p * dq + s * dr + r * ds]!;
          max = Math.max(max, Math.abs(a), Math.abs(swapRs), Math.abs(swapPq), Math.abs(swapBoth));
          const off = Math.max(Math.abs(a - swapRs), Math.abs(a + swapPq), Math.abs(a + swapBoth));
          if (off > worst) {
            worst = off;
            if (off === Math.abs(a - swapRs))
              deviation.note(off, [p, q, r, s], [p, q, s, r], [a, swapRs], name);
            else if (off === Math.abs(a + swapPq))
              deviation.note(off, [p, q, r, s], [q, p, r, s], [a, swapPq], name);
            else deviation.note(off, [p, q, r, s], [q, p, s, r], [a, swapBoth], name);
          }
          if (p > q) out[position++] = a;
        }
      }
    }
  }
  deviation.max = max;
}

/**
 * A = Im g^{k0} with A_pqrs = −A_qpsr. Its part antisymmetric in pq is S, symmetric in rs; the part symmetric in
 * pq is O_rs,pq, antisymmetric in rs.
 */
async function convertSummed(stored: StoredArray, part: ResolvedPart, n: number, context: JobContext) {
  const [anti, sym] = [numAntisymmetricPairs(n), numSymmetricPairs(n)];
  const same = new Float64Array(3 * anti * sym);
  const other = new Float64Array(3 * anti * sym);
  const findings: Finding[] = [];
  const deviation = new Deviation();
  const { data } = stored;
  const [dp, dq, dr, ds] = fullStrides(part, n, stored.stride);
  for (const [c, name] of part.components.entries()) {
    const out = AXES.indexOf(name) * anti * sym;
    const start = stored.plane + c * stored.componentStride;
    const get = (p: number, q: number, r: number, s: number) =>
      part.factor * data[start + p * dp + q * dq + r * dr + s * ds]!;
    for (let p = 0; p < n; p++) {
      await context.checkpoint();
      for (let q = 0; q <= p; q++) {
        for (let r = 0; r < n; r++) {
          for (let s = 0; s < n; s++) {
            const a = get(p, q, r, s);
            const reversed = get(q, p, s, r);
            deviation.max = Math.max(deviation.max, Math.abs(a), Math.abs(reversed));
            if (Math.abs(a + reversed) > deviation.worst) {
              deviation.note(Math.abs(a + reversed), [p, q, r, s], [q, p, s, r], [a, reversed], name);
            }
            const swapped = get(q, p, r, s);
            if (p > q && r >= s) {
              const pair = (p * (p - 1)) / 2 + q;
              same[out + pair * sym + symmetricPair(r, s)] = 0.5 * (a - swapped);
            }
            if (r > s) {
              const pair = (r * (r - 1)) / 2 + s;
              other[out + pair * sym + symmetricPair(p, q)] = 0.5 * (a + swapped);
            }
          }
        }
      }
    }
  }
  for (let c = 0; c < part.components.length; c++) {
    findings.push(...checkOtherPlane(stored, part, n, c, deviation.max));
  }
  const expected = 'A_pqrs = −A_qpsr for the imaginary part of g^{k0}';
  findings.push(
    ...symmetryFinding(
      part,
      stored.origin,
      deviation,
      expected,
      part.physicists
        ? 'The order may be chemists’.'
        : 'The order may be physicists’, or the array is real symmetric and no spin–orbit array.',
    ),
  );
  return { arrays: { same, other }, findings };
}

function checkOtherPlane(
  stored: StoredArray,
  part: ResolvedPart,
  n: number,
  c: number,
  max: number,
): Finding[] {
  if (stored.otherPlane === null) return [];
  const start = stored.otherPlane + c * stored.componentStride;
  const length = part.layout === 'full' ? n ** 4 : numAntisymmetricPairs(n) * numSymmetricPairs(n);
  let worst = 0;
  let at = 0;
  for (let i = 0; i < length; i++) {
    const value = Math.abs(part.factor * stored.data[start + i * stored.stride]!);
    if (value > worst) [worst, at] = [value, i];
  }
  return sectorFinding(part, stored.origin, worst, max, storedIndices(at, part, n));
}

/** Reads the array in the other conventions; the one whose symmetry holds names the mistake. */
async function cure(
  stored: StoredArray,
  part: ResolvedPart,
  n: number,
  context: JobContext,
): Promise<string> {
  const trials: readonly [Partial<ResolvedPart>, string][] = [
    [{ momentumSecond: !part.momentumSecond }, `"momentum": "${part.momentumSecond ? 'first' : 'second'}"`],
    [{ physicists: !part.physicists }, `"order": "${part.physicists ? 'chemists' : 'physicists'}"`],
    [
      { physicists: !part.physicists, momentumSecond: !part.momentumSecond },
      `"order": "${part.physicists ? 'chemists' : 'physicists'}" and "momentum": "${part.momentumSecond ? 'first' : 'second'}"`,
    ],
  ];
  const out = new Float64Array(numAntisymmetricPairs(n) * numSymmetricPairs(n));
  for (const [change, text] of trials) {
    const trial = new Deviation();
    await fillFromFull(out, stored, { ...part, ...change }, n, 0, trial, context);
    if (trial.max > 0 && trial.worst <= SYMMETRY_TOLERANCE * trial.max)
      return `The symmetry holds with ${text}.`;
  }
  const summed = await convertSummed(stored, { ...part, components: [part.components[0]!] }, n, context);
  if (summed.findings.every((finding) => finding.code !== 'symmetry')) {
    return 'It is antisymmetric under p↔q with r↔s together: its role may be "two-electron spin-orbit summed".';
  }
  return 'Symmetric where antisymmetric is due: wrong role, wrong axes, or only a part of the permutations is filled.';
}

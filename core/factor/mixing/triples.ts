import { numAntisymmetricPairs, numSymmetricPairs } from '../../integrals/integral-set';
import type { JobContext, Task } from '../../job';
import { multiply, symmetricEigenvalues } from '../../linalg';
import { planeInto } from '../elements';
import { addPairs, antisymmetricNorm, shiftedNorms, smoothMedian } from '../smooth-norms';
import type { MixingProblem, MixingValue } from './descent';
import { exponential } from './exponential';
import { oneBodyNorm } from './one-body';

/** Triples of one Cartesian component, w = Σ a ⊗ S, in √hartree each, and a shift of each S. */
export interface TriplePoint {
  readonly count: number;
  /** count × nanti. */
  readonly antisymmetric: Float64Array;
  /** count × npair. */
  readonly symmetric: Float64Array;
  readonly shifts: Float64Array;
  /** Triples of different classes have no coordinate in common (spatial symmetry, mostly) and are never mixed. */
  readonly classes: Int32Array;
}

/** What λ of the triples of one component depends on, besides them. */
export interface TripleSetting {
  readonly n: number;
  readonly sameScale: number;
  readonly otherScale: number;
  /** n×n antisymmetric plane of κ of the component, hartree, without any shift. */
  readonly kappa: Float64Array;
  /** η − N. */
  readonly excess: number;
}

interface ChunkInput extends Omit<TripleSetting, 'kappa' | 'excess'> {
  readonly antisymmetric: Float64Array;
  readonly symmetric: Float64Array;
  readonly shifts: Float64Array;
  /** δ of a and of S. */
  readonly deltas: readonly [number, number];
}

interface ChunkOutput {
  readonly smooth: number;
  readonly exact: number;
  readonly antisymmetric: Float64Array;
  readonly symmetric: Float64Array;
  readonly shifts: Float64Array;
}

/** Σ ‖a‖_* (|same|·‖S − c‖_* + |other|·‖S‖_*) of a batch of triples, and its derivatives. */
export const tripleMixingTask: Task<ChunkInput, ChunkOutput> = {
  name: 'factor.mixing-triples',
  async run({ n, sameScale, otherScale, antisymmetric, symmetric, shifts, deltas }, ctx) {
    const [nanti, npair] = [numAntisymmetricPairs(n), numSymmetricPairs(n)];
    const plane = new Float64Array(n * n);
    const out = {
      antisymmetric: new Float64Array(antisymmetric.length),
      symmetric: new Float64Array(symmetric.length),
      shifts: new Float64Array(shifts.length),
    };
    const weights = [Math.abs(sameScale), Math.abs(otherScale)];
    let smooth = 0;
    let exact = 0;
    for (let t = 0; t < shifts.length; t++) {
      await ctx.checkpoint();
      planeInto(plane, 0, antisymmetric, t * nanti, n, false);
      const a = antisymmetricNorm(plane, n, deltas[0]);
      planeInto(plane, 0, symmetric, t * npair, n, true);
      const s = shiftedNorms(plane, n, [shifts[t]!, 0], weights, deltas[1]);
      smooth += a.norm * s.norm;
      exact += a.exact * s.exact;
      // The derivative of 2 Σ s(a_j) with respect to the plane is its direction.
      addPairs(out.antisymmetric, t * nanti, a.direction, n, false, s.norm);
      addPairs(out.symmetric, t * npair, s.direction, n, true, a.norm);
      out.shifts[t] = -a.norm * weights[0]! * s.slopes[0]!;
    }
    return { smooth, exact, ...out };
  },
};

/** Triples in one piece of parallel work. */
const CHUNK = 32;

/**
 * Mixing of triples: Σ a ⊗ S = Aᵀ B is unchanged when A is multiplied by an invertible M and B by M⁻ᵀ.
 *
 * Tangent: count × count generators of M, then the shifts. Nothing holds M back but λ itself: the sum of norms bounds every
 * triple, so that M cannot run away.
 */
export function tripleProblem(
  setting: TripleSetting,
  start: Pick<TriplePoint, 'antisymmetric' | 'symmetric'>,
  ctx: JobContext,
): MixingProblem<TriplePoint> {
  const { n } = setting;
  const [nanti, npair] = [numAntisymmetricPairs(n), numSymmetricPairs(n)];
  const scales = [largestRow(start.antisymmetric, nanti), largestRow(start.symmetric, npair)] as const;
  return {
    value: (point, width) => tripleValue(setting, scales, point, width, ctx),
    move: (point, direction, length) => {
      const { count, antisymmetric, symmetric, shifts, classes } = point;
      const generator = direction.subarray(0, count * count);
      const turn = exponential(generator, count, length, classes);
      const inverse = exponential(generator, count, -length, classes);
      return {
        ...point,
        antisymmetric: multiply(turn, antisymmetric, count, count, nanti),
        symmetric: multiply(inverse, symmetric, count, count, npair, { transposeA: true }),
        shifts: shifts.map((c, t) => c + length * direction[count * count + t]!),
      };
    },
    withMedians: async (point) => ({ ...point, shifts: medianShifts(setting, point) }),
  };
}

function largestRow(rows: Float64Array, width: number): number {
  let largest = 0;
  for (let from = 0; from < rows.length; from += width) {
    let sum = 0;
    for (let i = from; i < from + width; i++) sum += rows[i]! * rows[i]!;
    largest = Math.max(largest, sum);
  }
  return Math.sqrt(largest);
}

async function tripleValue(
  setting: TripleSetting,
  scales: readonly [number, number],
  point: TriplePoint,
  width: number,
  ctx: JobContext,
): Promise<MixingValue> {
  const { n, kappa, excess, sameScale, otherScale } = setting;
  const { count, antisymmetric, symmetric, shifts, classes } = point;
  const [nanti, npair] = [numAntisymmetricPairs(n), numSymmetricPairs(n)];
  const deltas = [width * scales[0], width * scales[1]] as const;
  const inputs: ChunkInput[] = [];
  for (let from = 0; from < count; from += CHUNK) {
    const to = Math.min(count, from + CHUNK);
    inputs.push({
      n,
      sameScale,
      otherScale,
      antisymmetric: antisymmetric.slice(from * nanti, to * nanti),
      symmetric: symmetric.slice(from * npair, to * npair),
      shifts: shifts.slice(from, to),
      deltas,
    });
  }
  const ofA = new Float64Array(count * nanti);
  const ofS = new Float64Array(count * npair);
  const ofShifts = new Float64Array(count);
  let smooth = 0;
  let exact = 0;
  let at = 0;
  for (const chunk of await ctx.map(tripleMixingTask, inputs)) {
    smooth += chunk.smooth;
    exact += chunk.exact;
    ofA.set(chunk.antisymmetric, at * nanti);
    ofS.set(chunk.symmetric, at * npair);
    ofShifts.set(chunk.shifts, at);
    at += chunk.shifts.length;
  }
  // κ^k + same·(η − N) Σ c a.
  const one = oneBodyNorm(
    [{ slot: { symmetric: false, offset: 0, length: nanti }, kappa }],
    sameScale * excess,
    { n, count, columns: antisymmetric, dim: nanti, shifts, signs: new Int8Array(count).fill(1) },
    width,
    { columns: ofA, shifts: ofShifts },
  );

  // d λ/dε along A → exp(εX)A, B → exp(−εX)ᵀB.
  const tangent = new Float64Array(count * count + count);
  const left = multiply(ofA, antisymmetric, count, nanti, count, { transposeB: true });
  const right = multiply(symmetric, ofS, count, npair, count, { transposeB: true });
  for (let i = 0, s = 0; s < count; s++) {
    // Between classes it is zero but for rounding, which would grow.
    for (let t = 0; t < count; t++, i++) if (classes[s] === classes[t]) tangent[i] = left[i]! - right[i]!;
  }
  if (sameScale !== 0) tangent.set(ofShifts, count * count);
  return { smooth: smooth + one.smooth, exact: exact + one.exact, gradient: tangent };
}

function medianShifts({ n, sameScale }: TripleSetting, { symmetric, shifts }: TriplePoint): Float64Array {
  if (sameScale === 0) return shifts;
  const npair = numSymmetricPairs(n);
  const plane = new Float64Array(n * n);
  return shifts.map((_, t) => {
    planeInto(plane, 0, symmetric, t * npair, n, true);
    return smoothMedian(symmetricEigenvalues(plane, n), 0);
  });
}

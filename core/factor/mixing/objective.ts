import { numSymmetricPairs } from '../../integrals/integral-set';
import type { JobContext, Task } from '../../job';
import { multiply, symmetricEigen, symmetricEigenvalues } from '../../linalg';
import { planeInto } from '../elements';

/** What λ of the charge part depends on, besides factors and shifts. */
export interface MixingProblem {
  readonly n: number;
  /** κ⁰ without any shift, n×n: the same for every mixing of the factors. Hartree. */
  readonly kappa: Float64Array;
  /** η − N: how strongly a factor's shift acts on κ⁰. */
  readonly excess: number;
}

/** Factors as raw columns, Σ v vᵀ = G, and a shift for each, in √hartree. */
export interface MixingPoint {
  readonly count: number;
  /** count × n(n+1)/2 pair coordinates. */
  readonly columns: Float64Array;
  readonly shifts: Float64Array;
}

export interface MixingValue {
  /** Σ_i s(κ_i − c₁) + ¼ Σ_t (Σ_i s(ε_ti − c_t))² with s(x) = √(x² + δ²): λ for δ = 0. Hartree. */
  readonly lambda: number;
  /** Derivatives with respect to `columns` and `shifts`. */
  readonly columns: Float64Array;
  readonly shifts: Float64Array;
}

interface ChunkInput {
  readonly n: number;
  readonly count: number;
  readonly columns: Float64Array;
  readonly shifts: Float64Array;
  readonly delta: number;
}

interface ChunkOutput {
  /** Σ_t ¼ N_t². */
  readonly lambda: number;
  readonly columns: Float64Array;
  readonly shifts: Float64Array;
}

/** Norms of a batch of shifted factors and their derivatives: an eigenproblem each. */
export const mixingTask: Task<ChunkInput, ChunkOutput> = {
  name: 'factor.mixing',
  async run({ n, count, columns, shifts, delta }, ctx) {
    await ctx.checkpoint();
    const npair = numSymmetricPairs(n);
    const plane = new Float64Array(n * n);
    const gradient = new Float64Array(count * npair);
    const shiftGradient = new Float64Array(count);
    let lambda = 0;
    for (let t = 0; t < count; t++) {
      planeInto(plane, 0, columns, t * npair, n, true);
      const { norm, slope, direction } = smoothNorm(plane, n, shifts[t]!, delta);
      lambda += 0.25 * norm * norm;
      shiftGradient[t] = -0.5 * norm * slope;
      pairsInto(gradient, t * npair, direction, n, 0.5 * norm);
    }
    return { lambda, columns: gradient, shifts: shiftGradient };
  },
};

/** Factors in one piece of parallel work. */
const CHUNK = 32;

/** λ of the charge part, smoothed by δ, and its gradient. */
export async function mixingValue(
  problem: MixingProblem,
  point: MixingPoint,
  delta: number,
  ctx: JobContext,
): Promise<MixingValue> {
  const { n, excess } = problem;
  const { count, columns, shifts } = point;
  const npair = numSymmetricPairs(n);
  const inputs: ChunkInput[] = [];
  for (let from = 0; from < count; from += CHUNK) {
    const to = Math.min(count, from + CHUNK);
    inputs.push({
      n,
      count: to - from,
      columns: columns.slice(from * npair, to * npair),
      shifts: shifts.slice(from, to),
      delta,
    });
  }
  const chunks = await ctx.map(mixingTask, inputs);
  const gradient = new Float64Array(count * npair);
  const shiftGradient = new Float64Array(count);
  let lambda = 0;
  let at = 0;
  for (const chunk of chunks) {
    lambda += chunk.lambda;
    gradient.set(chunk.columns, at * npair);
    shiftGradient.set(chunk.shifts, at);
    at += chunk.shifts.length;
  }

  // κ⁰ = κ⁰(0) + (η − N) Σ_t c_t L^t with the shift that makes its norm least: at the minimum it has no slope.
  const kappa = shiftedKappa(problem, point);
  const middle = smoothMedian(symmetricEigen(kappa, n).values, delta);
  const { norm, direction } = smoothNorm(kappa, n, middle, delta);
  lambda += norm;
  if (excess !== 0) {
    const slope = new Float64Array(npair);
    pairsInto(slope, 0, direction, n, excess);
    for (let t = 0; t < count; t++) {
      let overlap = 0;
      const row = t * npair;
      for (let i = 0; i < npair; i++) {
        overlap += slope[i]! * columns[row + i]!;
        gradient[row + i]! += shifts[t]! * slope[i]!;
      }
      shiftGradient[t]! += overlap;
    }
  }
  return { lambda, columns: gradient, shifts: shiftGradient };
}

function shiftedKappa({ n, kappa, excess }: MixingProblem, { count, columns, shifts }: MixingPoint) {
  const npair = numSymmetricPairs(n);
  const sum = new Float64Array(npair);
  for (let t = 0; t < count; t++) {
    const scale = excess * shifts[t]!;
    for (let i = 0, at = t * npair; i < npair; i++, at++) sum[i]! += scale * columns[at]!;
  }
  const plane = new Float64Array(n * n);
  planeInto(plane, 0, sum, 0, n, true);
  for (let i = 0; i < n * n; i++) plane[i]! += kappa[i]!;
  return plane;
}

/** Σ_i s(ε_i − c), its derivative −Σ s′ with respect to c (as `slope` = Σ s′), and ∂/∂L = U diag(s′) Uᵀ. */
function smoothNorm(plane: Float64Array, n: number, c: number, delta: number) {
  const { values, vectors } = symmetricEigen(plane, n);
  let norm = 0;
  let slope = 0;
  const scaled = Float64Array.from(vectors);
  for (let i = 0; i < n; i++) {
    const x = values[i]! - c;
    const s = Math.sqrt(x * x + delta * delta);
    const f = s > 0 ? x / s : 0;
    norm += s;
    slope += f;
    for (let p = 0; p < n; p++) scaled[i * n + p]! *= f;
  }
  const direction = multiply(vectors, scaled, n, n, n, { transposeA: true });
  return { norm, slope, direction };
}

/** Pair coordinates of a symmetric matrix, times `scale`. */
function pairsInto(out: Float64Array, at: number, matrix: Float64Array, n: number, scale: number): void {
  for (let p = 0, i = at; p < n; p++) {
    for (let q = 0; q < p; q++) out[i++] = Math.SQRT2 * scale * matrix[p * n + q]!;
    out[i++] = scale * matrix[p * n + p]!;
  }
}

/** The same factors with the shifts that make each norm least by itself. */
export function withMedianShifts(n: number, point: MixingPoint): MixingPoint {
  const npair = numSymmetricPairs(n);
  const plane = new Float64Array(n * n);
  const shifts = point.shifts.map((_, t) => {
    planeInto(plane, 0, point.columns, t * npair, n, true);
    return smoothMedian(symmetricEigenvalues(plane, n), 0);
  });
  return { ...point, shifts };
}

/** The c that makes Σ √((ε_i − c)² + δ²) least: the median where δ = 0, else the zero of a rising function. */
function smoothMedian(ascending: Float64Array, delta: number): number {
  const half = ascending.length >> 1;
  if (delta === 0) {
    return ascending.length % 2 === 1 ? ascending[half]! : (ascending[half - 1]! + ascending[half]!) / 2;
  }
  let low = ascending[0]!;
  let high = ascending[ascending.length - 1]!;
  for (let i = 0; i < 60 && high > low; i++) {
    const c = 0.5 * (low + high);
    let slope = 0;
    for (const value of ascending) slope += (c - value) / Math.hypot(c - value, delta);
    if (slope > 0) high = c;
    else low = c;
  }
  return 0.5 * (low + high);
}

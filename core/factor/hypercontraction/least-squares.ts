import { addScaledTo, dot, multiply } from '../../linalg';
import { planeInto } from '../elements';
import { pairRows, pairsOf, rowDots, scaleColumns, scaleRows } from './arrays';
import type { HypercontractionPoint } from './block';
import type { FitProblem } from './problem';

/** A number and its derivatives. */
export interface Slope {
  readonly value: number;
  /** M × n. */
  readonly vectors: Float64Array;
  /** M × M, symmetric: each element by itself. */
  readonly zeta: Float64Array;
  /** n × n, symmetric, each element by itself; null without a shift. */
  readonly shift: Float64Array | null;
}

/**
 * ½‖G + ξ ⊗ 1 + 1 ⊗ ξ − SᵀζS‖² over all indices, with its derivatives, in O(M L npair + M³), L = number of columns.
 *
 * With P = S Vᵀ (P_ml = u_mᵀ L_l u_m), Q = S Sᵀ = (u·u′)², a = S ξ, d the identity, S d = 1 and G′ = G + ξ dᵀ + d ξᵀ:
 * ‖G′ − SᵀζS‖² = ‖G′‖² − 2 Σ ζ_mn (P σ Pᵀ + a 1ᵀ + 1 aᵀ)_mn + tr ζQζQ. Two large numbers subtract: residuals below
 * 1e-7 ‖G‖ are rounding.
 *
 * @param point - unit vectors; the derivative with respect to u is that along the sphere, plus something along u
 */
export function squaredDifference(
  problem: FitProblem,
  { count: m, vectors, zeta, shift }: HypercontractionPoint,
): Slope {
  const { n, weights, count: l, columns, signs } = problem;
  const npair = columns.length / l;
  const u = scaleColumns(vectors, weights);
  const s = pairRows(u, m, n);
  const p = multiply(s, columns, m, npair, l, { transposeB: true });
  const signed = scaleColumns(p, signs);
  const c = multiply(signed, p, m, l, m, { transposeB: true });
  const overlap = multiply(u, u, m, n, m, { transposeB: true });
  const q = overlap.map((x) => x * x);
  const du = new Float64Array(m * n);
  let square = problem.square;
  let dx: Float64Array | null = null;
  if (shift) {
    const xi = weighted(shift, weights);
    const xu = multiply(u, xi, m, n, n);
    const wu = scaleColumns(
      u,
      weights.map((w) => w * w),
    );
    const [a, r] = [rowDots(xu, u, m, n), rowDots(wu, u, m, n)];
    for (let i = 0; i < m; i++) for (let j = 0; j < m; j++) c[i * m + j]! += a[i]! * r[j]! + r[i]! * a[j]!;
    const [za, zr] = [multiply(zeta, a, m, m, 1), multiply(zeta, r, m, m, 1)];
    addScaledTo(du, scaleRows(xu, zr, n), -4);
    addScaledTo(du, scaleRows(wu, za, n), -4);
    const pairs = pairsOf(xi, n);
    square += shiftSquare(problem, pairs);
    dx = weighted(shiftSlope(problem, pairs, multiply(zr, s, 1, m, npair)), weights);
  }
  const zq = multiply(zeta, q, m, m, m);
  const zqz = multiply(zq, zeta, m, m, m);
  square += dot(zqz, q) - 2 * dot(zeta, c);
  const dz = multiply(q, zq, m, m, m);
  addScaledTo(dz, c, -1);
  const b = multiply(multiply(zeta, signed, m, m, l), columns, m, l, npair);
  const plane = new Float64Array(n * n);
  for (let i = 0; i < m; i++) {
    planeInto(plane, 0, b, i * npair, n, true);
    addTimes(du, i * n, plane, u, n, -4);
  }
  for (let i = 0; i < m * m; i++) zqz[i]! *= 4 * overlap[i]!;
  addScaledTo(du, multiply(zqz, u, m, m, n), 1);
  return { value: 0.5 * Math.max(0, square), vectors: scaleColumns(du, weights), zeta: dz, shift: dx };
}

/** W A W with W = diag(weights). */
function weighted(a: Float64Array, weights: Float64Array): Float64Array {
  return scaleRows(scaleColumns(a, weights), weights, weights.length);
}

/** ξ·d: d = diag(w²) in pair coordinates. */
function alongIdentity({ n, weights }: FitProblem, xi: Float64Array): number {
  let sum = 0;
  for (let p = 0, i = 0; p < n; p++, i += p + 1) sum += weights[p]! ** 2 * xi[i]!;
  return sum;
}

const quartic = (weights: Float64Array) => weights.reduce((sum, w) => sum + w ** 4, 0);

/** ‖ξ dᵀ + d ξᵀ‖² + 2⟨G, ξ dᵀ + d ξᵀ⟩ = 4 ξ·Gd + 2(d·d ξ·ξ + (ξ·d)²). */
function shiftSquare(problem: FitProblem, xi: Float64Array): number {
  const { trace, weights } = problem;
  return 4 * dot(xi, trace) + 2 * (quartic(weights) * dot(xi, xi) + alongIdentity(problem, xi) ** 2);
}

/** 2(Gd + d·d ξ + (ξ·d) d − Sᵀζr) as an n×n matrix; `sum` = Sᵀζr is overwritten. */
function shiftSlope(problem: FitProblem, xi: Float64Array, sum: Float64Array): Float64Array {
  const { n, trace, weights } = problem;
  const [square, along] = [quartic(weights), alongIdentity(problem, xi)];
  for (let i = 0; i < sum.length; i++) sum[i] = 2 * (trace[i]! + square * xi[i]! - sum[i]!);
  for (let p = 0, i = 0; p < n; p++, i += p + 1) sum[i]! += 2 * along * weights[p]! ** 2;
  const plane = new Float64Array(n * n);
  planeInto(plane, 0, sum, 0, n, true);
  return plane;
}

/** Row of n numbers at `at`: target += scale · A x. */
function addTimes(
  target: Float64Array,
  at: number,
  a: Float64Array,
  x: Float64Array,
  n: number,
  scale: number,
) {
  for (let r = 0; r < n; r++) {
    let sum = 0;
    for (let c = 0; c < n; c++) sum += a[r * n + c]! * x[at + c]!;
    target[at + r]! += scale * sum;
  }
}

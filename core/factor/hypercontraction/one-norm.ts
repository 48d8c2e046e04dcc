import { addScaledTo, multiply, symmetricEigen } from '../../linalg';
import { normsAbout, smooth, smoothMedian } from '../smooth-norms';
import { hadamard, rowDots, scaleColumns, scaleRows } from './arrays';
import type { HypercontractionPoint } from './block';
import type { Slope } from './least-squares';
import type { FitProblem } from './problem';

/** Widths δ at which sizes are rounded off, √(x² + δ²) − δ, hartree: of ζ, and of the eigenvalues of κ⁰. */
export interface Widths {
  readonly zeta: number;
  readonly kappa: number;
}

/**
 * λ of the charge part and of κ⁰, smoothed by `widths`, and its derivatives; exact for widths 0.
 *
 * κ⁰ is the one that the encoding will have: the mean field of the difference is in it, so that with
 * b_m = u_mᵀ ν u_m, ν = diag(n_p), O = U(1 − ν)Uᵀ
 *
 *     κ⁰ = k⁰ + Φ[G] + ξ − ½(ξν + νξ) + tr(νξ) + Uᵀ [diag(ζ(1 − b)) − ½ ζ∘O] U
 *
 * + (Σ n_p − η) ξ, Φ of mean-field.ts: of the shift's −ηξ and its mean field +(Σ n_p) ξ only exchange is left. With a shift
 * κ⁰ stands at its median.
 */
export function smoothOneNorm(
  problem: FitProblem,
  { count: m, vectors: u, zeta, shift }: HypercontractionPoint,
  widths: Widths,
): Slope {
  const { n, occupations, excess, field } = problem;
  const holes = occupations.map((x) => 1 - x);
  const hollow = scaleColumns(u, holes);
  // Unit vectors: 1 − b = u (1 − ν) u.
  const free = rowDots(hollow, u, m, n);
  const o = multiply(hollow, u, m, n, m, { transposeB: true });
  const inner = hadamard(zeta, o);
  const y = multiply(zeta, free, m, m, 1);
  const middle = inner.map((x) => -0.5 * x);
  for (let i = 0; i < m; i++) middle[i * m + i]! += y[i]!;
  const kappa = multiply(u, multiply(middle, u, m, m, n), n, m, n, { transposeA: true });
  addScaledTo(kappa, field, 1);
  if (shift) {
    for (let p = 0; p < n; p++) {
      for (let q = 0; q < n; q++)
        kappa[p * n + q]! += (excess + 0.5 * (holes[p]! + holes[q]!)) * shift[p * n + q]!;
    }
  }
  const eigen = symmetricEigen(kappa, n);
  // Where the sum is least it has no slope: the derivative needs no further term.
  const centre = shift ? smoothMedian(eigen.values, widths.kappa) : 0;
  const { direction } = normsAbout(eigen, n, [centre], [1], widths.kappa);
  let lambda = 0;
  for (const value of eigen.values) lambda += smooth(value - centre, widths.kappa).s - widths.kappa;

  const turned = multiply(u, direction, m, n, n);
  const x = multiply(turned, u, m, n, m, { transposeB: true });
  const theta = rowDots(turned, u, m, n);
  const dz = new Float64Array(m * m);
  const delta = widths.zeta;
  for (let i = 0, at = 0; i < m; i++) {
    for (let j = 0; j < m; j++, at++) {
      const value = zeta[at]!;
      const { s, f } = smooth(value, delta);
      const share = i === j ? 0.25 : 0.5;
      lambda += share * (s - delta);
      dz[at] = share * f + 0.5 * (theta[i]! * free[j]! + theta[j]! * free[i]! - x[at]! * o[at]!);
    }
  }
  const du = scaleRows(turned, y, n);
  for (let i = 0; i < du.length; i++) du[i]! *= 2;
  addScaledTo(du, scaleRows(hollow, multiply(zeta, theta, m, m, 1), n), 2);
  addScaledTo(du, multiply(hadamard(zeta, x), hollow, m, m, n), -1);
  addScaledTo(du, multiply(inner, turned, m, m, n), -1);
  let dx: Float64Array | null = null;
  if (shift) {
    dx = direction;
    for (let p = 0; p < n; p++) {
      for (let q = 0; q < n; q++) dx[p * n + q]! *= excess + 0.5 * (holes[p]! + holes[q]!);
    }
  }
  return { value: lambda, vectors: du, zeta: dz, shift: dx };
}

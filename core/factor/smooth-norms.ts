import { antisymmetricPairs, multiply, type SymmetricEigen, symmetricEigen } from '../linalg';

/** A nuclear norm, smoothed by √(x² + δ²), with what its derivatives are made of. */
export interface SmoothNorm {
  /** Σ_i s(x_i) over the eigenvalues. */
  readonly norm: number;
  /** The same at δ = 0. */
  readonly exact: number;
  /** n×n: the derivative with respect to the matrix. */
  readonly direction: Float64Array;
}

/** √(x² + δ²) and its derivative. */
export function smooth(x: number, delta: number): { readonly s: number; readonly f: number } {
  const s = Math.sqrt(x * x + delta * delta);
  return { s, f: s > 0 ? x / s : 0 };
}

/** Σ_h weight_h Σ_i s(ε_i − c_h) of a symmetric plane: several shifted norms of one matrix. */
export interface ShiftedNorms extends SmoothNorm {
  /** Of each shift alone. */
  readonly norms: readonly number[];
  readonly exacts: readonly number[];
  /** −∂norm_h/∂c_h = Σ_i s′. */
  readonly slopes: readonly number[];
}

/** Norms of a symmetric plane about several points at once, from one eigenproblem. */
export function shiftedNorms(
  plane: Float64Array,
  n: number,
  shifts: readonly number[],
  weights: readonly number[],
  delta: number,
): ShiftedNorms {
  return normsAbout(symmetricEigen(plane, n), n, shifts, weights, delta);
}

/** The same of a plane whose eigenvectors are the rows of `vectors`. */
export function normsAbout(
  { values, vectors }: SymmetricEigen,
  n: number,
  shifts: readonly number[],
  weights: readonly number[],
  delta: number,
): ShiftedNorms {
  const norms = shifts.map(() => 0);
  const exacts = shifts.map(() => 0);
  const slopes = shifts.map(() => 0);
  const scaled = Float64Array.from(vectors);
  for (let i = 0; i < n; i++) {
    let factor = 0;
    for (let h = 0; h < shifts.length; h++) {
      const x = values[i]! - shifts[h]!;
      const { s, f } = smooth(x, delta);
      norms[h]! += s;
      exacts[h]! += Math.abs(x);
      slopes[h]! += f;
      factor += weights[h]! * f;
    }
    for (let p = 0; p < n; p++) scaled[i * n + p]! *= factor;
  }
  const weighted = (values: readonly number[]) => values.reduce((sum, x, h) => sum + weights[h]! * x, 0);
  return {
    norm: weighted(norms),
    exact: weighted(exacts),
    norms,
    exacts,
    slopes,
    direction: multiply(vectors, scaled, n, n, n, { transposeA: true }),
  };
}

/** 2 Σ_j s(a_j) of an antisymmetric plane Σ a_j (u_j v_jᵀ − v_j u_jᵀ), and Σ s′(a_j) (u_j v_jᵀ − v_j u_jᵀ). */
export function antisymmetricNorm(plane: Float64Array, n: number, delta: number): SmoothNorm {
  const { count, a, u, v } = antisymmetricPairs(plane, n);
  // Zero modes weigh δ each, so that the norm stays smooth where a pair vanishes.
  let norm = 2 * delta * ((n >> 1) - count);
  let exact = 0;
  const scaled = Float64Array.from(u.subarray(0, count * n));
  for (let j = 0; j < count; j++) {
    const { s, f } = smooth(a[j]!, delta);
    norm += 2 * s;
    exact += 2 * a[j]!;
    for (let p = 0; p < n; p++) scaled[j * n + p]! *= f;
  }
  const half = multiply(scaled, v, n, count, n, { transposeA: true });
  const direction = new Float64Array(n * n);
  for (let p = 0; p < n; p++) {
    for (let q = 0; q < n; q++) direction[p * n + q] = half[p * n + q]! - half[q * n + p]!;
  }
  return { norm, exact, direction };
}

/** Adds `scale` times the pair coordinates of a symmetric or antisymmetric matrix. */
export function addPairs(
  out: Float64Array,
  at: number,
  matrix: Float64Array,
  n: number,
  symmetric: boolean,
  scale: number,
): void {
  const off = Math.SQRT2 * scale;
  for (let p = 0, i = at; p < n; p++) {
    for (let q = 0; q < p; q++) out[i++]! += off * matrix[p * n + q]!;
    if (symmetric) out[i++]! += scale * matrix[p * n + p]!;
  }
}

/** The c that makes Σ √((ε_i − c)² + δ²) least: the median where δ = 0, else the zero of a rising function. */
export function smoothMedian(ascending: Float64Array, delta: number): number {
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

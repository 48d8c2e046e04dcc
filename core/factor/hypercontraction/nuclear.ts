import { multiply, symmetricEigen } from '../../linalg';

/**
 * Σ_i s(ε_i − c) of a symmetric matrix with s(x) = √(x² + δ²) − δ, and its derivative U diag(s′) Uᵀ.
 *
 * @param shifted - true: c is where the sum is least (the median for δ = 0), so that it has no slope; false: c = 0
 */
export function smoothNuclearNorm(matrix: Float64Array, n: number, delta: number, shifted: boolean) {
  const { values, vectors } = symmetricEigen(matrix, n);
  const c = shifted ? smoothMedian(values, delta) : 0;
  let norm = 0;
  const scaled = Float64Array.from(vectors);
  for (let i = 0; i < n; i++) {
    const x = values[i]! - c;
    const size = Math.sqrt(x * x + delta * delta);
    norm += size - delta;
    const slope = size > 0 ? x / size : 0;
    for (let p = 0; p < n; p++) scaled[i * n + p]! *= slope;
  }
  const direction = multiply(vectors, scaled, n, n, n, { transposeA: true });
  return { norm, direction, shift: c };
}

/** The c that makes Σ √((ε_i − c)² + δ²) least: the zero of a rising function; the median for δ = 0. */
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

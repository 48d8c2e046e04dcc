import type { ComplexMatrix } from '../../../../core/linalg';

/**
 * Σ|c_P| over all Pauli strings but the identity of M = Σ c_P P. Under Jordan–Wigner a product of Majorana operators is a
 * Pauli string, so this is the one-norm of merged Majorana strings, from the matrix alone: for each pattern of flips the
 * Walsh–Hadamard transform of the elements that flip so.
 */
export function pauliNorm({ n, re, im }: ComplexMatrix): number {
  let sum = 0;
  for (let flips = 0; flips < n; flips++) {
    const a = Float64Array.from({ length: n }, (_, j) => re[(j ^ flips) * n + j]!);
    const b = Float64Array.from({ length: n }, (_, j) => im[(j ^ flips) * n + j]!);
    for (const values of [a, b]) {
      for (let half = 1; half < n; half *= 2) {
        for (let j = 0; j < n; j++) {
          if (j & half) continue;
          const [x, y] = [values[j]!, values[j | half]!];
          values[j] = x + y;
          values[j | half] = x - y;
        }
      }
    }
    for (let z = 0; z < n; z++) if (flips !== 0 || z !== 0) sum += Math.hypot(a[z]!, b[z]!) / n;
  }
  return sum;
}

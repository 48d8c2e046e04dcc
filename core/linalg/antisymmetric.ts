import { jacobiInPlace } from './jacobi';
import { put, withArena } from './kernels/arena';
import { ascending } from './order';
import { batchValues } from './symmetric';
import type { AntisymmetricPairs } from './types';

export interface PairOptions {
  /** Pairs with a_j ≤ tolerance · max a are dropped as zero modes. @defaultValue 1e-12 */
  readonly tolerance?: number;
}

/**
 * Real canonical form A = Σ_j a_j (u_j v_jᵀ − v_j u_jᵀ) of a real antisymmetric n×n matrix, a_j > 0 descending, all u and v
 * orthonormal. The strict lower triangle is read. Meant for n up to a few hundred.
 *
 * @remarks
 * Householder reflections make A antisymmetric tridiagonal; sorting even before odd positions turns that into
 * [[0, B], [−Bᵀ, 0]] with B bidiagonal. The singular triples of B, by one-sided Jacobi rotations, are the pairs. A is
 * never squared, so a_j is accurate to 2⁻⁵²·‖A‖ however small, and u, v are orthonormal also for equal or tiny a_j.
 */
export function antisymmetricPairs(
  a: Float64Array,
  n: number,
  options: PairOptions = {},
): AntisymmetricPairs {
  const tolerance = options.tolerance ?? 1e-12;
  if (a.length < n * n) throw new RangeError(`matrix of order ${n} needs ${n * n} numbers, got ${a.length}`);
  return withArena((arena) => {
    const at = put(arena, a.subarray(0, n * n));
    const [d, e, h, w] = [arena.take(n), arena.take(n), arena.take(n), arena.take(n)];
    arena.kernels.reduceTriangle(at, n, n, -1, d, e, h, w);
    const m = arena.f64;
    const { left, right, size, half, rest } = bidiagonalTriples(m.subarray(e, e + n), n);
    const order = ascending(size).reverse();
    const kept = order.filter((j) => size[j] > tolerance * size[order[0]]);
    const count = kept.length;
    const u = new Float64Array(count * n);
    const v = new Float64Array(count * n);
    kept.forEach((j, to) => {
      for (let k = 0; k < rest; k++) u[to * n + 2 * k] = left[j * rest + k];
      for (let k = 0; k < half; k++) v[to * n + 2 * k + 1] = right[j * half + k];
    });
    for (const rows of [u, v]) reflectRows(rows, count, n, m, at, h);
    return { n, count, a: Float64Array.from(kept, (j) => size[j]), u, v };
  });
}

/**
 * The a_j of `count` antisymmetric n×n matrices stored one after another: ⌊n/2⌋ per matrix, descending, zeros
 * included. In the tridiagonal basis iA is a real symmetric matrix with zero diagonal, so its eigenvalues ±a_j need no
 * complex arithmetic.
 */
export function antisymmetricNormsBatch(matrices: Float64Array, count: number, n: number): Float64Array {
  const half = n >> 1;
  const values = batchValues(matrices, count, n, -1);
  const norms = new Float64Array(count * half);
  for (let i = 0; i < count; i++) {
    for (let j = 0; j < half; j++) norms[i * half + j] = Math.max(0, values[(i + 1) * n - 1 - j]);
  }
  return norms;
}

/** B = Σ_j size_j left_j right_jᵀ with orthonormal rows (zero rows of `left` for size 0); e[i] = T_{i+1,i}. */
function bidiagonalTriples(e: Float64Array, n: number) {
  const half = n >> 1;
  const rest = n - half;
  const scale = e.subarray(0, Math.max(0, n - 1)).reduce((max, x) => Math.max(max, Math.abs(x)), 0) || 1;
  const left = new Float64Array(half * rest);
  const right = new Float64Array(half * half);
  for (let j = 0; j < half; j++) {
    // Column j of B: T_{2j,2j+1} and T_{2j+2,2j+1}.
    left[j * rest + j] = -e[2 * j] / scale;
    if (2 * j + 2 < n) left[j * rest + j + 1] = e[2 * j + 1] / scale;
    right[j * half + j] = 1;
  }
  jacobiInPlace(left, right, half, rest);
  const size = new Float64Array(half);
  for (let j = 0; j < half; j++) {
    let s = 0;
    for (let k = 0; k < rest; k++) s += left[j * rest + k] ** 2;
    size[j] = Math.sqrt(s);
    for (let k = 0; k < rest; k++) left[j * rest + k] /= size[j] || 1;
    size[j] *= scale;
  }
  return { left, right, size, half, rest };
}

/** Rows x become H_{n−1} ⋯ H_1 x. */
function reflectRows(rows: Float64Array, count: number, n: number, m: Float64Array, a: number, h: number) {
  for (let r = 0; r < count; r++) {
    for (let i = 1; i < n; i++) {
      const norm = m[h + i];
      if (norm === 0) continue;
      const u = a + i * n;
      let s = 0;
      for (let k = 0; k < i; k++) s += rows[r * n + k] * m[u + k];
      s /= norm;
      for (let k = 0; k < i; k++) rows[r * n + k] -= s * m[u + k];
    }
  }
}

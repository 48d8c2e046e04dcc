import type { Arena } from './kernels/arena';

/** Reflectors applied together, and rows they are applied to between two yields. */
export const GROUP = 64;
export const BAND = 256;

/**
 * Householder reflectors H_j = 1 − u_j u_jᵀ/h_j, taken together as H_0 H_1 ⋯ = 1 − Uᵀ T U with T upper triangular (Schreiber
 * & Van Loan 1989, quoted from memory).
 */
export interface ReflectorGroup {
  /** Rows u_j of stride `ld`, zero outside their own range. */
  readonly us: number;
  readonly ld: number;
  /** Number of reflectors, at most GROUP. */
  readonly size: number;
  /** Numbers in a row that may differ from zero. */
  readonly length: number;
  /** size×size room for T. */
  readonly t: number;
}

/** Room for T and the products of {@link applyGroup}. */
export const groupRoom = (arena: Arena) => arena.take(GROUP * GROUP + 2 * BAND * GROUP);

/** Builds T; `norm(j)` is h_j, 0 for no reflector (its row must be zero). */
export function buildTriangle(arena: Arena, group: ReflectorGroup, norm: (j: number) => number): void {
  const { us, ld, size, length, t } = group;
  const m = arena.f64;
  const dots = t + GROUP * GROUP; // free until the group is applied
  m.fill(0, t, t + size * size);
  for (let j = 0; j < size; j++) {
    const h = norm(j);
    if (h === 0) continue;
    arena.kernels.rowDots(us, ld, j, us + j * ld, length, dots);
    for (let r = 0; r < j; r++) {
      let s = 0;
      for (let c = r; c < j; c++) s += m[t + r * size + c] * m[dots + c];
      m[t + r * size + j] = -s / h;
    }
    m[t + j * size + j] = 1 / h;
  }
}

/**
 * Rows x (at most BAND, stride ldx): xᵀ ← xᵀ H_0 H_1 ⋯, or in the opposite order with `backwards`.
 */
export function applyGroup(
  arena: Arena,
  group: ReflectorGroup,
  x: number,
  ldx: number,
  rows: number,
  backwards = false,
): void {
  const { us, ld, size, length, t } = group;
  const { kernels } = arena;
  const overlap = t + GROUP * GROUP;
  const factors = overlap + rows * size;
  arena.f64.fill(0, overlap, overlap + 2 * rows * size);
  kernels.gemm(rows, size, length, 1, x, ldx, 1, us, 1, ld, overlap, size);
  const [trs, tcs] = backwards ? [1, size] : [size, 1];
  kernels.gemm(rows, size, size, 1, overlap, size, 1, t, trs, tcs, factors, size);
  kernels.gemm(rows, length, size, -1, factors, size, 1, us, ld, 1, x, ldx);
}

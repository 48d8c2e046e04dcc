/**
 * The inner loops of the dense algebra. All arguments are positions, strides and lengths in numbers (not bytes) within
 * one memory; matrices are row-major with row stride `ld`. Two implementations: WebAssembly SIMD and plain
 * TypeScript, which is the test oracle and steps in where WebAssembly is not to be had.
 */
export interface Kernels {
  /** C(m×n, row stride ldc) += alpha·A·B; A_ip at a + i·ars + p·acs, B_pj at b + p·brs + j·bcs. */
  gemm(
    m: number,
    n: number,
    k: number,
    alpha: number,
    a: number,
    ars: number,
    acs: number,
    b: number,
    brs: number,
    bcs: number,
    c: number,
    ldc: number,
  ): void;

  /** out[r] = Σ_k rows[r,k]·x[k] for r < count, k < length. */
  rowDots(rows: number, ld: number, count: number, x: number, length: number, out: number): void;

  /** y[k] += Σ_r f[r]·rows[r,k] for k < length; f[r] at f + r·step. */
  addRows(rows: number, ld: number, count: number, f: number, step: number, y: number, length: number): void;

  /** y = A x from the lower triangle; sign = 1 symmetric, −1 antisymmetric (diagonal ignored). */
  triangleTimes(a: number, ld: number, n: number, sign: number, x: number, y: number): void;

  /** A_jk += f·x_j y_k + g·y_j x_k for k ≤ j < n. May write one number to the right of the diagonal. */
  triangleRankTwo(a: number, ld: number, n: number, x: number, y: number, f: number, g: number): void;

  /**
   * Householder reduction of a symmetric (sign 1) or antisymmetric (−1) matrix, lower triangle, in place. d: diagonal; e[i] =
   * T_{i+1,i}; h[i] = ‖u‖²/2 of the reflector kept in row i, 0 for none; w: n numbers of room.
   */
  reduceTriangle(
    a: number,
    ld: number,
    n: number,
    sign: number,
    d: number,
    e: number,
    h: number,
    w: number,
  ): void;

  /**
   * Unordered eigenvalues of `count` matrices one after another (of iA for sign −1). Overwrites them. room: 3n. Returns how many
   * did not converge.
   */
  eigenvaluesOfMany(
    a: number,
    ld: number,
    n: number,
    count: number,
    sign: number,
    values: number,
    room: number,
  ): number;

  /** y = A x for Hermitian A in two planes, lower triangle; the diagonal counts as real. */
  hermitianTimes(
    ar: number,
    ai: number,
    ld: number,
    n: number,
    xr: number,
    xi: number,
    yr: number,
    yi: number,
  ): void;

  /**
   * As {@link reduceTriangle} for a Hermitian matrix; T_{i,i−1} at tr[i], ti[i] is complex. Row i of both planes keeps u. w: 2n
   * numbers of room.
   */
  reduceHermitian(
    ar: number,
    ai: number,
    ld: number,
    n: number,
    d: number,
    tr: number,
    ti: number,
    h: number,
    w: number,
  ): void;

  /** As {@link eigenvaluesOfMany} for Hermitian matrices. room: 5n. */
  hermitianValuesOfMany(
    ar: number,
    ai: number,
    ld: number,
    n: number,
    count: number,
    values: number,
    room: number,
  ): number;

  /**
   * Implicit QL: d becomes the unordered eigenvalues of the tridiagonal matrix (d, e), e is destroyed. Rotations go to the n rows of
   * z (`width` numbers each). Returns 1 if an eigenvalue did not converge, else 0.
   */
  qlSteps(d: number, e: number, n: number, z: number, ld: number, width: number): number;

  /** {@link qlSteps} without vectors, and faster for it. */
  qlValues(d: number, e: number, n: number): number;
}

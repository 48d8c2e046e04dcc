/** n×n complex matrix in two row-major planes. */
export interface ComplexMatrix {
  readonly n: number;
  readonly re: Float64Array;
  readonly im: Float64Array;
}

/** Eigenvalues ascending; row i of `vectors` (n numbers from i·n) is the unit eigenvector of `values[i]`. */
export interface SymmetricEigen {
  readonly n: number;
  readonly values: Float64Array;
  readonly vectors: Float64Array;
}

/** Eigenvalues ascending; row i of `re`/`im` is the unit eigenvector of `values[i]`. */
export interface HermitianEigen {
  readonly n: number;
  readonly values: Float64Array;
  readonly re: Float64Array;
  readonly im: Float64Array;
}

/** A = Σ_i s_i u_i v_iᵀ, s descending; row i of `u` (length rows) and of `v` (length cols). */
export interface SingularValues {
  readonly rows: number;
  readonly cols: number;
  readonly rank: number;
  readonly s: Float64Array;
  readonly u: Float64Array;
  readonly v: Float64Array;
}

/** A = Σ_j a_j (u_j v_jᵀ − v_j u_jᵀ), a_j > 0 descending, {u_j, v_j} orthonormal; rows of `u` and `v`. */
export interface AntisymmetricPairs {
  readonly n: number;
  readonly count: number;
  readonly a: Float64Array;
  readonly u: Float64Array;
  readonly v: Float64Array;
}

import type { Mu, Sector, TripletOperator } from '../hamiltonian';
import type { ComplexMatrix } from '../linalg';
import type { Residual } from './dropped';
import type { HypercontractedFactors } from './hypercontraction/block';

export type { Residual } from './dropped';

/** Which physical part of the two-electron tensor a block factorises. */
export type BlockPart = 'coulomb' | 'spin-orbit' | 'spin-spin' | 'even' | 'odd';

/**
 * Factors L^t of one sector: contribution ½ Σ_t w_t (L^t)² to H in product form. The vectors are in the
 * orthonormal Hermitian basis of the planes `planes`, concatenated in that order; within a symmetric plane the
 * pairs p ≥ q (S_pp = E_pp, S_pq = (E_pq + E_qp)/√2), within an antisymmetric one the pairs p > q
 * (A_pq = i(E_pq − E_qp)/√2), both in pair order of integral-set.ts.
 */
export interface SquareFactors {
  readonly kind: 'squares';
  readonly part: BlockPart;
  readonly sector: Sector;
  readonly n: number;
  readonly planes: readonly Mu[];
  readonly dim: number;
  readonly count: number;
  /** count weights w_t, hartree; the vectors have unit norm. Any sign. */
  readonly weights: Float64Array;
  /** count × dim. */
  readonly vectors: Float64Array;
  /**
   * count × spectrum width, plane after plane: the n eigenvalues, ascending, of a symmetric plane; the ⌊n/2⌋
   * numbers a_j, descending, of an antisymmetric one (eigenvalues ±a_j). Every λ, median and row count of the
   * triplet form follows from these alone.
   */
  readonly spectra: Float64Array;
  /** Optimised shifts c_t of the charge plane, in the units of `spectra`; absent where none were sought. */
  readonly shifts?: Float64Array;
}

/**
 * Two-electron spin–orbit as triples from one SVD per Cartesian component, w^k = Σ_i s_i a_i ⊗ S_i with a_i a unit
 * vector over antisymmetric pairs and S_i over symmetric pairs (basis as above):
 * contribution Σ_i s_i [ sameScale·½{a_i⊗σ^k, S_i⊗1} + otherScale·½{a_i⊗1, S_i⊗σ^k} ].
 * The same vectors serve both spin–same-orbit (sameScale, 1) and spin–other-orbit (otherScale, 2 for
 * Breit–Pauli); where a file's two arrays are not multiples of each other there are two lists, one with each
 * scale set to 0.
 */
export interface TripleFactors {
  readonly kind: 'triples';
  readonly part: 'spin-orbit';
  readonly n: number;
  readonly count: number;
  /** 1…3, the Cartesian component of each triple. */
  readonly component: Uint8Array;
  /** s_i > 0 in hartree. */
  readonly strengths: Float64Array;
  readonly sameScale: number;
  readonly otherScale: number;
  /** count × nanti. */
  readonly antisymmetric: Float64Array;
  /** count × npair. */
  readonly symmetric: Float64Array;
  /** count × ⌊n/2⌋: the a_j of each a_i, descending. */
  readonly antisymmetricNorms: Float64Array;
  /** count × n: the eigenvalues of each S_i, ascending. */
  readonly symmetricValues: Float64Array;
  /**
   * Optimised shifts c_i of S_i in the same-orbit part, in the units of `symmetricValues`; absent where none were
   * sought.
   */
  readonly shifts?: Float64Array;
}

/**
 * Factors of a complex spinor Hamiltonian: ½ Σ_t w_t (L^t)², L^t Hermitian over M spinors. `vectors` is in the
 * orthonormal Hermitian basis over M: first the symmetric pairs P ≥ Q, then the antisymmetric pairs P > Q.
 * `mixed` = the file's time reversal could not be used (spinors not in Kramers pairs, or a magnetic field).
 */
export interface SpinorFactors {
  readonly kind: 'spinor-squares';
  readonly part: 'even' | 'odd' | 'mixed';
  readonly spinors: number;
  readonly count: number;
  /** Hartree, any sign; the vectors have unit norm. */
  readonly weights: Float64Array;
  /** count × M². */
  readonly vectors: Float64Array;
  /** count × M eigenvalues, ascending. */
  readonly spectra: Float64Array;
  /** Optimised shifts c_t, in the units of `spectra`; absent where none were sought. */
  readonly shifts?: Float64Array;
}

export type FactorBlock = SquareFactors | TripleFactors | SpinorFactors | HypercontractedFactors;

/** Grouping of the two-body part. */
export type Grouping = 'joint' | 'separate';

export interface Factorisation {
  readonly grouping: Grouping;
  readonly blocks: readonly FactorBlock[];
  readonly residual: Residual;
  /**
   * One-body operator in hartree that takes the place of what truncation dropped, to be added to k of the product form,
   * or null: even sector for spatial orbitals, a Hermitian matrix over spinors.
   */
  readonly foldedMeanField: TripletOperator | ComplexMatrix | null;
  /** Energy constant that goes with it, hartree. */
  readonly foldedConstant: number;
  /** What a reader should know, e.g. that an indefinite charge part was split by eigenvectors. */
  readonly notes: readonly string[];
}

import type { Mu, Sector } from '../hamiltonian/operators';

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
  /** count weights w_t, hartree where the vectors have unit norm. Any sign. */
  readonly weights: Float64Array;
  /** count × dim. */
  readonly vectors: Float64Array;
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
}

export type FactorBlock = SquareFactors | TripleFactors;

/** Grouping of the two-body part. */
export type Grouping = 'joint' | 'separate';

/** What truncation dropped. */
export interface Residual {
  /** Frobenius norm of the dropped part of g over all indices, hartree. */
  readonly frobenius: number;
  /** LCU one-norm of the dropped part: rigorous bound on any eigenvalue's shift, hartree. */
  readonly oneNormBound: number;
  /** Factors or triples dropped. */
  readonly dropped: number;
}

export interface Factorisation {
  readonly grouping: Grouping;
  readonly blocks: readonly FactorBlock[];
  readonly residual: Residual;
  /** Mean field of the dropped spin–orbit factors, folded into the one-body part (even sector), or null. */
  readonly foldedMeanField: import('../hamiltonian/operators').TripletOperator | null;
  /** Energy constant that goes with the folded mean field, hartree. */
  readonly foldedConstant: number;
}

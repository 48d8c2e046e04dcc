import type { TripletOperator } from '../../hamiltonian';
import type { Residual } from '../dropped';

/**
 * The charge part as a tensor hypercontraction (J. Lee et al., PRX Quantum 2, 030305 (2021)),
 *
 *     ½ Σ g_pqrs T_pq T_rs + (ξ-operator) N̂  ≈  ½ Σ_mn ζ_mn T(u_m) T(u_n),   T(u) = Σ_pq u_p u_q T⁰_pq,
 *
 * so that in the η-electron sector g stands for ζ contracted minus ξ ⊗ 1 + 1 ⊗ ξ, and k⁰ loses η ξ.
 *
 * T(u) = 1 + M(u) with M(u) = ½(P_↑ + P_↓), P_σ = iγ_{uσ0}γ_{uσ1} of eigenvalues ±1. The identities leave
 * Σ_mn ζ_mn M(u_m) in the one-body part and −½ Σ ζ_mn beside E₀ + κ·T (see `hypercontractedOneBody`). The pair m ≠ n has
 * the LCU norm |ζ_mn| (½ for each order), and ½ζM² = ¼ζ(1 + P_↑P_↓) that of ¼|ζ_mm|.
 */
export interface HypercontractedFactors {
  readonly kind: 'hypercontracted';
  readonly part: 'coulomb';
  readonly n: number;
  /** M, the rank. */
  readonly count: number;
  /** count × n, real unit vectors u_m. */
  readonly vectors: Float64Array;
  /** count × count, symmetric, hartree. */
  readonly zeta: Float64Array;
  /** ξ, n × n, symmetric, hartree; null where the fit is of g itself and holds in all of Fock space. */
  readonly shift: Float64Array | null;
}

/** λ of the charge part, hartree. */
export interface HypercontractedLambda {
  /** ‖κ⁰ − c₁‖_*, with the median c₁ where the block carries a shift, else c₁ = 0. */
  readonly oneBody: number;
  /** ½ Σ_{m≠n} |ζ_mn| + ¼ Σ_m |ζ_mm|. */
  readonly twoBody: number;
  readonly total: number;
}

/** A fitted charge part and what belongs to it. */
export interface Hypercontraction {
  readonly block: HypercontractedFactors;
  /** What the fit left out: D = g − (ζ contracted − ξ ⊗ 1 − 1 ⊗ ξ), beside the mean field below. `dropped` is 0. */
  readonly residual: Residual;
  /**
   * Mean field of D over the reference occupations (direct and exchange), to be added to k⁰, even sector with empty spin
   * planes; and the constant that goes with it. With both, the energy and the Fock operator of the reference are exact.
   */
  readonly foldedMeanField: TripletOperator;
  readonly foldedConstant: number;
  /** The residual as the fit counted it, with the weights of `emphasis`: what `residualTarget` is about. Hartree. */
  readonly weighted: number;
  readonly lambda: HypercontractedLambda;
  /** Steps of the minimiser taken. */
  readonly steps: number;
  /** What a reader should know, one sentence each. */
  readonly notes: readonly string[];
}

/** Variables of the fit: what `start` takes and `onBest` gives. */
export interface HypercontractionPoint {
  readonly count: number;
  readonly vectors: Float64Array;
  readonly zeta: Float64Array;
  readonly shift: Float64Array | null;
}

export interface HypercontractionOptions {
  /** M; `auto`: 5N, at most the number of orbital pairs, where the fit can be exact. @defaultValue 'auto' */
  readonly rank?: number | 'auto';
  /** Fits g + ξ ⊗ 1 + 1 ⊗ ξ with the best ξ. @defaultValue true */
  readonly shift?: boolean;
  /**
   * How much less orbitals far from the Fermi level count in the residual that the fit minimises, 0…2: the weights are
   * (1 + |ε − ε_F|/½ Eh)^−emphasis for each of the four indices. 0: all alike; more lowers λ at the same energy of low-lying
   * states and leaves larger errors in high ones. @defaultValue 0.5
   */
  readonly emphasis?: number;
  /**
   * Frobenius norm of the weighted difference tensor over all indices that may remain, hartree, ≥ 1e-6 ‖g‖; a smaller one
   * is raised to that. λ falls as it grows. @defaultValue 0.001 N
   */
  readonly residualTarget?: number;
  /** Occupations 0…2 of the reference over which the difference becomes a mean field. @defaultValue η/N each */
  readonly occupations?: ArrayLike<number>;
  /** Steps of the minimiser in all, about. @defaultValue 1500 */
  readonly steps?: number;
  /** Continues from here: same rank, and a shift where one is asked for. */
  readonly start?: HypercontractionPoint;
  /** Told of every better point within the residual target, so that a stopped run leaves its best. */
  readonly onBest?: (point: HypercontractionPoint, lambda: number) => void;
}

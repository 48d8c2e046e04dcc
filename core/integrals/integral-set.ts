import type { Finding } from '../job';
import type { Term } from './terms';

/**
 * Layouts used throughout the core, all 0-based and row-major:
 * - `n×n`: index p·n + q.
 * - symmetric pair [pq], p ≥ q: p(p+1)/2 + q, count n(n+1)/2 (`numSymmetricPairs`).
 * - antisymmetric pair {pq}, p > q: p(p−1)/2 + q, count n(n−1)/2 (`numAntisymmetricPairs`).
 * - pairs-triangle: lower triangle of a symmetric matrix over symmetric pairs, P(P+1)/2 + Q, P ≥ Q.
 */

/** One-electron part. Exactly one of the two planes is set. In hartree. */
export interface OneElectronPart {
  readonly id: string;
  readonly role: string;
  readonly term: Term;
  /** `file` or `file:dataset`, for messages. */
  readonly origin: string;
  /** Real symmetric n×n: coefficient of T⁰_pq. */
  readonly charge: Float64Array | null;
  /** 3·n·n, k = x,y,z: real antisymmetric A^k, the coefficient of T^k_pq being iA^k_pq. */
  readonly spin: Float64Array | null;
}

/** ½ Σ A_pqrs :T⁰_pq T⁰_rs:, pairs-triangle. In hartree. */
export interface ChargeChargePart {
  readonly kind: 'charge-charge';
  readonly id: string;
  readonly role: string;
  readonly term: Term;
  readonly origin: string;
  readonly values: Float64Array;
}

/**
 * Σ_k i S^k_pqrs :T^k_pq T⁰_rs: + Σ_k i O^k_pqrs :T⁰_pq T^k_rs:, pq the momentum pair (antisymmetric), rs
 * symmetric. Each array is 3 × nanti × npair; `null` = absent. `other = { timesSame: c }` means O = c·S.
 */
export interface SpinOrbitPart {
  readonly kind: 'spin-orbit';
  readonly id: string;
  readonly role: string;
  readonly term: Term;
  readonly origin: string;
  readonly same: Float64Array | null;
  readonly other: Float64Array | { readonly timesSame: number } | null;
}

/** ½ Σ_kl A^kl_pqrs :T^k_pq T^l_rs:, kl = xx,xy,xz,yy,yz,zz, six pairs-triangles one after the other. */
export interface SpinSpinPart {
  readonly kind: 'spin-spin';
  readonly id: string;
  readonly role: string;
  readonly term: Term;
  readonly origin: string;
  readonly values: Float64Array;
}

export type TwoElectronPart = ChargeChargePart | SpinOrbitPart | SpinSpinPart;

/** Where a set came from: what a plan or a report must be able to name. */
export interface Provenance {
  readonly title: string;
  readonly files: readonly { readonly path: string; readonly bytes: number }[];
}

/** Integrals over N real orthonormal spatial orbitals. */
export interface SpatialIntegrals {
  readonly kind: 'spatial';
  readonly orbitals: number;
  readonly electrons: number;
  readonly ms2: number;
  /** Occupation numbers of the reference determinant or its spin average, 0…2, in orbital order. */
  readonly occupations: Float64Array;
  /** Hartree, by term. A term without an entry adds nothing. */
  readonly constants: Readonly<Partial<Record<Term, number>>>;
  readonly oneElectron: readonly OneElectronPart[];
  readonly twoElectron: readonly TwoElectronPart[];
  /** True where a mean-field part already contains the active electrons: it may not stand beside `so2`. */
  readonly meanFieldCoversActive: boolean;
  readonly findings: readonly Finding[];
  readonly provenance: Provenance;
}

/**
 * Integrals over M = 2N complex spinors, spinors 2m and 2m+1 (0-based) a Kramers pair:
 * H = constant + Σ h_PQ a†_P a_Q + ½ Σ (PQ|RS) a†_P a†_R a_S a_Q. Full storage, index ((P·M+Q)·M+R)·M+S.
 */
export interface SpinorIntegrals {
  readonly kind: 'spinor';
  readonly spinors: number;
  readonly electrons: number;
  readonly constant: number;
  readonly h: { readonly re: Float64Array; readonly im: Float64Array };
  readonly g: { readonly re: Float64Array; readonly im: Float64Array };
  readonly findings: readonly Finding[];
  readonly provenance: Provenance;
}

export type IntegralSet = SpatialIntegrals | SpinorIntegrals;

export const numSymmetricPairs = (n: number): number => (n * (n + 1)) / 2;
export const numAntisymmetricPairs = (n: number): number => (n * (n - 1)) / 2;
/** Index of symmetric pair [pq] in any order. */
export const symmetricPair = (p: number, q: number): number =>
  p >= q ? (p * (p + 1)) / 2 + q : (q * (q + 1)) / 2 + p;
/** Length of a pairs-triangle for n orbitals. */
export const pairsTriangleLength = (n: number): number => numSymmetricPairs(numSymmetricPairs(n));

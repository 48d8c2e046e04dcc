import type { Mu } from '../hamiltonian';

/**
 * What SELECT of the triplet form has to apply, and how often: the encoding as rows of Majorana products.
 *
 * A row stands for weight · sign · ¼ Σ_{σ,x} (−1)^f · iγ_{u,σ,x} γ_{v,σ⊕s,x⊕r}, with s, r, f fixed by its kind and
 * its spin component (see rowBits in core/circuit/triplet/rows.ts):
 * - S row: eigenpair (ε, u) of the symmetric plane of component `mu`, v = u, weight |ε|;
 * - A row: canonical pair a(u vᵀ − v uᵀ) of the antisymmetric plane, weight 2a.
 */
export interface TripletRow {
  readonly kind: 'S' | 'A';
  /** N numbers each, unit vectors; the same array for S rows. */
  readonly u: Float64Array;
  readonly v: Float64Array;
  /** What the row is on each face of its item: a face it has no part in has weight 0. */
  readonly faces: readonly RowFace[];
}

export interface RowFace {
  readonly mu: Mu;
  /** ≥ 0, in the units of the item's factor. */
  readonly weight: number;
  readonly sign: 1 | -1;
}

/**
 * A square, sign·λ·(M/Λ)² in the linear combination (up to its identity part), Λ the sum of the row weights.
 * A paired item stands for two such squares with equal λ/2 and opposite sign, in which the A rows have opposite
 * sign: X and Y of an anticommutator {X, Y}. Two faces share the row vectors with other components and weights:
 * spin–same-orbit and spin–other-orbit of one triple.
 */
export interface TripletItem {
  readonly sign: 1 | -1;
  readonly paired: boolean;
  /** λ of each face in hartree, of both squares together where paired. */
  readonly lambda: readonly number[];
  readonly rows: readonly TripletRow[];
}

/**
 * Products of two charge operators M(u) = ½ Σ_σ iγ_{u,σ,0}γ_{u,σ,1} = T⁰(u) − 1, each an S row without weight, of a
 * library of vectors: sign·λ·½{M_m, M_n} for m < n, sign·λ·(2M_m² − 1) for m = n. All arrays have the same length.
 */
export interface VectorProducts {
  /** N numbers each, unit vectors. */
  readonly vectors: readonly Float64Array[];
  /** m ≤ n of each product. */
  readonly first: Uint32Array;
  readonly second: Uint32Array;
  /** Hartree, ≥ 0. */
  readonly lambda: Float64Array;
  /** 1 or −1. */
  readonly sign: Int8Array;
}

/** H − constant = Σ one-body rows + Σ items + Σ products, λ = Σ of all weights and λ's. */
export interface TripletProgram {
  readonly orbitals: number;
  readonly constant: number;
  /** One face each. */
  readonly oneBody: readonly TripletRow[];
  readonly items: readonly TripletItem[];
  /** Absent where there are none. */
  readonly products?: VectorProducts;
}

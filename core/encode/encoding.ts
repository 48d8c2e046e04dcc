import type { Residual } from '../factor/factors';
import type { SpinHamiltonian, SpinorShift, SymmetryShift } from '../hamiltonian';
import type { TripletProgram } from './program';
import type { SparseProgram, TermSizes } from './sparse/program';
import type { AxialParts, SpinorProgram, SpinorSizes } from './spinor-program';
import type { VariantName } from './variant';

/** λ in hartree, by part; the parts sum to `total`. Keys: design interfaces, "lambda.parts". */
export interface LambdaByPart {
  readonly oneBody: number;
  readonly twoBody: number;
  readonly total: number;
  readonly parts: Readonly<Record<string, number>>;
}

/**
 * The sizes a circuit recipe needs; nothing else of the integrals enters the costs.
 * Row = one table row of SELECT: an eigenpair (S row) or a canonical pair (A row) of one plane of one factor.
 */
export interface EncodingShape {
  readonly kind: 'sparse' | 'triplet' | 'spinor';
  /** N spatial orbitals; 2N spinors. */
  readonly orbitals: number;
  /** T: items of the outer PREPARE beside the one-body item. 0 for sparse. */
  readonly factors: number;
  /** Rows of all factors, S and A. For sparse: number of stored unique coefficients. */
  readonly rows: number;
  /** Rows of all factors that need a second vector (A rows). */
  readonly pairRows: number;
  /** Rows of the one-body item. */
  readonly oneBodyRows: number;
  /** Of these, rows with a second vector. */
  readonly oneBodyPairRows: number;
  /** Largest number of rows in one factor (the one-body item included). */
  readonly maxRowsPerFactor: number;
  /** True where any row or coefficient carries spin (μ ≠ 0) or an antisymmetric plane. */
  readonly spinDependent: boolean;
  /** Triplet form with products of two vectors: how many vectors, and the part of λ of the squares and products in products m ≠ n. */
  readonly products?: { readonly vectors: number; readonly part: number };
  /** Triplet form only: the sizes item by item. */
  readonly items?: ItemSizes;
  /** Spinor form only: the sizes item by item. */
  readonly spinors?: SpinorSizes;
  /** Spinor form only, where axial rows have fewer angle bits than others. */
  readonly axialParts?: AxialParts;
  /**
   * What rounding to tables does to low states, measured and scaled to zero bits (with n bits 2^−n of it); hartree.
   * Absent where nobody measured it.
   */
  readonly measuredRounding?: { readonly keep: number; readonly rotation: number };
  /** Sparse form only: what its table and SELECT depend on. */
  readonly terms?: TermSizes;
}

/** Sizes of the items of a triplet encoding, the one-body item last: what its tables and their costs depend on. */
export interface ItemSizes {
  readonly orbitals: number;
  /** Rows of each item. */
  readonly rows: Uint32Array;
  /** Of these, A rows. */
  readonly pairRows: Uint32Array;
  /** 1 where the item has two faces. */
  readonly twoFaced: Uint8Array;
  /** Whether any item is a pair of squares. */
  readonly hasPaired: boolean;
  /** Products of two vectors of a library, if there are any. */
  readonly products?: { readonly count: number; readonly vectors: number };
}

/** One variant's encoding, ready for counting and for rebuilding H. */
export interface Encoding {
  readonly variant: VariantName;
  readonly shape: EncodingShape;
  readonly lambda: LambdaByPart;
  /** c with H − c what the circuit encodes: E₀ − ½Σw_tτ_t² + tr κ⁰ + ¼Σw_tΛ_t² (+ shift terms). Hartree. */
  readonly constant: number;
  readonly residual: Residual;
  /** What its factors could not be made as asked, one sentence each. */
  readonly notes?: readonly string[];
  /**
   * Rebuilds the Hamiltonian that this encoding stands for, from its factors alone, in product form. A shifted
   * encoding gives the same operator in the η-electron sector only.
   */
  rebuild(): SpinHamiltonian;
  /**
   * Forms over orbitals: the ξ that all shifts together amount to. What the encoding stands for is H + ξ (N̂ − η) on all
   * of Fock space, apart from what was dropped.
   */
  readonly symmetryShift?: () => SymmetryShift;
  /** The same of spinor integrals. */
  readonly spinorShift?: () => SpinorShift;
  /** Triplet form only: all rows with their vectors, for circuits and exported tables. Made anew at each call. */
  readonly program?: () => TripletProgram;
  /** Spinor form only: the same. */
  readonly spinorProgram?: () => SpinorProgram;
  /** Sparse form only: all coefficients, as above. */
  readonly sparseProgram?: () => SparseProgram;
}

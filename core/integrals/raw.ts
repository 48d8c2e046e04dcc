/** A numeric array as a file holds it, before any convention is applied. */
export interface RawArray {
  /** `file`, `file:member` or `file:/dataset`. */
  readonly origin: string;
  readonly shape: readonly number[];
  readonly complex: boolean;
  /** Row-major; complex values interleaved re, im. */
  readonly data: Float64Array;
}

/** What a restricted FCIDUMP, or the orbital part of a TREXIO file, holds. Hartree. */
export interface SpinFreeContents {
  readonly kind: 'spin-free';
  readonly origin: string;
  readonly orbitals: number;
  readonly electrons: number | null;
  readonly ms2: number;
  readonly constant: number;
  /** Symmetric n×n. */
  readonly oneElectron: Float64Array;
  /** (pq|rs), pairs-triangle. */
  readonly twoElectron: Float64Array;
  /** What a careful reader should be told, e.g. a nuclear repulsion computed from charges and coordinates. */
  readonly notes: readonly string[];
}

/** What a complex spinor FCIDUMP holds; layouts as in SpinorIntegrals. Hartree. */
export interface SpinorContents {
  readonly kind: 'spinor';
  readonly origin: string;
  readonly spinors: number;
  readonly electrons: number | null;
  readonly constant: number;
  readonly h: { readonly re: Float64Array; readonly im: Float64Array };
  readonly g: { readonly re: Float64Array; readonly im: Float64Array };
  readonly notes: readonly string[];
}

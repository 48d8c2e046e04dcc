import type { SelectableTerm } from '../integrals/terms';
import type { TripletOperator } from './operators';

/**
 * Two-electron part, the same numbers in the stored and in the product form (layouts: integral-set.ts):
 * ½ Σ_μν g^μν_pqrs (…), with
 * g⁰⁰ = `charge`; g^{k0} = i(same^k_{pq,rs} + other^k_{rs,pq}), g^{0k}_pqrs = g^{k0}_rspq; g^{kl} = `spinSpin`.
 */
export interface TwoElectronTensor {
  /** pairs-triangle, or null where no term holds one. */
  readonly charge: Float64Array | null;
  /** Sum of all spin–orbit parts, 3 × nanti × npair each; `other` may be a multiple of `same`. */
  readonly spinOrbit: {
    readonly same: Float64Array;
    readonly other: Float64Array | { readonly timesSame: number };
  } | null;
  /** six pairs-triangles xx,xy,xz,yy,yz,zz (dipolar and contact summed), or null. */
  readonly spinSpin: Float64Array | null;
}

/**
 * Spin-dependent Hamiltonian over N spatial orbitals, already restricted to the selected terms:
 * H = constant + Σ h^μ_pq T^μ_pq + ½ Σ g^μν_pqrs :T^μ_pq T^ν_rs:   (stored form)
 *   = constant + Σ k^μ_pq T^μ_pq + ½ Σ g^μν_pqrs T^μ_pq T^ν_rs     (product form). Hartree.
 */
export interface SpatialHamiltonian {
  readonly kind: 'spatial';
  readonly orbitals: number;
  readonly electrons: number;
  readonly terms: readonly SelectableTerm[];
  readonly constant: number;
  /** h of the stored form, even sector. */
  readonly h: TripletOperator;
  /** k of the product form, even sector. */
  readonly k: TripletOperator;
  readonly g: TwoElectronTensor;
}

/**
 * H = constant + Σ k_PQ a†_P a_Q + ½ Σ g_PQRS a†_P a_Q a†_R a_S over M spinors, product form;
 * `h` is the one-body part of the stored (normal-ordered) form. Row-major planes, M² and M⁴.
 */
export interface SpinorHamiltonian {
  readonly kind: 'spinor';
  readonly spinors: number;
  readonly electrons: number;
  readonly constant: number;
  readonly h: { readonly re: Float64Array; readonly im: Float64Array };
  readonly k: { readonly re: Float64Array; readonly im: Float64Array };
  readonly g: { readonly re: Float64Array; readonly im: Float64Array };
}

export type SpinHamiltonian = SpatialHamiltonian | SpinorHamiltonian;

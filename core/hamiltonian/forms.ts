import type { SelectableTerm } from '../integrals/terms';
import { orderingOperator } from './contraction';
import type { SpatialHamiltonian, SpinorHamiltonian, TwoElectronTensor } from './hamiltonian';
import { addScaled, type TripletOperator } from './operators';

interface SpatialParts {
  readonly orbitals: number;
  readonly electrons: number;
  readonly terms: readonly SelectableTerm[];
  /** Hartree. */
  readonly constant: number;
  readonly g: TwoElectronTensor;
}

/**
 * Hamiltonian from its stored (normal-ordered) form: k^λ = h^λ − ½ Σ_μν Σ_q c^μν_λ g^μν_pqqs.
 * @param h - even sector, hartree.
 */
export function fromStoredForm(parts: SpatialParts & { readonly h: TripletOperator }): SpatialHamiltonian {
  const k = addScaled(parts.h, orderingOperator(parts.orbitals, parts.g), -0.5);
  return { kind: 'spatial', ...parts, k };
}

/**
 * Hamiltonian from its product form, e.g. rebuilt from factors: h^λ = k^λ + ½ Σ_μν Σ_q c^μν_λ g^μν_pqqs.
 * @param k - even sector, hartree.
 */
export function fromProductForm(parts: SpatialParts & { readonly k: TripletOperator }): SpatialHamiltonian {
  const h = addScaled(parts.k, orderingOperator(parts.orbitals, parts.g), 0.5);
  return { kind: 'spatial', ...parts, h };
}

type Planes = SpinorHamiltonian['h'];

interface SpinorParts {
  readonly spinors: number;
  readonly electrons: number;
  readonly constant: number;
  readonly g: Planes;
}

/** h + scale · Σ_R g_PRRQ. */
function addSpinorOrdering(h: Planes, g: Planes, m: number, scale: number): Planes {
  const re = h.re.slice();
  const im = h.im.slice();
  for (let p = 0; p < m; p++) {
    for (let q = 0; q < m; q++) {
      for (let r = 0; r < m; r++) {
        const i = ((p * m + r) * m + r) * m + q;
        re[p * m + q]! += scale * g.re[i]!;
        im[p * m + q]! += scale * g.im[i]!;
      }
    }
  }
  return { re, im };
}

/** Spinor Hamiltonian from its stored form: k_PQ = h_PQ − ½ Σ_R (PR|RQ). Arrays are shared, not copied. */
export function spinorFromStoredForm(parts: SpinorParts & { readonly h: Planes }): SpinorHamiltonian {
  return { kind: 'spinor', ...parts, k: addSpinorOrdering(parts.h, parts.g, parts.spinors, -0.5) };
}

/** Spinor Hamiltonian from its product form: h_PQ = k_PQ + ½ Σ_R (PR|RQ). */
export function spinorFromProductForm(parts: SpinorParts & { readonly k: Planes }): SpinorHamiltonian {
  return { kind: 'spinor', ...parts, h: addSpinorOrdering(parts.k, parts.g, parts.spinors, 0.5) };
}

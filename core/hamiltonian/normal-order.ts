import type { SpatialHamiltonian } from './hamiltonian';
import { MUS, type Mu, type TripletOperator, zeroOperator } from './operators';
import { pauliProduct } from './pauli';
import { tensorElement } from './tensor-element';

/**
 * H = energy + {F} + ½ Σ g {T T}, braces = normal ordering with respect to the reference: F = even + odd is the
 * Fock operator with direct and exchange, `energy` the reference's expectation value. Hartree.
 */
export interface NormalOrdered {
  readonly energy: number;
  /** Time-even part of F; the whole of it where the reference carries no spin. */
  readonly even: TripletOperator;
  /** Time-odd part of F, from the reference's spin density. */
  readonly odd: TripletOperator;
}

/**
 * Normal ordering of the whole Hamiltonian with respect to a determinant, or to a mixture with fractional
 * occupations, by the generalised Wick theorem with ⟨a†_pσ a_qτ⟩ = δ_pq δ_στ n_pσ:
 * F_PQ = h_PQ + Σ_R n_R (g_PQRR − g_PRRQ), in triplet components with ρ_c = ½(n_c + m_c σ^z).
 *
 * @param up - occupations 0…1 of the ↑ spin orbitals, N numbers.
 * @param down - the same for ↓.
 * @remarks Cost at most 32·N³ element look-ups per spin component of the density: about a second for N = 50 with
 *   every term. The spin–orbit mean field alone has a faster route, spinOrbitMeanField.
 */
export function normalOrder(
  hamiltonian: SpatialHamiltonian,
  up: ArrayLike<number>,
  down: ArrayLike<number>,
): NormalOrdered {
  const { orbitals: n, h, g } = hamiltonian;
  // Complex accumulators, component λ of F − h; sorted into sectors at the end.
  const re = new Float64Array(4 * n * n);
  const im = new Float64Array(4 * n * n);
  const density = [
    { mu: 0 as Mu, weights: Float64Array.from({ length: n }, (_, c) => up[c]! + down[c]!) },
    { mu: 3 as Mu, weights: Float64Array.from({ length: n }, (_, c) => up[c]! - down[c]!) },
  ].filter(({ weights }) => weights.some((weight) => weight !== 0));
  for (const mu of MUS) {
    for (const nu of MUS) {
      const held = mu === 0 ? (nu === 0 ? g.charge : g.spinOrbit) : nu === 0 ? g.spinOrbit : g.spinSpin;
      if (!held) continue;
      for (const { mu: spin, weights } of density) {
        // Exchange: −½ w_c g^μν_pccq σ^μ σ^spin σ^ν. Direct: w_c g^μν_pqcc where ν is the density's spin.
        const first = pauliProduct(mu, spin);
        const second = pauliProduct(first.mu, nu);
        const turns = (first.quarterTurns + second.quarterTurns) % 4;
        const cosine = [1, 0, -1, 0][turns]!;
        const sine = [0, 1, 0, -1][turns]!;
        for (let p = 0; p < n; p++) {
          for (let q = 0; q < n; q++) {
            for (let c = 0; c < n; c++) {
              const weight = weights[c]!;
              if (weight === 0) continue;
              const [x, y] = tensorElement(g, n, mu, nu, p, c, c, q);
              const at = (second.mu * n + p) * n + q;
              re[at]! -= 0.5 * weight * (cosine * x - sine * y);
              im[at]! -= 0.5 * weight * (cosine * y + sine * x);
              if (nu === spin) {
                const [dx, dy] = tensorElement(g, n, mu, nu, p, q, c, c);
                re[(mu * n + p) * n + q]! += weight * dx;
                im[(mu * n + p) * n + q]! += weight * dy;
              }
            }
          }
        }
      }
    }
  }
  const even = zeroOperator('even', n);
  const odd = zeroOperator('odd', n);
  let energy = hamiltonian.constant;
  for (const mu of MUS) {
    for (let i = mu * n * n; i < (mu + 1) * n * n; i++) {
      even.planes[i] = h.planes[i]! + (mu === 0 ? re[i]! : im[i]!);
      odd.planes[i] = mu === 0 ? im[i]! : re[i]!;
    }
  }
  for (let p = 0; p < n; p++) {
    const i = p * n + p;
    const z = 3 * n * n + i;
    energy += (up[p]! + down[p]!) * (h.planes[i]! + 0.5 * re[i]!) + (up[p]! - down[p]!) * 0.5 * re[z]!;
  }
  return { energy, even, odd };
}

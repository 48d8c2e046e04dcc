import { numSymmetricPairs, symmetricPair } from '../../integrals/integral-set';

/**
 * Mean field of ½ Σ D T T (product form) over the reference density ⟨a†_pσ a_qτ⟩ = δ_pq δ_στ n_p/2, by the generalised
 * Wick theorem:
 *
 *     ½ Σ D T T = ½ Σ D {T T} + Φ·T − ½ Σ_p n_p F_pp,
 *     F_pq = Σ_c n_c (D_pqcc − ½ D_pccq),   Φ_pq = F_pq + ½ Σ_c D_pccq.
 *
 * @param d - npair × npair over orthonormal symmetric pairs, hartree
 * @returns Φ, n×n, and −½ Σ n F. Cost O(n³).
 */
export function meanField(
  d: Float64Array,
  n: number,
  occupations: ArrayLike<number>,
): { readonly plane: Float64Array; readonly constant: number } {
  const npair = numSymmetricPairs(n);
  const element = (p: number, q: number, r: number, s: number) => {
    const x = d[symmetricPair(p, q) * npair + symmetricPair(r, s)]!;
    return x * (p === q ? 1 : Math.SQRT1_2) * (r === s ? 1 : Math.SQRT1_2);
  };
  const plane = new Float64Array(n * n);
  let constant = 0;
  for (let p = 0; p < n; p++) {
    for (let q = 0; q <= p; q++) {
      let fock = 0;
      let ordering = 0;
      for (let c = 0; c < n; c++) {
        const exchange = element(p, c, c, q);
        fock += occupations[c]! * (element(p, q, c, c) - 0.5 * exchange);
        ordering += 0.5 * exchange;
      }
      plane[p * n + q] = fock + ordering;
      plane[q * n + p] = fock + ordering;
      if (p === q) constant -= 0.5 * occupations[p]! * fock;
    }
  }
  return { plane, constant };
}

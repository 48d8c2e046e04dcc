import type { Mu } from '../../hamiltonian/operators';

/** What the circuit needs to know of a row besides its vectors. Design: one uniform row format. */
export interface RowBits {
  /** Spin of the second Majorana is σ ⊕ s. */
  readonly s: 0 | 1;
  /** Kind of the second Majorana is x ⊕ r. */
  readonly r: 0 | 1;
  /** The sign (−1)^f has f = x·r ⊕ σ·m ⊕ `constant`. */
  readonly m: 0 | 1;
  readonly constant: 0 | 1;
}

/**
 * Row op = ¼ Σ_{σ,x} (−1)^f iγ_{u,σ,x} γ_{v,σ⊕s,x⊕r}: the expansion of T^μ(u) − δ_μ0 and of O^μ(u, v) in Majorana
 * products (derived in the design from a = (γ₀ + iγ₁)/2; checked on Fock space in the tests).
 */
export function rowBits(kind: 'S' | 'A', mu: Mu): RowBits {
  const y = mu === 2 ? 1 : 0;
  const z = mu === 3 ? 1 : 0;
  const a = kind === 'A' ? 1 : 0;
  return {
    s: mu === 1 || mu === 2 ? 1 : 0,
    r: (1 ^ a ^ y) as 0 | 1,
    m: (y ^ z) as 0 | 1,
    constant: (y & (1 ^ a)) as 0 | 1,
  };
}

import type { Mu } from '../../hamiltonian';

/** What a group of rows multiplies. */
export type TermKind = PairsKind | StringsKind;

/**
 * With the row operators of the triplet form (core/circuit/triplet/rows.ts) on basis vectors,
 * R(kind, μ; p, q) = ¼ Σ_{σ,x} (−1)^f iγ_{pσx} γ_{q,σ⊕s,x⊕r}, a coefficient stands for weight · sign · ½(R_I R_J + R_J R_I),
 * or weight · sign · R_I where it is of one body.
 */
export interface PairsKind {
  readonly form: 'pairs';
  /** I is of an antisymmetric plane; J never is. */
  readonly antisymmetric: boolean;
  /** Spin component of I. */
  readonly mu: Mu;
  /** Spin component of J; null: a one-body term. */
  readonly nu: Mu | null;
  /**
   * One value for both spin–orbit kinds: (A μ)(S 0) with weight 1 − `otherShare`, (A 0)(S μ) with `otherShare` and
   * `otherSign`.
   */
  readonly shared: boolean;
  /** One value for both ways of placing two components: half (S μ)(S ν), half (S ν)(S μ). */
  readonly exchanged: boolean;
}

/**
 * Majorana products whose spins go together: weight · sign times
 *
 *     ⅛ Σ_{σxy} (−1)^{mσ + r₁x + r₂y} (iγ_{pσx} γ_{q,σ⊕s₁,x⊕r₁})(iγ_{r,σ⊕t,y} γ_{s,σ⊕t⊕s₂,y⊕r₂}),   m = s₁⊕s₂⊕r₁⊕r₂.
 *
 * The two pairs have no operator in common, so that they commute.
 */
export interface StringsKind {
  readonly form: 'strings';
  /** s₁ + 2s₂ + 4t + 8r₁ + 16r₂. */
  readonly flags: number;
}

/** Whether anything but symmetric pairs of equal spin is named. */
export function carriesSpin(kind: TermKind): boolean {
  if (kind.form === 'strings') return (kind.flags & ~4) !== (8 | 16);
  return kind.antisymmetric || kind.mu !== 0 || (kind.nu ?? 0) !== 0;
}

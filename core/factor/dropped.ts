/** What truncation dropped, or a fit left out. */
export interface Residual {
  /** Frobenius norm of the dropped part of g over all indices, hartree. */
  readonly frobenius: number;
  /** LCU one-norm of the dropped part: rigorous bound on any eigenvalue's shift, hartree. */
  readonly oneNormBound: number;
  /** Factors, triples or coefficients dropped. */
  readonly dropped: number;
}

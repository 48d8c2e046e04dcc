import type { Mu } from './operators';

/** i^quarterTurns · σ^mu. */
export interface PauliTerm {
  readonly mu: Mu;
  readonly quarterTurns: number;
}

/** σ^a σ^b as one term: σ^kσ^l = δ_kl + iε_klm σ^m. */
export function pauliProduct(a: Mu, b: Mu): PauliTerm {
  if (a === 0) return { mu: b, quarterTurns: 0 };
  if (b === 0) return { mu: a, quarterTurns: 0 };
  if (a === b) return { mu: 0, quarterTurns: 0 };
  const cyclic = (a % 3) + 1 === b;
  return { mu: (6 - a - b) as Mu, quarterTurns: cyclic ? 1 : 3 };
}

/** The entries of σ^mu that are not zero, in units of 1 (re) and i (im); spins 0 = ↑, 1 = ↓. */
export const PAULI_ENTRIES: readonly (readonly {
  readonly row: 0 | 1;
  readonly column: 0 | 1;
  readonly re: number;
  readonly im: number;
}[])[] = [
  [
    { row: 0, column: 0, re: 1, im: 0 },
    { row: 1, column: 1, re: 1, im: 0 },
  ],
  [
    { row: 0, column: 1, re: 1, im: 0 },
    { row: 1, column: 0, re: 1, im: 0 },
  ],
  [
    { row: 0, column: 1, re: 0, im: -1 },
    { row: 1, column: 0, re: 0, im: 1 },
  ],
  [
    { row: 0, column: 0, re: 1, im: 0 },
    { row: 1, column: 1, re: -1, im: 0 },
  ],
];

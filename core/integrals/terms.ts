/** Terms of the Breit–Pauli Hamiltonian that a file can hold, in canonical order. */
export const TERMS = ['sf', 'so1', 'somf', 'so2', 'ss', 'scalar', 'ssc'] as const;
export type Term = (typeof TERMS)[number];

/** Selectable terms: those of files, and `so2mf`, the computed mean field of `so2`. */
export type SelectableTerm = Term | 'so2mf';

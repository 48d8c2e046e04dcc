import type { SelectableTerm } from '../integrals';

/**
 * The cumulative levels that a data set's `reference.json` lists, and the terms each holds: eigenvalues of the
 * fixed electron number from the program that made the integrals.
 */
export const REFERENCE_LEVELS: readonly {
  readonly name: string;
  readonly terms: readonly SelectableTerm[];
}[] = [
  { name: 'spinfree', terms: ['sf'] },
  { name: 'so1_bare', terms: ['sf', 'so1'] },
  { name: 'so1_plus_core_meanfield', terms: ['sf', 'so1', 'somf'] },
  { name: 'so1_so2', terms: ['sf', 'so1', 'somf', 'so2'] },
  { name: 'so1_so2_ss', terms: ['sf', 'so1', 'somf', 'so2', 'ss'] },
  { name: 'so1_so2_ss_scalar', terms: ['sf', 'so1', 'somf', 'so2', 'ss', 'scalar'] },
  { name: 'so1_so2_ss_scalar_ssc', terms: ['sf', 'so1', 'somf', 'so2', 'ss', 'scalar', 'ssc'] },
];

/**
 * Eigenvalues that a `reference.json` lists for exactly these terms, ascending, hartree; null where it has none
 * or is no such file.
 * @param document - the parsed JSON.
 */
export function referenceEigenvalues(
  document: unknown,
  terms: readonly SelectableTerm[],
): readonly number[] | null {
  const level = REFERENCE_LEVELS.find(
    (candidate) =>
      candidate.terms.length === terms.length && candidate.terms.every((term) => terms.includes(term)),
  );
  const levels = field(document, 'levels');
  const values = level && field(field(levels, level.name), 'eigenvalues');
  return Array.isArray(values) && values.every((value) => typeof value === 'number') ? values : null;
}

function field(value: unknown, key: string): unknown {
  return typeof value === 'object' && value !== null ? (value as Record<string, unknown>)[key] : undefined;
}

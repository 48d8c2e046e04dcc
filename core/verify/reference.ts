import type { SelectableTerm } from '../integrals/terms';

/** Names of the cumulative levels in a `reference.json` and the terms each one holds. */
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

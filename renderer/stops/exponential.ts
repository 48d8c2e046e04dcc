import { formatSignificant } from '../figures/figures';

/** A small or large number for a table of checks: three digits, zero as `0`. */
export function exponential(value: number): string {
  return formatSignificant(value, 3);
}

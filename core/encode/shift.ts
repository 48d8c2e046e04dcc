/**
 * Median of ascending numbers, for an even count the midpoint of the two middle ones: the c that makes
 * Σ|ε_j − c| least. 0 for none.
 */
export function median(values: Float64Array, from = 0, to = values.length): number {
  const count = to - from;
  if (count === 0) return 0;
  const half = from + (count >> 1);
  return count % 2 === 1 ? values[half]! : (values[half - 1]! + values[half]!) / 2;
}

/** Σ|ε_j − c| over values[from, to). */
export function shiftedNorm(values: Float64Array, from: number, to: number, c: number): number {
  let sum = 0;
  for (let i = from; i < to; i++) sum += Math.abs(values[i]! - c);
  return sum;
}

/** How many |ε_j − c| exceed `zero`. */
export function countAbove(values: Float64Array, from: number, to: number, c: number, zero: number): number {
  let count = 0;
  for (let i = from; i < to; i++) if (Math.abs(values[i]! - c) > zero) count++;
  return count;
}

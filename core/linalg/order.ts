/** Positions that put `values` in ascending order; equal values keep their order. */
export function ascending(values: Float64Array): number[] {
  return Array.from(values.keys()).sort((x, y) => values[x] - values[y] || x - y);
}

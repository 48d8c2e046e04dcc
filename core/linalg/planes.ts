/** Complex numbers in two planes; `im` has length 0 when everything is real. */
export interface Planes {
  readonly re: Float64Array;
  readonly im: Float64Array;
}

/** Σ a_i b_i over the length of `a`. */
export function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i]! * b[i]!;
  return sum;
}

/** a += scale · b. */
export function addScaledTo(a: Float64Array, b: Float64Array, scale: number): void {
  for (let i = 0; i < a.length; i++) a[i]! += scale * b[i]!;
}

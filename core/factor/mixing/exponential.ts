import { matrixExponential } from '../../linalg';

/**
 * exp(scale·A), count×count, class by class: A has no elements between members of different classes, and neither has the
 * result any.
 */
export function exponential(
  a: Float64Array,
  count: number,
  scale: number,
  classes: ArrayLike<number>,
): Float64Array {
  const out = new Float64Array(count * count);
  const members = new Map<number, number[]>();
  for (let t = 0; t < count; t++) {
    const own = members.get(classes[t]!);
    if (own) own.push(t);
    else members.set(classes[t]!, [t]);
  }
  for (const own of members.values()) {
    const size = own.length;
    const block = new Float64Array(size * size);
    own.forEach((s, i) => {
      own.forEach((t, j) => {
        block[i * size + j] = a[s * count + t]!;
      });
    });
    const found = matrixExponential(block, size, scale);
    own.forEach((s, i) => {
      own.forEach((t, j) => {
        out[s * count + t] = found[i * size + j]!;
      });
    });
  }
  return out;
}

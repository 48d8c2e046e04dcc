/** Bytes read at a time: some ten milliseconds of unpacking. */
const SLICE_BYTES = 2 ** 22;

/** Boxes that cover an array in row-major order, each of at most {@link SLICE_BYTES} where chunks allow it. */
export function* slices(
  shape: readonly number[],
  chunks: readonly number[] | null,
  bytesEach: number,
): Generator<{ offset: number[]; extent: number[] }> {
  if (shape.includes(0)) return;
  // The first axis along which one layer is small enough; those before it are walked one by one.
  let axis = 0;
  let layer = bytesEach;
  for (let a = shape.length - 1; a >= 0; a--) {
    axis = a;
    if (a === 0 || layer * shape[a] > SLICE_BYTES) break;
    layer *= shape[a];
  }
  if (shape.length === 0) {
    yield { offset: [], extent: [] };
    return;
  }
  let rows = Math.max(1, Math.floor(SLICE_BYTES / layer));
  // Whole chunks, so that none is unpacked twice, unless a chunk is huge.
  const chunk = chunks?.[axis] ?? 1;
  if (chunk * layer <= 8 * SLICE_BYTES) rows = Math.max(chunk, rows - (rows % chunk));
  const leading = shape.slice(0, axis);
  const count = leading.reduce((product, n) => product * n, 1);
  for (let outer = 0; outer < count; outer++) {
    const prefix: number[] = [];
    for (let a = axis - 1, rest = outer; a >= 0; a--) {
      prefix.unshift(rest % shape[a]);
      rest = Math.floor(rest / shape[a]);
    }
    for (let at = 0; at < shape[axis]; at += rows) {
      yield {
        offset: [...prefix, at, ...shape.slice(axis + 1).map(() => 0)],
        extent: [...prefix.map(() => 1), Math.min(rows, shape[axis] - at), ...shape.slice(axis + 1)],
      };
    }
  }
}

import { clusterBasis, clusterTriples, type SingularValues } from '../linalg';

/** Two weights closer than this, relative to the larger of the two, are one degenerate level. */
const RELATIVE = 1e-8;
/** Spread that a solver's rounding leaves in a degenerate level, relative to the largest weight of all. */
const ROUNDING = 1e-13;

/**
 * Half-open ranges of degenerate levels in sorted values. The distance is measured against the level itself: a
 * spin–orbit weight of 1e-7 Eh beside a Coulomb one of 1 Eh must not join its neighbours.
 */
function levels(values: Float64Array): [number, number][] {
  let scale = 0;
  for (const x of values) scale = Math.max(scale, Math.abs(x));
  const ranges: [number, number][] = [];
  for (let from = 0, i = 1; i <= values.length; i++) {
    const a = values[i - 1]!;
    const b = values[i]!;
    const gap = RELATIVE * Math.max(Math.abs(a), Math.abs(b)) + ROUNDING * scale;
    if (i < values.length && Math.abs(a - b) <= gap) continue;
    ranges.push([from, i]);
    from = i;
  }
  return ranges;
}

/** Applies the degenerate-cluster rule to sorted eigenvalues with orthonormal rows of length n. */
export function canonicalVectors(
  values: Float64Array,
  vectors: Float64Array,
  n: number,
): { readonly weights: Float64Array; readonly vectors: Float64Array } {
  const weights = Float64Array.from(values);
  const out = Float64Array.from(vectors);
  for (const [from, to] of levels(values)) {
    if (to - from < 2) continue;
    const rows = vectors.subarray(from * n, to * n);
    const basis = clusterBasis(values.subarray(from, to), rows, n, Number.POSITIVE_INFINITY);
    weights.set(basis.weights, from);
    out.set(basis.vectors, from * n);
  }
  return { weights, vectors: out };
}

/** The same for singular triples sorted by s. */
export function canonicalTriples(triples: SingularValues): SingularValues {
  const { rows, cols } = triples;
  const s = Float64Array.from(triples.s);
  const u = Float64Array.from(triples.u);
  const v = Float64Array.from(triples.v);
  for (const [from, to] of levels(triples.s)) {
    if (to - from < 2) continue;
    const level = clusterTriples(
      {
        rows,
        cols,
        rank: to - from,
        s: triples.s.subarray(from, to),
        u: triples.u.subarray(from * rows, to * rows),
        v: triples.v.subarray(from * cols, to * cols),
      },
      Number.POSITIVE_INFINITY,
    );
    s.set(level.s, from);
    u.set(level.u, from * rows);
    v.set(level.v, from * cols);
  }
  return { rows, cols, rank: triples.rank, s, u, v };
}

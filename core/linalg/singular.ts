import type { JobContext } from '../job';
import { type Arena, put, takeZeros } from './kernels/arena';
import { transpose } from './multiply';
import { ascending } from './order';
import { gramSteps, productSteps, rowMajor, transposed } from './products';
import { runAsJob, type Steps } from './steps';
import { eigenInArena, eigenWork } from './symmetric';
import type { SingularValues } from './types';

export interface SingularOptions {
  /**
   * Triples with s ≤ tolerance · s_max are dropped, which costs at most that in ‖A − Σ s u vᵀ‖₂ for each. The fewer small ones are
   * kept, the faster: from 2e-8 on a single pass over the whole matrix is enough, below it takes two. @defaultValue 1e-13
   */
  readonly tolerance?: number;
}

/** A level of the recursion keeps the triples down to this part of its largest one. */
const LEVEL = 1e-3;
/** Rows below this part of a level's largest are mixtures of each other: the root of 2⁻⁵², with some room. */
const BLUR = 2e-8;

/**
 * Singular values (descending) and vectors of a rows×cols matrix: A = Σ_i s_i u_i v_iᵀ. Progress in stage `singular`.
 *
 * @remarks
 * Route: eigenvectors of the smaller Gram matrix, say AAᵀ = U Λ Uᵀ; then W = UᵀA has orthogonal rows s v. A Gram matrix
 * squares the spectrum, so only rows with s > 10⁻³·s_max are accepted; the small ones are freed from what is
 * left of the large ones by first-order rotations and treated again on their own scale, level by level.
 *
 * Guarantees: A = Σ s u vᵀ to about 1e-14·‖A‖ by construction (U orthogonal, s v = uᵀA), whatever the accuracy of the vectors;
 * the vectors on the smaller side (u if rows ≤ cols) are orthonormal to 1e-13, those on the larger side to
 * 1e-15·(s_l/s)² with s_l the largest s of their level, at worst 1e-9. Each s is right to 1e-14·s_max, not
 * relative to itself.
 */
export async function singularValues(
  a: Float64Array,
  rows: number,
  cols: number,
  context: JobContext,
  options: SingularOptions = {},
): Promise<SingularValues> {
  if (a.length < rows * cols) throw new RangeError(`${rows}×${cols} matrix: got ${a.length} numbers`);
  if (rows > cols) {
    const t = await singularValues(transpose(a, rows, cols), cols, rows, context, options);
    return { rows, cols, rank: t.rank, s: t.s, u: t.v, v: t.u };
  }
  const tolerance = options.tolerance ?? 1e-13;
  const total = 4 * rows * rows * cols + 2 * eigenWork(rows); // an estimate: levels below the first are smaller
  return runAsJob((arena) => tripleSteps(arena, a, rows, cols, tolerance), 'singular', total, context);
}

/** Rows U (count×rows) and W = U A (count×cols) in the arena, with the norms s of W's rows. */
interface Level {
  readonly u: number;
  readonly w: number;
  readonly s: Float64Array;
}

function* tripleSteps(
  arena: Arena,
  a: Float64Array,
  rows: number,
  cols: number,
  tolerance: number,
): Steps<SingularValues> {
  const scale = a.reduce((max, x) => Math.max(max, Math.abs(x)), 0);
  // Squares of very large or small numbers would leave the number range.
  const input = a.subarray(0, rows * cols).map((x) => x / (scale || 1));
  const found: { readonly level: Level; readonly count: number }[] = [];
  let level = yield* diagonalise(arena, null, put(arena, input), rows, rows, cols);
  const least = tolerance * (level.s[0] ?? 0);
  for (;;) {
    const { s } = level;
    // Nothing is dropped while a row may still hold a part of what is to be kept.
    const small = BLUR * s[0] <= least ? s.findIndex((x) => x <= least) : -1;
    const count = small < 0 ? s.length : small;
    if (count === 0) break;
    const cut = levelEnd(s, count);
    found.push({ level, count: cut });
    if (cut === count) break;
    yield* separate(arena, level, cut, count, rows, cols);
    const { u, w } = level;
    level = yield* diagonalise(arena, u + cut * rows, w + cut * cols, count - cut, rows, cols);
  }

  const triples = found.flatMap(({ level, count }) =>
    Array.from({ length: count }, (_, i) => ({
      u: level.u + i * rows,
      w: level.w + i * cols,
      s: rowNorm(arena.f64, level.w + i * cols, cols), // separating the levels may have changed it a little
    })),
  );
  triples.sort((x, y) => y.s - x.s);
  const rank = triples.length;
  const out = {
    s: new Float64Array(rank),
    u: new Float64Array(rank * rows),
    v: new Float64Array(rank * cols),
  };
  for (const [to, { u, w, s }] of triples.entries()) {
    out.s[to] = s * scale;
    out.u.set(arena.f64.subarray(u, u + rows), to * rows);
    for (let k = 0; k < cols; k++) out.v[to * cols + k] = arena.f64[w + k] / s;
  }
  return { rows, cols, rank, ...out };
}

/** Rotates the rows of W to orthogonality, largest first, and those of U (null: the unit matrix) with them. */
function* diagonalise(
  arena: Arena,
  u: number | null,
  w: number,
  count: number,
  rows: number,
  cols: number,
): Steps<Level> {
  const gram = arena.take(count * count);
  yield* gramSteps(arena, w, count, cols, gram);
  const { values, vectors } = yield* eigenInArena(arena, gram, count);
  // In descending order; the Gram matrix is used up and has just the right size.
  const order = ascending(arena.f64.subarray(values, values + count)).reverse();
  for (const [to, from] of order.entries()) {
    arena.f64.copyWithin(gram + to * count, vectors + from * count, vectors + (from + 1) * count);
  }
  const rotation = rowMajor(gram, count);
  const newW = takeZeros(arena, count * cols);
  yield* productSteps(arena, count, cols, count, 1, rotation, rowMajor(w, cols), newW, cols);
  let newU = gram;
  if (u !== null) {
    newU = takeZeros(arena, count * rows);
    yield* productSteps(arena, count, rows, count, 1, rotation, rowMajor(u, rows), newU, rows);
  }
  const m = arena.f64;
  const s = new Float64Array(count);
  for (let i = 0; i < count; i++) s[i] = rowNorm(m, newW + i * cols, cols);
  return { u: newU, w: newW, s };
}

/**
 * Where to end a level of `count` values: after the last value above LEVEL·s_0, or at a wider gap up to three times
 * below it, so that no cluster of equal values is cut.
 */
function levelEnd(s: Float64Array, count: number): number {
  const bound = LEVEL * s[0];
  let cut = count;
  let widest = 0;
  for (let i = 1; i < count; i++) {
    if (s[i] > bound) continue;
    const ratio = s[i - 1] / s[i];
    if (ratio > widest * 1.000001) {
      widest = ratio;
      cut = i;
    }
    if (s[i] < bound / 3) break;
  }
  return cut;
}

/**
 * First-order rotations between the rows before and after `cut`: with x_ij = w_i·w_j / (s_j² − s_i²), w_i −= Σ_j x_ij w_j and
 * w_j += Σ_i x_ij w_i are orthogonal up to x², and x is about 1e-10.
 */
function* separate(
  arena: Arena,
  level: Level,
  cut: number,
  count: number,
  rows: number,
  cols: number,
): Steps<void> {
  const small = count - cut;
  const mark = arena.mark();
  const x = takeZeros(arena, small * cut);
  const { u, w, s } = level;
  yield* productSteps(
    arena,
    small,
    cut,
    cols,
    1,
    rowMajor(w + cut * cols, cols),
    transposed(rowMajor(w, cols)),
    x,
    cut,
  );
  for (let i = 0; i < small; i++) {
    for (let j = 0; j < cut; j++) arena.f64[x + i * cut + j] /= s[j] ** 2 - s[cut + i] ** 2;
  }
  for (const [at, width] of [
    [w, cols],
    [u, rows],
  ]) {
    const lower = at + cut * width;
    const before = arena.take(small * width);
    arena.f64.copyWithin(before, lower, lower + small * width);
    yield* productSteps(arena, small, width, cut, -1, rowMajor(x, cut), rowMajor(at, width), lower, width);
    const turned = transposed(rowMajor(x, cut));
    yield* productSteps(arena, cut, width, small, 1, turned, rowMajor(before, width), at, width);
  }
  arena.release(mark);
}

function rowNorm(x: Float64Array, from: number, length: number): number {
  let largest = 0;
  for (let k = from; k < from + length; k++) largest = Math.max(largest, Math.abs(x[k]));
  if (largest === 0) return 0;
  let sum = 0;
  for (let k = from; k < from + length; k++) sum += (x[k] / largest) ** 2;
  return largest * Math.sqrt(sum);
}

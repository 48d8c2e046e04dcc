import type { Arena } from './kernels/arena';
import { TINY } from './kernels/plain-triangle';
import { type SecularRoots, solveSecular } from './secular';
import type { Steps } from './steps';

/** Blocks up to this order are solved by QL. */
const LEAF = 48;
/** Roots or new vectors handled between two yields. */
const BAND = 128;

/** Work units of {@link divideSteps}: the merges' matrix products without deflation. */
export const divideWork = (n: number) => (4 / 3) * n ** 3;

/**
 * All eigenpairs of the symmetric tridiagonal matrix with diagonal at `d` and T_{i+1,i} at e[i]: divide and conquer
 * (Cuppen 1981; stable vectors by Gu & Eisenstat 1995; deflation rules as published there, quoted from memory).
 * Afterwards `d` holds the eigenvalues and row i of `v` (n×n) the vector of d[i], in no order; `e` is destroyed.
 */
export function* divideSteps(arena: Arena, d: number, e: number, n: number, v: number): Steps<void> {
  if (n === 0) return;
  const m = arena.f64;
  let scale = 0;
  for (let i = 0; i < n; i++) scale = Math.max(scale, Math.abs(m[d + i]), i < n - 1 ? Math.abs(m[e + i]) : 0);
  if (scale < TINY) {
    m.fill(0, v, v + n * n);
    for (let i = 0; i < n; i++) m[v + i * n + i] = 1;
    return;
  }
  for (let i = 0; i < n; i++) {
    m[d + i] /= scale;
    m[e + i] /= scale;
  }
  const mark = arena.mark();
  const room = arena.take(n * n);
  const chunk = arena.take(BAND * n);
  yield* solve(0, n);
  arena.release(mark);
  for (let i = 0; i < n; i++) arena.f64[d + i] *= scale;

  function* solve(from: number, to: number): Steps<void> {
    if (to - from <= LEAF) {
      leaf(from, to - from);
      return;
    }
    const middle = (from + to) >> 1;
    const rho = arena.f64[e + middle - 1];
    // T = diag(T₁, T₂) + |ρ| x xᵀ, x = e_{middle−1} ± e_middle
    arena.f64[d + middle - 1] -= Math.abs(rho);
    arena.f64[d + middle] -= Math.abs(rho);
    yield* solve(from, middle);
    yield* solve(middle, to);
    yield* merge(from, middle, to, rho);
  }

  function leaf(from: number, size: number): void {
    const m = arena.f64;
    const at = v + from * n + from;
    for (let i = 0; i < size; i++) {
      m.fill(0, at + i * n, at + i * n + size);
      m[at + i * n + i] = 1;
    }
    if (arena.kernels.qlSteps(d + from, e + from, size, at, n, size) !== 0) {
      throw new Error(`tridiagonal QL did not converge in rows ${from}…${from + size - 1} of ${n}`);
    }
  }

  function* merge(from: number, middle: number, to: number, rho: number): Steps<void> {
    const size = to - from;
    const work = size ** 3;
    for (let row = from; row < to; row++) {
      const left = row < middle;
      arena.f64.fill(0, v + row * n + (left ? middle : from), v + row * n + (left ? to : middle));
      if ((row - from) % 512 === 511) yield 0; // fresh pages of memory take their time
    }
    const joint = deflate(arena, { d, v, n, from, middle, to, rho });
    const { kept, poles, z } = joint;
    const k = kept.length;
    if (k === 0) {
      yield work;
      return;
    }
    const roots: SecularRoots = { pole: new Int32Array(k), offset: new Float64Array(k) };
    for (let j = 0; j < k; j += BAND) {
      solveSecular(roots, poles, z, k, joint.rho, j, Math.min(k, j + BAND));
      yield 0;
    }
    const zHat = yield* consistentWeights(roots, poles, z, k);

    // Rows by where they are non-zero: left half, both (after a rotation), right half.
    const groups = [0, 1, 2].map((side) => kept.map((_, i) => i).filter((i) => joint.side[kept[i]] === side));
    const order = groups.flat();
    const leftRows = groups[0].length + groups[1].length;
    const rightStart = groups[0].length;
    const m = arena.f64;
    const copyRow = (row: number, slot: number) => {
      const source = v + (from + row) * n + from;
      m.copyWithin(room + slot * size, source, source + size);
    };
    for (const [slot, row] of [...order.map((i) => kept[i]), ...joint.done].entries()) {
      copyRow(row, slot);
      if (slot % 512 === 511) yield 0;
    }
    const doneValues = joint.done.map((row) => m[d + from + row]);

    const leftCols = middle - from;
    for (let j = 0; j < k; j += BAND) {
      const rows = Math.min(BAND, k - j);
      for (let r = 0; r < rows; r++) {
        newVector(m, chunk + r * k, roots, poles, zHat, order, j + r);
        m[d + from + j + r] = poles[roots.pole[j + r]] + roots.offset[j + r];
      }
      const target = v + (from + j) * n + from;
      for (let r = 0; r < rows; r++) m.fill(0, target + r * n, target + r * n + size);
      const { gemm } = arena.kernels;
      gemm(rows, leftCols, leftRows, 1, chunk, k, 1, room, size, 1, target, n);
      const right = k - rightStart;
      const source = room + rightStart * size + leftCols;
      gemm(rows, size - leftCols, right, 1, chunk + rightStart, k, 1, source, size, 1, target + leftCols, n);
      yield (work * rows) / size;
    }
    joint.done.forEach((_, i) => {
      const slot = room + (k + i) * size;
      m.copyWithin(v + (from + k + i) * n + from, slot, slot + size);
      m[d + from + k + i] = doneValues[i];
    });
    yield (work * (size - k)) / size;
  }
}

interface MergeBlock {
  readonly d: number;
  readonly v: number;
  readonly n: number;
  readonly from: number;
  readonly middle: number;
  readonly to: number;
  readonly rho: number;
}

interface Deflated {
  /** Local rows that take part, ordered by pole. */
  readonly kept: number[];
  /** Local rows that are eigenvectors already. */
  readonly done: number[];
  readonly poles: Float64Array;
  readonly z: Float64Array;
  /** Positive weight of the rank-one part, for ‖z‖ ≤ 1. */
  readonly rho: number;
  /** 0: row lives in the left half, 2: in the right half, 1: in both. */
  readonly side: Uint8Array;
}

/**
 * Finds the pairs that the rank-one part leaves alone: those with no weight in it, and, after a rotation between
 * them, one of two with (nearly) equal values.
 */
function deflate(arena: Arena, block: MergeBlock): Deflated {
  const { d, v, n, from, middle, to } = block;
  const m = arena.f64;
  const size = to - from;
  const sign = block.rho < 0 ? -1 : 1;
  const rho = 2 * Math.abs(block.rho);
  const value = new Float64Array(size);
  const weight = new Float64Array(size);
  const side = new Uint8Array(size);
  let largest = 0;
  let heaviest = 0;
  for (let i = 0; i < size; i++) {
    const row = v + (from + i) * n;
    const left = from + i < middle;
    value[i] = m[d + from + i];
    weight[i] = (left ? m[row + middle - 1] : sign * m[row + middle]) * Math.SQRT1_2;
    side[i] = left ? 0 : 2;
    largest = Math.max(largest, Math.abs(value[i]));
    heaviest = Math.max(heaviest, Math.abs(weight[i]));
  }
  const tolerance = 8 * Number.EPSILON * Math.max(largest, heaviest);
  const order = Array.from(value.keys()).sort((i, j) => value[i] - value[j] || i - j);
  const kept: number[] = [];
  const done: number[] = [];
  for (const i of order) {
    if (rho * Math.abs(weight[i]) <= tolerance) {
      done.push(i);
      continue;
    }
    const last = kept.at(-1);
    if (last !== undefined) {
      const tau = Math.hypot(weight[i], weight[last]);
      const c = weight[i] / tau;
      const s = -weight[last] / tau;
      const gap = value[i] - value[last];
      if (Math.abs(gap * c * s) <= tolerance) {
        weight[i] = tau;
        weight[last] = 0;
        rotateRows(m, v + (from + last) * n + from, v + (from + i) * n + from, size, c, s);
        const kept0 = value[last] * c * c + value[i] * s * s;
        value[i] = value[last] * s * s + value[i] * c * c;
        value[last] = kept0;
        m[d + from + last] = kept0;
        m[d + from + i] = value[i];
        if (side[last] !== side[i]) {
          side[last] = 1;
          side[i] = 1;
        }
        done.push(last);
        kept.pop();
      }
    }
    kept.push(i);
  }
  return {
    kept,
    done,
    poles: Float64Array.from(kept, (i) => value[i]),
    z: Float64Array.from(kept, (i) => weight[i]),
    rho,
    side,
  };
}

function rotateRows(m: Float64Array, x: number, y: number, size: number, c: number, s: number): void {
  for (let k = 0; k < size; k++) {
    const a = m[x + k];
    const b = m[y + k];
    m[x + k] = c * a + s * b;
    m[y + k] = c * b - s * a;
  }
}

/**
 * The z for which the computed roots are exact: with it the vectors are orthogonal however close the roots are.
 * ẑ_i² = Π_j (λ_j − d_i) / Π_{j≠i} (d_j − d_i), taken in pairs so that no partial product leaves the number range.
 */
function* consistentWeights(
  roots: SecularRoots,
  d: Float64Array,
  z: Float64Array,
  k: number,
): Steps<Float64Array> {
  const product = new Float64Array(k).fill(1);
  for (let j = 0; j < k; j++) {
    const origin = d[roots.pole[j]];
    const x = roots.offset[j];
    for (let i = 0; i < j; i++) product[i] *= (d[i] - origin - x) / (d[i] - d[j]);
    product[j] *= Math.abs(d[j] - origin - x);
    for (let i = j + 1; i < k; i++) product[i] *= (d[i] - origin - x) / (d[i] - d[j]);
    if (j % BAND === BAND - 1) yield 0;
  }
  for (let i = 0; i < k; i++) product[i] = Math.sign(z[i]) * Math.sqrt(Math.abs(product[i]));
  return product;
}

/** Coefficients of new vector j over the rows in `order`, normalised. */
function newVector(
  m: Float64Array,
  to: number,
  roots: SecularRoots,
  d: Float64Array,
  z: Float64Array,
  order: number[],
  j: number,
): void {
  const origin = d[roots.pole[j]];
  const x = roots.offset[j];
  const k = order.length;
  let sum = 0;
  for (let slot = 0; slot < k; slot++) {
    const i = order[slot];
    const y = z[i] / (d[i] - origin - x);
    m[to + slot] = y;
    sum += y * y;
  }
  const f = 1 / Math.sqrt(sum);
  for (let slot = 0; slot < k; slot++) m[to + slot] *= f;
}

import { numAntisymmetricPairs, numSymmetricPairs } from '../integrals/integral-set';
import { antisymmetricPairs, symmetricEigen } from '../linalg';
import { planeInto, sectorLayout } from './elements';
import type { SquareFactors, TripleFactors } from './factors';
import { lcuNorms, squareOneNorms, tripleOneNorms } from './one-norms';

/** One row of a plane: its size and its coordinates over pairs, the size included. */
interface PlaneRow {
  readonly size: number;
  readonly vector: Float64Array;
}

/** A block whose light rows can be taken out at any cut, decomposed once. */
export interface Compactible<Block> {
  /** Largest LCU one-norm of a factor, hartree. */
  readonly heaviest: number;
  /**
   * The block without the rows that weigh at most `cut` hartree, and without factors that have none left. What remains
   * are factors of lower rank, again with unit vectors. Rows of equal weight go or stay together, so symmetry survives.
   */
  readonly at: (cut: number) => Compacted<Block>;
}

export interface Compacted<Block> {
  readonly block: Block;
  /** Rigorous bound on what the lost rows, without `constant`, change of any eigenvalue; hartree. */
  readonly bound: number;
  /** Hartree, in place of what is lost. */
  readonly constant: number;
  /** Factors that lost some or all of their rows. */
  readonly changed: number;
}

/**
 * Triples: row j of a_t weighs (|sameScale| + |otherScale|)·s·2a_j·Λ_S, row i of S_t (…)·s·Λ_a·|ε_i|, the LCU one-norm
 * of what the triple loses without it.
 */
export function compactibleTriples(block: TripleFactors): Compactible<TripleFactors> {
  const { n, count } = block;
  const [nanti, npair, half] = [numAntisymmetricPairs(n), numSymmetricPairs(n), n >> 1];
  const { a: normsA, s: normsS } = tripleOneNorms(block);
  const scale = Math.abs(block.sameScale) + Math.abs(block.otherScale);
  const weights = block.strengths.map((s) => scale * s);
  const rows = Array.from({ length: count }, (_, t) => ({
    a: antisymmetricRows(block.antisymmetric, t * nanti, n),
    s: symmetricRows(block.symmetric, t * npair, n),
  }));
  const at = (cut: number): Compacted<TripleFactors> => {
    let changed = 0;
    const kept = rows.flatMap((own, t) => {
      const a = sumAbove(own.a, nanti, (size) => weights[t]! * 2 * size * normsS[t]! > cut);
      const s = sumAbove(own.s, npair, (size) => weights[t]! * normsA[t]! * size > cut);
      if (!a || !s || a.sizes.length < own.a.length || s.sizes.length < own.s.length) changed++;
      return a && s ? [{ t, a, s }] : [];
    });
    const out = {
      component: Uint8Array.from(kept, ({ t }) => block.component[t]!),
      strengths: new Float64Array(kept.length),
      antisymmetric: new Float64Array(kept.length * nanti),
      symmetric: new Float64Array(kept.length * npair),
      antisymmetricNorms: new Float64Array(kept.length * half),
      symmetricValues: new Float64Array(kept.length * n),
    };
    for (const [i, { t, a, s }] of kept.entries()) {
      out.strengths[i] = block.strengths[t]! * a.length * s.length;
      out.antisymmetric.set(a.unit, i * nanti);
      out.symmetric.set(s.unit, i * npair);
      out.antisymmetricNorms.set(a.sizes, i * half);
      // Rows taken out leave eigenvalues 0.
      out.symmetricValues.set(s.sizes, i * n);
      out.symmetricValues.subarray(i * n, (i + 1) * n).sort();
    }
    const { shifts: _, ...rest } = block;
    const compact: TripleFactors = { ...rest, count: kept.length, ...out };
    // {X, Y} − {X', Y'} = {X − X', Y} + {X', Y − Y'}.
    return { block: compact, bound: sum(lcuNorms(block)) - sum(lcuNorms(compact)), constant: 0, changed };
  };
  const heaviest = weights.reduce((most, w, t) => Math.max(most, w * normsA[t]! * normsS[t]!), 0);
  return { heaviest, at };
}

/** Squares of symmetric planes (spin–spin): row i of a plane weighs ½|w|Λ·|ε_i|. */
export function compactibleSquares(block: SquareFactors): Compactible<SquareFactors> {
  const { n, count, dim } = block;
  const layout = sectorLayout(block.sector, block.planes, n);
  if (layout.slots.some(({ symmetric }) => !symmetric)) throw new RangeError('symmetric planes only');
  const norms = squareOneNorms(block);
  const rows = Array.from({ length: count }, (_, t) =>
    layout.slots.map((slot) => symmetricRows(block.vectors, t * dim + slot.offset, n)),
  );
  const at = (cut: number): Compacted<SquareFactors> => {
    let [bound, constant, changed] = [0, 0, 0];
    const kept = rows.flatMap((planes, t) => {
      const heavy = (size: number) => 0.5 * Math.abs(block.weights[t]!) * norms[t]! * size > cut;
      const sums = planes.map((own, i) => sumAbove(own, layout.slots[i]!.length, heavy));
      // L² = L'² + {L', D} + D² with D lost, and 0 ≤ D² ≤ ‖D‖²: half of that as a constant.
      const left = sums.reduce((all, own) => all + (own ? own.length * oneNorm(own.sizes) : 0), 0);
      const lost = norms[t]! - left;
      const w = block.weights[t]!;
      bound += Math.abs(w) * (0.25 * lost * lost + left * lost);
      constant += 0.25 * w * lost * lost;
      if (sums.some((own, i) => (own?.sizes.length ?? 0) < planes[i]!.length)) changed++;
      return sums.some((own) => own !== null) ? [{ t, sums }] : [];
    });
    const out = {
      weights: new Float64Array(kept.length),
      vectors: new Float64Array(kept.length * dim),
      spectra: new Float64Array(kept.length * layout.spectrumWidth),
    };
    for (const [i, { t, sums }] of kept.entries()) {
      const length = Math.hypot(...sums.map((own) => own?.length ?? 0));
      out.weights[i] = block.weights[t]! * length * length;
      for (const [j, slot] of layout.slots.entries()) {
        const own = sums[j];
        if (!own) continue;
        const scale = own.length / length;
        out.vectors.set(
          own.unit.map((x) => x * scale),
          i * dim + slot.offset,
        );
        const from = i * layout.spectrumWidth + slot.spectrumOffset;
        out.spectra.set(
          own.sizes.map((x) => x * scale),
          from,
        );
        out.spectra.subarray(from, from + slot.spectrumLength).sort();
      }
    }
    return { block: { ...block, count: kept.length, ...out }, bound, constant, changed };
  };
  const heaviest = norms.reduce(
    (most, norm, t) => Math.max(most, 0.25 * Math.abs(block.weights[t]!) * norm ** 2),
    0,
  );
  return { heaviest, at };
}

/** The rows that `keep` lets through as one vector; null where there are none. */
function sumAbove(rows: readonly PlaneRow[], dim: number, keep: (size: number) => boolean) {
  const kept = rows.filter(({ size }) => keep(Math.abs(size)));
  if (kept.length === 0) return null;
  const unit = new Float64Array(dim);
  for (const { vector } of kept) for (let i = 0; i < dim; i++) unit[i]! += vector[i]!;
  const length = Math.hypot(...unit);
  for (let i = 0; i < dim; i++) unit[i]! /= length;
  return { unit, length, sizes: kept.map(({ size }) => size / length) };
}

/** Canonical pairs, sizes descending. */
function antisymmetricRows(vectors: Float64Array, from: number, n: number): PlaneRow[] {
  const plane = new Float64Array(n * n);
  planeInto(plane, 0, vectors, from, n, false);
  const { count, a, u, v } = antisymmetricPairs(plane, n);
  return Array.from({ length: count }, (_, j) => {
    const vector = new Float64Array(numAntisymmetricPairs(n));
    const [x, y] = [u.subarray(j * n, (j + 1) * n), v.subarray(j * n, (j + 1) * n)];
    for (let p = 0, i = 0; p < n; p++) {
      for (let q = 0; q < p; q++, i++) vector[i] = Math.SQRT2 * a[j]! * (x[p]! * y[q]! - y[p]! * x[q]!);
    }
    return { size: a[j]!, vector };
  });
}

function symmetricRows(vectors: Float64Array, from: number, n: number): PlaneRow[] {
  const plane = new Float64Array(n * n);
  planeInto(plane, 0, vectors, from, n, true);
  const eigen = symmetricEigen(plane, n);
  return Array.from(eigen.values, (size, j) => {
    const vector = new Float64Array(numSymmetricPairs(n));
    const x = eigen.vectors.subarray(j * n, (j + 1) * n);
    for (let p = 0, i = 0; p < n; p++) {
      for (let q = 0; q < p; q++) vector[i++] = Math.SQRT2 * size * x[p]! * x[q]!;
      vector[i++] = size * x[p]! * x[p]!;
    }
    return { size, vector };
  });
}

const sum = (values: Float64Array): number => values.reduce((all, x) => all + x, 0);
const oneNorm = (values: readonly number[]): number => values.reduce((all, x) => all + Math.abs(x), 0);

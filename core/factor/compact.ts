import { numAntisymmetricPairs, numSymmetricPairs } from '../integrals/integral-set';
import type { JobContext } from '../job';
import { antisymmetricPairs, symmetricEigen } from '../linalg';
import { planeInto, sectorLayout } from './elements';
import type { SquareFactors, TripleFactors } from './factors';
import { lcuNorms, squareOneNorms, tripleOneNorms } from './one-norms';

/** Eigenvectors of a symmetric plane (v = u), or canonical pairs of an antisymmetric one. */
interface PlaneRows {
  readonly n: number;
  readonly symmetric: boolean;
  readonly sizes: Float64Array;
  /** n numbers a row. */
  readonly u: Float64Array;
  readonly v: Float64Array;
}

/** Factors between two checkpoints: some 30 ms for 50 orbitals. */
const AT_ONCE = 16;

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
export async function compactibleTriples(
  block: TripleFactors,
  ctx: JobContext,
): Promise<Compactible<TripleFactors>> {
  const { n, count } = block;
  const [nanti, npair, half] = [numAntisymmetricPairs(n), numSymmetricPairs(n), n >> 1];
  const { a: normsA, s: normsS } = tripleOneNorms(block);
  const scale = Math.abs(block.sameScale) + Math.abs(block.otherScale);
  const weights = block.strengths.map((s) => scale * s);
  const rows: { readonly a: PlaneRows; readonly s: PlaneRows }[] = [];
  for (let t = 0; t < count; t++) {
    if (t % AT_ONCE === 0) {
      ctx.report('rows of the spin–orbit triples', t, count);
      await ctx.checkpoint();
    }
    rows.push({
      a: rowsOf(block.antisymmetric, t * nanti, n, false),
      s: rowsOf(block.symmetric, t * npair, n, true),
    });
  }
  const at = (cut: number): Compacted<TripleFactors> => {
    let changed = 0;
    const kept = rows.flatMap((own, t) => {
      const a = sumAbove(own.a, (size) => weights[t]! * 2 * size * normsS[t]! > cut);
      const s = sumAbove(own.s, (size) => weights[t]! * normsA[t]! * size > cut);
      if (!a || !s || a.sizes.length < own.a.sizes.length || s.sizes.length < own.s.sizes.length) changed++;
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
export async function compactibleSquares(
  block: SquareFactors,
  ctx: JobContext,
): Promise<Compactible<SquareFactors>> {
  const { n, count, dim } = block;
  const layout = sectorLayout(block.sector, block.planes, n);
  if (layout.slots.some(({ symmetric }) => !symmetric)) throw new RangeError('symmetric planes only');
  const norms = squareOneNorms(block);
  const rows: PlaneRows[][] = [];
  for (let t = 0; t < count; t++) {
    if (t % AT_ONCE === 0) {
      ctx.report('rows of the spin–spin factors', t, count);
      await ctx.checkpoint();
    }
    rows.push(layout.slots.map((slot) => rowsOf(block.vectors, t * dim + slot.offset, n, true)));
  }
  const at = (cut: number): Compacted<SquareFactors> => {
    let [bound, constant, changed] = [0, 0, 0];
    const kept = rows.flatMap((planes, t) => {
      const heavy = (size: number) => 0.5 * Math.abs(block.weights[t]!) * norms[t]! * size > cut;
      const sums = planes.map((own) => sumAbove(own, heavy));
      // L² = L'² + {L', D} + D² with D lost, and 0 ≤ D² ≤ ‖D‖²: half of that as a constant.
      const left = sums.reduce((all, own) => all + (own ? own.length * oneNorm(own.sizes) : 0), 0);
      const lost = norms[t]! - left;
      const w = block.weights[t]!;
      bound += Math.abs(w) * (0.25 * lost * lost + left * lost);
      constant += 0.25 * w * lost * lost;
      if (sums.some((own, i) => (own?.sizes.length ?? 0) < planes[i]!.sizes.length)) changed++;
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

/** The rows that `keep` lets through as one vector over pairs; null where there are none. */
function sumAbove({ n, symmetric, sizes, u, v }: PlaneRows, keep: (size: number) => boolean) {
  const kept = [...sizes.keys()].filter((j) => keep(Math.abs(sizes[j]!)));
  if (kept.length === 0) return null;
  const unit = new Float64Array(symmetric ? numSymmetricPairs(n) : numAntisymmetricPairs(n));
  for (const j of kept) {
    const [x, y] = [u.subarray(j * n, (j + 1) * n), v.subarray(j * n, (j + 1) * n)];
    const scale = Math.SQRT2 * sizes[j]!;
    for (let p = 0, i = 0; p < n; p++) {
      for (let q = 0; q < p; q++) unit[i++]! += scale * (x[p]! * y[q]! - (symmetric ? 0 : y[p]! * x[q]!));
      if (symmetric) unit[i++]! += sizes[j]! * x[p]! * x[p]!;
    }
  }
  const length = Math.hypot(...unit);
  for (let i = 0; i < unit.length; i++) unit[i]! /= length;
  return { unit, length, sizes: kept.map((j) => sizes[j]! / length) };
}

function rowsOf(vectors: Float64Array, from: number, n: number, symmetric: boolean): PlaneRows {
  const plane = new Float64Array(n * n);
  planeInto(plane, 0, vectors, from, n, symmetric);
  if (symmetric) {
    const { values, vectors: u } = symmetricEigen(plane, n);
    return { n, symmetric, sizes: values, u, v: u };
  }
  const { a, u, v } = antisymmetricPairs(plane, n);
  return { n, symmetric, sizes: a, u, v };
}

const sum = (values: Float64Array): number => values.reduce((all, x) => all + x, 0);
const oneNorm = (values: readonly number[]): number => values.reduce((all, x) => all + Math.abs(x), 0);

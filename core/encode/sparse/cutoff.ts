import type { JobContext } from '../../job';
import type { RowSource, SparseRow } from './rows';

/** Weights up to this are noise of the integrals, hartree. */
export const NOISE = 1e-15;

/** Goes through all rows with checkpoints between. */
export async function visitAll(
  source: RowSource,
  context: JobContext,
  visitor: (row: SparseRow) => void,
): Promise<void> {
  for (const _ of source.visit(visitor)) await context.checkpoint();
}

/** Sums and numbers of weights by size. */
class Histogram {
  readonly sums = new Float64Array(1 << 19);
  readonly counts = new Uint32Array(1 << 19);
  readonly #float = new Float64Array(1);
  readonly #bits = new Uint32Array(this.#float.buffer);

  /** Exponent and the first 8 bits of the mantissa: the order of positive doubles is that of their bits. */
  binOf(weight: number): number {
    this.#float[0] = weight;
    return this.#bits[1]! >>> 12;
  }

  add(weight: number): void {
    const bin = this.binOf(weight);
    this.sums[bin]! += weight;
    this.counts[bin]!++;
  }

  /** The lower end of a bin. */
  startOf(bin: number): number {
    this.#float[0] = 0;
    this.#bits[1] = bin << 12;
    return this.#float[0]!;
  }

  /** The first bin that does not fit into the budget with all below it, and the sum of those. */
  crossing(budget: number): { readonly bin: number; readonly below: number } {
    let below = 0;
    let bin = 0;
    while (bin < this.sums.length && below + this.sums[bin]! <= budget) below += this.sums[bin++]!;
    return { bin, below };
  }
}

async function histogramOf(source: RowSource, context: JobContext): Promise<Histogram> {
  const histogram = new Histogram();
  await visitAll(source, context, ({ weight }) => histogram.add(weight));
  return histogram;
}

/** What is left when `budget` is dropped, to within a bin of relative width 2⁻⁸. */
export async function roughCut(
  source: RowSource,
  budget: number,
  context: JobContext,
): Promise<{ readonly cutoff: number; readonly lambda: number; readonly rows: number }> {
  const histogram = await histogramOf(source, context);
  const { bin } = histogram.crossing(budget);
  const cutoff = Math.max(NOISE, histogram.startOf(bin));
  let lambda = 0;
  let rows = 0;
  for (let i = Math.max(bin, histogram.binOf(NOISE) + 1); i < histogram.sums.length; i++) {
    lambda += histogram.sums[i]!;
    rows += histogram.counts[i]!;
  }
  return { cutoff, lambda, rows };
}

/**
 * The weight W such that all rows of weight ≤ W together weigh at most `budget`, and those of the next weight up would
 * not fit. Equal weights go together, so that symmetry is kept. Two passes over the rows and a histogram instead of a
 * sort: there may be 10⁷ of them.
 */
export async function findCutoff(source: RowSource, budget: number, context: JobContext): Promise<number> {
  if (budget <= 0) return NOISE;
  // Sums in another order may differ in their last digits.
  const allowed = budget * (1 - 1e-12);
  const histogram = await histogramOf(source, context);
  const { bin, below } = histogram.crossing(allowed);
  const inside: number[] = [];
  await visitAll(source, context, ({ weight }) => {
    if (histogram.binOf(weight) === bin) inside.push(weight);
  });
  const sorted = Float64Array.from(inside).sort();
  // Everything strictly below the crossing bin is dropped.
  let cutoff = Math.max(NOISE, previousDouble(histogram.startOf(bin)));
  let sum = below;
  for (let i = 0; i < sorted.length; ) {
    let end = i;
    let level = 0;
    for (; end < sorted.length && sorted[end] === sorted[i]; end++) level += sorted[end]!;
    if (sum + level > allowed) break;
    sum += level;
    cutoff = Math.max(NOISE, sorted[i]!);
    i = end;
  }
  return cutoff;
}

function previousDouble(x: number): number {
  return x > 0 ? x * (1 - 2 ** -53) : 0;
}

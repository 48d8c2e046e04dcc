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

/**
 * The weight W such that all rows of weight ≤ W together weigh at most `budget`, and those of the next weight up would
 * not fit. Equal weights go together, so that symmetry is kept. Two passes over the rows and a histogram instead of a
 * sort: there may be 10⁷ of them.
 */
export async function findCutoff(source: RowSource, budget: number, context: JobContext): Promise<number> {
  if (budget <= 0) return NOISE;
  // Sums in another order may differ in their last digits.
  const allowed = budget * (1 - 1e-12);
  // Exponent and the first 8 bits of the mantissa: the order of positive doubles is that of their bits.
  const float = new Float64Array(1);
  const bits = new Uint32Array(float.buffer);
  const sums = new Float64Array(1 << 19);
  const binOf = (weight: number): number => {
    float[0] = weight;
    return bits[1]! >>> 12;
  };
  await visitAll(source, context, ({ weight }) => {
    sums[binOf(weight)]! += weight;
  });
  let sum = 0;
  let crossing = 0;
  while (crossing < sums.length && sum + sums[crossing]! <= allowed) sum += sums[crossing++]!;
  const inside: number[] = [];
  await visitAll(source, context, ({ weight }) => {
    if (binOf(weight) === crossing) inside.push(weight);
  });
  const sorted = Float64Array.from(inside).sort();
  float[0] = 0;
  bits[1] = crossing << 12;
  // The lower end of the crossing bin: everything strictly below is dropped.
  let cutoff = Math.max(NOISE, previousDouble(float[0]!));
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

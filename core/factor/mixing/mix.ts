import { numAntisymmetricPairs, numSymmetricPairs } from '../../integrals/integral-set';
import type { JobContext } from '../../job';
import { multiply, randomSource } from '../../linalg';
import { matrixBlocks } from '../components';
import { descend, type MixingProblem, WIDTHS } from './descent';
import { exponential } from './exponential';
import { recast } from './recast';
import { type SquarePoint, type SquareSetting, slotScales, squareProblem } from './squares';
import { arrayOf, checkSameTensor, type MixingState, type MixingStore } from './state';
import { type TriplePoint, type TripleSetting, tripleProblem } from './triples';

export interface MixingOptions {
  /**
   * Number of factors; above the rank: further ones start near zero and give the mixing more freedom, at the price of
   * more rows. @defaultValue the rank
   */
  readonly factors?: number;
  /** Most steps at each smoothing width. @defaultValue 60 */
  readonly steps?: number;
  /** Hartree: two steps running that lower λ by less end a width. @defaultValue 2e-6 of the part's λ */
  readonly settled?: number;
  readonly store?: MixingStore;
}

export interface Mixed<Point> {
  readonly point: Point;
  /** λ of the part and of the planes of κ that its shifts act on, hartree. */
  readonly lambda: number;
  readonly evaluations: number;
}

const STEPS = 60;
const SETTLED = 2e-6;
/** Vectors that a stored state is tried on. */
const PROBES = 3;

/**
 * Mixes factors among themselves so that λ becomes least: G = Σ σ v vᵀ stays what it was, to rounding, and with it
 * every residual. Shifts are optimised together with the mixing. The idea of choosing factors by their one-norm under a
 * fixed tensor is that of compressed double factorisation (e.g. O. Oumarou et al., Quantum 8, 1371 (2024), quoted from
 * memory); mixing exact factors instead of fitting new ones is our own.
 *
 * @param columns - signs.length × dim coordinates of the factors, weights inside; not modified
 * @param part - its name in the store and in progress
 * @throws Cancelled when stopped: the store has then been told of the best so far; InputError `other-mixing-state`
 */
export async function mixSquares(
  setting: SquareSetting,
  columns: Float64Array,
  signs: Int8Array,
  part: string,
  options: MixingOptions,
  ctx: JobContext,
): Promise<Mixed<SquarePoint>> {
  const { dim } = setting.layout;
  const given = signs.length;
  const count = Math.max(given, options.factors ?? given);
  const pointOf = (own: Float64Array): SquarePoint => ({
    count,
    columns: resized(own, count * dim),
    shifts: new Float64Array(count),
    signs: Int8Array.from({ length: count }, (_, t) => signs[t % given]!),
    classes: classesOf(own, given, dim, count),
  });
  const padded = pointOf(columns);
  const problem = squareProblem(setting, slotScales(setting.layout, columns), ctx);
  const arrays = ({ columns: own, shifts }: SquarePoint) => ({ columns: own, shifts });
  const saved = savedOf(options, part, count);
  if (saved) {
    const point = {
      ...padded,
      columns: arrayOf(part, saved, 'columns', count * dim),
      shifts: arrayOf(part, saved, 'shifts', count),
    };
    const probes = probesOf(dim);
    const action = ({ columns: v, signs: own }: SquarePoint) => {
      const overlaps = multiply(v, probes, count, dim, PROBES, { transposeB: true });
      for (let i = 0; i < overlaps.length; i++) overlaps[i]! *= own[Math.floor(i / PROBES)]!;
      return multiply(overlaps, v, PROBES, count, dim, { transposeA: true });
    };
    checkSameTensor(part, action(padded), action(point));
    return run(problem, [point], part, saved, options, ctx, arrays);
  }
  const other = await recast(columns, signs, dim, ctx);
  const starts = [padded, ...(other ? [pointOf(other)] : [])].map((start) =>
    leaking(start, given, ctx.seed, (point, leak) => ({
      ...point,
      columns: multiply(leak, point.columns, count, count, dim),
    })),
  );
  return run(problem, starts, part, null, options, ctx, arrays);
}

/**
 * The same for triples of one Cartesian component: Σ a ⊗ S stays what it was.
 *
 * @param given - the triples, their strengths inside; not modified
 */
export async function mixTriples(
  setting: TripleSetting,
  given: Omit<TriplePoint, 'classes'>,
  part: string,
  options: MixingOptions,
  ctx: JobContext,
): Promise<Mixed<TriplePoint>> {
  const { n } = setting;
  const [nanti, npair] = [numAntisymmetricPairs(n), numSymmetricPairs(n)];
  const count = Math.max(given.count, options.factors ?? given.count);
  const padded: TriplePoint = {
    count,
    antisymmetric: resized(given.antisymmetric, count * nanti),
    symmetric: resized(given.symmetric, count * npair),
    shifts: new Float64Array(count),
    classes: classesOf(sideBySide(given, nanti, npair), given.count, nanti + npair, count),
  };
  const problem = tripleProblem(setting, given, ctx);
  const arrays = ({ antisymmetric, symmetric, shifts }: TriplePoint) => ({
    antisymmetric,
    symmetric,
    shifts,
  });
  const saved = savedOf(options, part, count);
  if (saved) {
    const point = {
      ...padded,
      antisymmetric: arrayOf(part, saved, 'antisymmetric', count * nanti),
      symmetric: arrayOf(part, saved, 'symmetric', count * npair),
      shifts: arrayOf(part, saved, 'shifts', count),
    };
    const probes = probesOf(npair);
    const action = ({ antisymmetric: a, symmetric: s }: TriplePoint) =>
      multiply(multiply(s, probes, count, npair, PROBES, { transposeB: true }), a, PROBES, count, nanti, {
        transposeA: true,
      });
    checkSameTensor(part, action(padded), action(point));
    return run(problem, [point], part, saved, options, ctx, arrays);
  }
  const start = leaking(padded, given.count, ctx.seed, (point, leak) => ({
    ...point,
    antisymmetric: multiply(leak, point.antisymmetric, count, count, nanti),
    symmetric: multiply(leak, point.symmetric, count, count, npair),
  }));
  return run(problem, [start], part, null, options, ctx, arrays);
}

/** From the best of the starting points, with medians or without shifts. */
async function run<Point extends { readonly count: number }>(
  problem: MixingProblem<Point>,
  starts: readonly Point[],
  part: string,
  saved: MixingState | null,
  { steps = STEPS, settled, store }: MixingOptions,
  ctx: JobContext,
  arraysOf: (point: Point) => Record<string, Float64Array>,
): Promise<Mixed<Point>> {
  let start = starts[0]!;
  let exact = Number.POSITIVE_INFINITY;
  // Judged with its medians, begun without shifts: from the kinks of the medians the descent finds less.
  for (const point of starts) {
    const medians = saved ? point : await problem.withMedians(point);
    const found = (await problem.value(medians, 0)).exact;
    if (found >= exact) continue;
    start = point;
    exact = found;
  }
  if (saved?.done) return { point: start, lambda: exact, evaluations: 1 };
  const save = (point: Point, lambda: number, stage: number, done: boolean) =>
    store?.save(part, { stage, done, lambda, count: point.count, arrays: arraysOf(point) });
  const stage = Math.min(WIDTHS.length - 1, Math.max(0, Math.trunc(saved?.stage ?? 0)));
  const found = await descend(
    problem,
    start,
    {
      steps,
      settled: settled ?? SETTLED * exact,
      stage,
      label: `mixing factors, ${part}`,
      onBest: (point, lambda, at) => save(point, lambda, at, false),
    },
    ctx,
  );
  save(found.point, found.lambda, WIDTHS.length - 1, true);
  return found;
}

function savedOf({ store }: MixingOptions, part: string, count: number): MixingState | null {
  const saved = store?.load(part) ?? null;
  return saved && saved.count === count ? saved : null;
}

function resized(values: Float64Array, length: number): Float64Array {
  const out = new Float64Array(length);
  out.set(values);
  return out;
}

/** Fixed numbers: what they are does not matter, only that both sides meet the same. */
function probesOf(width: number): Float64Array {
  const random = randomSource(12345);
  return Float64Array.from({ length: PROBES * width }, random);
}

/** Lets a little of the factors leak into the empty ones by a small seeded rotation. */
function leaking<
  Point extends { readonly count: number; readonly classes: Int32Array; readonly signs?: Int8Array },
>(padded: Point, given: number, seed: number, turn: (point: Point, rotation: Float64Array) => Point): Point {
  const { count, classes, signs } = padded;
  if (count === given) return padded;
  const random = randomSource(seed);
  const generator = new Float64Array(count * count);
  for (let s = given; s < count; s++) {
    for (let t = 0; t < given; t++) {
      const x = (0.2 / Math.sqrt(count)) * random();
      if (classes[s] !== classes[t] || signs?.[s] !== signs?.[t]) continue;
      generator[s * count + t] = x;
      generator[t * count + s] = -x;
    }
  }
  return turn(padded, exponential(generator, count, 1, classes));
}

/** Factors that exact zeros keep apart; the empty ones are dealt out to the classes in turn. */
function classesOf(rows: Float64Array, given: number, dim: number, count: number): Int32Array {
  const classes = new Int32Array(count);
  matrixBlocks(rows, given, dim).forEach((block, i) => {
    for (const t of block.rows) classes[t] = i;
  });
  for (let t = given; t < count; t++) classes[t] = classes[t % given]!;
  return classes;
}

/** count × (nanti + npair): a and S of each triple in one row. */
function sideBySide(
  { count, antisymmetric, symmetric }: Omit<TriplePoint, 'classes'>,
  nanti: number,
  npair: number,
): Float64Array {
  const out = new Float64Array(count * (nanti + npair));
  for (let t = 0; t < count; t++) {
    const at = t * (nanti + npair);
    out.set(antisymmetric.subarray(t * nanti, (t + 1) * nanti), at);
    out.set(symmetric.subarray(t * npair, (t + 1) * npair), at + nanti);
  }
  return out;
}

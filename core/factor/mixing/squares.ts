import type { JobContext, Task } from '../../job';
import { multiply, symmetricEigenvalues } from '../../linalg';
import { type PlaneSlot, planeInto, type SectorLayout } from '../elements';
import { addPairs, antisymmetricNorm, shiftedNorms, smoothMedian } from '../smooth-norms';
import type { MixingProblem, MixingValue } from './descent';
import { exponential } from './exponential';
import { oneBodyNorm, type ShiftedPlane } from './one-body';

/** Factors as raw columns, Σ σ v vᵀ = G, and a shift of the charge plane for each, in √hartree. */
export interface SquarePoint {
  readonly count: number;
  /** count × dim coordinates over the planes of the layout. */
  readonly columns: Float64Array;
  readonly shifts: Float64Array;
  /** σ = ±1 a factor: the sign of its weight. */
  readonly signs: Int8Array;
  /** Factors of different classes have no coordinate in common (spatial symmetry, mostly) and are never mixed. */
  readonly classes: Int32Array;
}

/** What λ of a list of squares depends on, besides factors and shifts. */
export interface SquareSetting {
  readonly layout: SectorLayout;
  /** Planes of κ that shifts act on, in the order of the slots; none where there is no charge plane. */
  readonly kappa: readonly Float64Array[];
  /** η − N: how strongly a factor's shift acts on κ. */
  readonly excess: number;
}

interface ChunkInput {
  readonly layout: SectorLayout;
  readonly columns: Float64Array;
  readonly shifts: Float64Array;
  /** δ of each slot. */
  readonly deltas: readonly number[];
}

interface ChunkOutput {
  /** Σ_t ¼ N_t², N_t = Σ_μ ‖L^{t,μ}‖_*. */
  readonly smooth: number;
  readonly exact: number;
  readonly columns: Float64Array;
  readonly shifts: Float64Array;
}

const isCharge = (slot: PlaneSlot) => slot.mu === 0 && slot.symmetric;

/** Norms of a batch of shifted factors and their derivatives: an eigenproblem a plane. */
export const mixingTask: Task<ChunkInput, ChunkOutput> = {
  name: 'factor.mixing',
  async run({ layout, columns, shifts, deltas }, ctx) {
    const { n, dim, slots } = layout;
    const plane = new Float64Array(n * n);
    const gradient = new Float64Array(columns.length);
    const shiftGradient = new Float64Array(shifts.length);
    let smooth = 0;
    let exact = 0;
    for (let t = 0; t < shifts.length; t++) {
      await ctx.checkpoint();
      let slope = 0;
      const norms = slots.map((slot, i) => {
        planeInto(plane, 0, columns, t * dim + slot.offset, n, slot.symmetric);
        if (!slot.symmetric) return antisymmetricNorm(plane, n, deltas[i]!);
        const own = isCharge(slot) ? shifts[t]! : 0;
        const found = shiftedNorms(plane, n, [own], [1], deltas[i]!);
        if (isCharge(slot)) slope = found.slopes[0]!;
        return found;
      });
      const norm = norms.reduce((sum, own) => sum + own.norm, 0);
      smooth += 0.25 * norm * norm;
      exact += 0.25 * norms.reduce((sum, own) => sum + own.exact, 0) ** 2;
      shiftGradient[t] = -0.5 * norm * slope;
      slots.forEach((slot, i) => {
        addPairs(gradient, t * dim + slot.offset, norms[i]!.direction, n, slot.symmetric, 0.5 * norm);
      });
    }
    return { smooth, exact, columns: gradient, shifts: shiftGradient };
  },
};

/** Factors in one piece of parallel work. */
const CHUNK = 32;

/**
 * Mixing of squares: G = Σ σ v vᵀ is unchanged when the columns are multiplied by a matrix Q with QᵀσQ = σ (orthogonal
 * within factors of one sign, hyperbolic between signs), but the nuclear norms, and with them λ, are not.
 *
 * Tangent: count × count generators, antisymmetric within a sign and symmetric between signs, then the shifts.
 *
 * @param scales - of each slot: what δ is relative to
 */
export function squareProblem(
  setting: SquareSetting,
  scales: readonly number[],
  ctx: JobContext,
): MixingProblem<SquarePoint> {
  return {
    value: (point, width) => squareValue(setting, scales, point, width, ctx),
    move: (point, direction, length) => {
      const { count, columns, classes } = point;
      const { dim } = setting.layout;
      const shifts = point.shifts.map((c, t) => c + length * direction[count * count + t]!);
      const turn = exponential(direction.subarray(0, count * count), count, length, classes);
      return { ...point, shifts, columns: multiply(turn, columns, count, count, dim) };
    },
    withMedians: async (point) => ({ ...point, shifts: medianShifts(setting.layout, point) }),
  };
}

/** Largest column of each slot, at least 1e-6 of the largest of all. */
export function slotScales({ dim, slots }: SectorLayout, columns: Float64Array): number[] {
  const sizes = slots.map(({ offset, length }) => {
    let largest = 0;
    for (let at = offset; at < columns.length; at += dim) {
      let sum = 0;
      for (let i = at; i < at + length; i++) sum += columns[i]! * columns[i]!;
      largest = Math.max(largest, sum);
    }
    return Math.sqrt(largest);
  });
  const floor = 1e-6 * Math.max(...sizes);
  return sizes.map((size) => Math.max(size, floor));
}

async function squareValue(
  setting: SquareSetting,
  scales: readonly number[],
  point: SquarePoint,
  width: number,
  ctx: JobContext,
): Promise<MixingValue> {
  const { layout, kappa, excess } = setting;
  const { n, dim, slots } = layout;
  const { count, columns, shifts, signs, classes } = point;
  const deltas = scales.map((scale) => width * scale);
  const inputs: ChunkInput[] = [];
  for (let from = 0; from < count; from += CHUNK) {
    const to = Math.min(count, from + CHUNK);
    inputs.push({
      layout,
      columns: columns.slice(from * dim, to * dim),
      shifts: shifts.slice(from, to),
      deltas,
    });
  }
  const gradient = { columns: new Float64Array(count * dim), shifts: new Float64Array(count) };
  let smooth = 0;
  let exact = 0;
  let at = 0;
  for (const chunk of await ctx.map(mixingTask, inputs)) {
    smooth += chunk.smooth;
    exact += chunk.exact;
    gradient.columns.set(chunk.columns, at * dim);
    gradient.shifts.set(chunk.shifts, at);
    at += chunk.shifts.length;
  }
  const planes = kappa.map((plane, i): ShiftedPlane => ({ slot: slots[i]!, kappa: plane }));
  const one = oneBodyNorm(planes, excess, { n, count, columns, dim, shifts, signs }, width, gradient);

  const tangent = new Float64Array(count * count + count);
  // Without a charge plane there is nothing to shift.
  if (kappa.length > 0) tangent.set(gradient.shifts, count * count);
  const product = multiply(gradient.columns, columns, count, dim, count, { transposeB: true });
  for (let s = 0; s < count; s++) {
    for (let t = 0; t < count; t++) {
      // Zero but for rounding, which would grow and with it the number of rows.
      if (classes[s] !== classes[t]) continue;
      const own = product[s * count + t]!;
      const other = product[t * count + s]!;
      tangent[s * count + t] = 0.5 * (signs[s] === signs[t] ? own - other : own + other);
    }
  }
  return { smooth: smooth + one.smooth, exact: exact + one.exact, gradient: tangent };
}

function medianShifts({ n, dim, slots }: SectorLayout, { columns, shifts }: SquarePoint): Float64Array {
  const charge = slots.find(isCharge);
  if (!charge) return shifts;
  const plane = new Float64Array(n * n);
  return shifts.map((_, t) => {
    planeInto(plane, 0, columns, t * dim + charge.offset, n, true);
    return smoothMedian(symmetricEigenvalues(plane, n), 0);
  });
}

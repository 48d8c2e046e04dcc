import {
  type Factorisation,
  heaviestApart,
  type SpinOrbitCore,
  type SquareFactors,
  spinOrbitCores,
  spinOrbitTriples,
  triplesOfCore,
  turnedFactors,
} from '../../factor';
import { rotateSpin, type SpatialHamiltonian, turnedSpinPlanes } from '../../hamiltonian';
import type { JobContext } from '../../job';
import { randomSource, symmetricEigen, transpose } from '../../linalg';
import { encodeSpatial } from '../assemble';
import type { VariantName } from '../variant';
import { downhill, type Vertex } from './simplex';

export interface SpinFrame {
  /** 3×3, row-major, determinant +1: T^k → Σ_l R_kl T^l. The identity where nothing better was found. */
  readonly rotation: Float64Array;
  /** λ that was minimised, in the given frame and in this one, hartree. */
  readonly lambda: { readonly before: number; readonly after: number };
  readonly evaluations: number;
  /** Part of the two-electron spin–orbit part that the minimised λ knew of: 1 up to {@link EXACT_ORBITALS} orbitals. */
  readonly share: number;
}

/** Up to here every trial decomposes the two-electron spin–orbit part anew. */
export const EXACT_ORBITALS = 20;
/** Common directions of larger ones. */
const CORE_RANK = 160;
/** Heaviest factors of a joint decomposition that trials turn; the others stay as they are. */
const MOST_TURNED = 400;
const SAMPLES = 12;
const FIRST_EDGE = 0.25;
/** Part of the spread of λ over the random rotations below which vertices count as one. */
const SETTLED = 1e-3;

/**
 * Spin axes in which a triplet form is light: λ over all global rotations of the axes, a change of basis that costs no
 * gate. Principal axes of the spin–orbit part (those of the molecule, where symmetry has any) and random rotations (fixed
 * seed) first, then downhill from the best of them and from the given axes.
 *
 * λ is that of the form itself: κ planes, factors and triples in turned axes. Sets above {@link EXACT_ORBITALS} orbitals
 * are tried with the leading common directions of the spin–orbit part, or with the heaviest joint factors, so whoever takes
 * the frame has to compare the true λ.
 *
 * @param given - factorisation of `hamiltonian` in the variant's grouping
 * @param variant - triplet; its grouping and shift decide λ
 */
export async function spinFrame(
  hamiltonian: SpatialHamiltonian,
  given: Factorisation,
  variant: VariantName,
  context: JobContext,
): Promise<SpinFrame> {
  const quiet: JobContext = {
    seed: context.seed,
    report() {},
    checkpoint: () => context.checkpoint(),
    map: (task, inputs) => context.map(task, inputs),
  };
  const trial = await trialOf(hamiltonian, given, variant, quiet);
  const descents = trial.cheap ? 2 : 1;
  const perDescent = trial.cheap ? 40 : 24;
  const total = SAMPLES + 2 + descents * perDescent;
  let evaluations = 0;
  const lambdaAt = async (x: readonly number[]): Promise<number> => {
    context.report('turning spin axes', Math.min(evaluations, total), total);
    evaluations++;
    await context.checkpoint();
    return trial.lambda(rotationOf(x));
  };
  const none: Vertex = { x: [0, 0, 0], value: await lambdaAt([0, 0, 0]) };
  const samples: Vertex[] = [none];
  const random = randomSource(context.seed);
  const tried = [principalAxes(hamiltonian)];
  for (let i = 0; i < SAMPLES; i++) tried.push([random(), random(), random()].map((x) => (Math.PI / 2) * x));
  for (const x of tried) samples.push({ x, value: await lambdaAt(x) });
  samples.sort((a, b) => a.value - b.value);
  const settled = SETTLED * (samples[samples.length - 1]!.value - samples[0]!.value);
  let best = samples[0]!;
  const starts = samples[0] === none || descents === 1 ? samples.slice(0, descents) : [samples[0]!, none];
  for (const start of starts) {
    const found = await downhill(lambdaAt, start, FIRST_EDGE, perDescent, settled);
    if (found.value < best.value) best = found;
  }
  context.report('turning spin axes', total, total);
  // Less than rounding is no gain.
  const gained = none.value - best.value > 1e-12 * none.value;
  return {
    rotation: rotationOf(gained ? best.x : none.x),
    lambda: { before: none.value, after: gained ? best.value : none.value },
    evaluations,
    share: trial.share,
  };
}

interface Trial {
  lambda(rotation: Float64Array): Promise<number>;
  readonly cheap: boolean;
  readonly share: number;
}

async function trialOf(
  h: SpatialHamiltonian,
  given: Factorisation,
  variant: VariantName,
  ctx: JobContext,
): Promise<Trial> {
  const n = h.orbitals;
  const cheap = n <= EXACT_ORBITALS;
  const cores: SpinOrbitCore[] | null =
    variant.grouping === 'separate' && !cheap ? await spinOrbitCores(h, CORE_RANK, ctx) : null;
  const turned: SquareFactors[] = [];
  const fixed: SquareFactors[] = [];
  for (const block of given.blocks) {
    if (block.kind !== 'squares') continue;
    const [heavy, light] =
      cheap || block.count <= MOST_TURNED ? [block, null] : heaviestApart(block, MOST_TURNED);
    // Charge alone does not turn.
    (block.planes.length === 1 ? fixed : turned).push(heavy);
    if (light) fixed.push(light);
  }
  const spinOnly = { ...h, g: { ...h.g, charge: null, spinSpin: null } };
  const lambda = async (rotation: Float64Array): Promise<number> => {
    const blocks: Factorisation['blocks'][number][] = [];
    for (const block of turned) blocks.push(await turnedFactors(block, rotation, ctx));
    blocks.push(...fixed);
    if (variant.grouping === 'separate') {
      const triples = cores
        ? await Promise.all(cores.map((core) => triplesOfCore(core, rotation, ctx)))
        : await spinOrbitTriples(rotateSpin(spinOnly, rotation), ctx);
      blocks.push(...triples);
    }
    const k = { ...h.k, planes: turnedSpinPlanes(h.k.planes, n, rotation) };
    const foldedMeanField = turnedFold(given, n, rotation);
    const encoding = await encodeSpatial({ ...h, k }, { ...given, blocks, foldedMeanField }, variant, ctx);
    return encoding.lambda.total;
  };
  return { lambda, cheap, share: cores?.[0]?.share ?? 1 };
}

/**
 * The folded mean field in turned axes. In the separate grouping its spin planes come from dropped triples, which a trial
 * does not drop.
 */
function turnedFold(
  { foldedMeanField: folded, grouping }: Factorisation,
  n: number,
  rotation: Float64Array,
): Factorisation['foldedMeanField'] {
  if (!folded || !('planes' in folded)) return null;
  const planes =
    grouping === 'joint'
      ? turnedSpinPlanes(folded.planes, n, rotation)
      : folded.planes.map((x, i) => (i < n * n ? x : 0));
  return { ...folded, planes };
}

/**
 * Rotation vector to the axes in which Σ_pq A^k_pq A^l_pq over the spin planes of κ and of the two-electron part is
 * diagonal.
 */
function principalAxes({ orbitals: n, k, g }: SpatialHamiltonian): number[] {
  const gram = new Float64Array(9);
  const add = (values: Float64Array, offset: number, size: number) => {
    for (let a = 0; a < 3; a++) {
      for (let b = 0; b < 3; b++) {
        let sum = 0;
        for (let i = 0; i < size; i++) sum += values[offset + a * size + i]! * values[offset + b * size + i]!;
        gram[3 * a + b]! += sum;
      }
    }
  };
  add(k.planes, n * n, n * n);
  if (g.spinOrbit) add(g.spinOrbit.same, 0, g.spinOrbit.same.length / 3);
  const { vectors } = symmetricEigen(gram, 3);
  // Columns are the new axes: L'^l = Σ_k R_kl L^k.
  const r = transpose(vectors, 3, 3);
  const [a, b, c, d, e, f, x, y, z] = r as unknown as number[];
  const determinant = a! * (e! * z! - f! * y!) - b! * (d! * z! - f! * x!) + c! * (d! * y! - e! * x!);
  if (determinant < 0) for (let i = 0; i < 9; i++) r[i]! *= -1;
  return vectorOf(r);
}

/** The vector of a rotation, |x| ≤ π. */
export function vectorOf(r: ArrayLike<number>): number[] {
  const axis = [r[7]! - r[5]!, r[2]! - r[6]!, r[3]! - r[1]!];
  const sine = Math.hypot(...axis) / 2;
  const cosine = (r[0]! + r[4]! + r[8]! - 1) / 2;
  const angle = Math.atan2(sine, cosine);
  if (sine > 1e-8) return axis.map((x) => (x * angle) / (2 * sine));
  if (cosine > 0) return [0, 0, 0];
  // Half a turn: R = 2aaᵀ − 1. The column with the largest diagonal element gives the axis.
  const j = [0, 1, 2].reduce((best, i) => (r[4 * i]! > r[4 * best]! ? i : best), 0);
  const column = [0, 1, 2].map((i) => r[3 * i + j]! + (i === j ? 1 : 0));
  const norm = Math.hypot(...column);
  return column.map((x) => (Math.PI * x) / norm);
}

/** The rotation by |x| about x (O. Rodrigues' formula), row-major. */
export function rotationOf(x: readonly number[]): Float64Array {
  const angle = Math.hypot(...x);
  const [a, b, c] = x.map((value) => (angle > 0 ? value / angle : 0)) as [number, number, number];
  const [cos, sin] = [Math.cos(angle), Math.sin(angle)];
  const t = 1 - cos;
  return Float64Array.of(
    cos + a * a * t,
    a * b * t - c * sin,
    a * c * t + b * sin,
    b * a * t + c * sin,
    cos + b * b * t,
    b * c * t - a * sin,
    c * a * t - b * sin,
    c * b * t + a * sin,
    cos + c * c * t,
  );
}

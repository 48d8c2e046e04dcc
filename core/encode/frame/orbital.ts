import { rotatedSquare, type SpatialHamiltonian } from '../../hamiltonian';
import type { JobContext } from '../../job';
import { dot, GradientMemory, matrixExponential, multiply, polished, randomSource } from '../../linalg';
import { majoranaNorm, type NormValue, type SpinFree, selfRepulsion, spinFreePart } from './majorana-norm';

export interface OrbitalFrameOptions {
  /** Steps at each smoothing width. @defaultValue 80 */
  readonly steps?: number;
  /** Starts from random orbitals, after the given and the localised ones. @defaultValue 3 up to 24 orbitals, else 0 */
  readonly restarts?: number;
}

export interface OrbitalFrame {
  /** N×N orthogonal with rows the new orbitals, φ'_p = Σ_q U_pq φ_q. */
  readonly rotation: Float64Array;
  /** One-norm of the merged Majorana strings of the spin-free part in the given and in the new orbitals, hartree. */
  readonly norm: { readonly before: number; readonly after: number };
  /** Gradients taken. */
  readonly evaluations: number;
}

/** Smoothing widths, hartree: each is a start for the next. The last is below what a coefficient is worth. */
const WIDTHS = [3e-2, 3e-3, 3e-4];
/** Root mean square angle by which a start leaves the given orbitals: symmetry makes them a saddle. */
const KICK = 0.02;
/** Steps that together lower λ by less than this part end a width. */
const SETTLED = 2e-5;
const SETTLED_STEPS = 5;
/** Largest angle of one step, radians. */
const LONGEST = 0.4;
const MAX_BACKTRACKS = 8;
/** Pairs of steps and gradient changes that directions are made from. */
const PAIRS = 12;
/** Above this, a descent takes a minute, and only the start that is rarely bad is followed. */
const CHEAP_ORBITALS = 24;

/** How a descent starts: near the given orbitals, from localised ones, or anywhere. */
type Start = 'given' | 'localised' | 'random';

/**
 * Orbitals in which the sparse form is light: the one-norm of the merged Majorana strings of the spin-free part is
 * minimised over rotations of the orbitals. Spin-dependent parts are some 1e-3 of it and left out here; whoever takes the
 * frame compares the true λ.
 *
 * Minimising this norm over orbital rotations is the proposal of E. Koridon et al., Phys. Rev. Research 3, 033127
 * (2021). Here by quasi-Newton steps on the orthogonal group, the norm smoothed with a width that goes down, from
 * localised orbitals and, where that is cheap, from the given and from random ones. There are many local minima, a few
 * percent apart: no claim to the lowest.
 *
 * @returns null where there is no two-electron charge part. The frame is never worse in its own norm than the given one.
 * @throws Cancelled
 */
export async function orbitalFrame(
  hamiltonian: SpatialHamiltonian,
  options: OrbitalFrameOptions,
  context: JobContext,
): Promise<OrbitalFrame | null> {
  const part = spinFreePart(hamiltonian);
  if (!part) return null;
  const { n } = part;
  const cheap = n <= CHEAP_ORBITALS;
  const starts: Start[] = cheap ? ['given', 'localised'] : ['localised'];
  for (let i = 0; i < (options.restarts ?? (cheap ? 3 : 0)); i++) starts.push('random');
  const steps = options.steps ?? 80;
  const { lambda: before } = await majoranaNorm(part, 0, false, context);
  let rotation = identity(n);
  let after = before;
  const random = randomSource(context.seed);
  const stages = WIDTHS.length + 1;
  const total = starts.length * stages * steps;
  let evaluations = 0;
  for (const [i, start] of starts.entries()) {
    const descent = new Descent(part, turnedAtRandom(n, start === 'random' ? 1 : KICK, random));
    const stage = (at: number) => (step: number) =>
      context.report('turning orbitals', (i * stages + at) * steps + step, total);
    if (start === 'localised')
      await descent.run((turned) => selfRepulsion(turned, context), steps, context, stage(0));
    for (const [at, width] of WIDTHS.entries()) {
      await descent.run(
        (turned) => majoranaNorm(turned, width, true, context),
        steps,
        context,
        stage(at + 1),
      );
    }
    const found = await descent.norm(context);
    evaluations += descent.evaluations;
    if (found >= after) continue;
    after = found;
    rotation = descent.rotation;
  }
  context.report('turning orbitals', total, total);
  return { rotation: polished(rotation, n), norm: { before, after }, evaluations };
}

/** Value and gradient at a point of the orthogonal group; whoever asks keeps the point. */
interface GroupValue {
  readonly lambda: number;
  /** Antisymmetric n×n: dλ = Σ_{p>q} gradient_pq X_pq for U → e^X U. */
  readonly gradient: Float64Array;
}

type Objective = (turned: SpinFree) => Promise<NormValue>;

/** One descent on the orthogonal group. Every point is made from the given integrals, so that rounding does not add up. */
class Descent {
  readonly #part: SpinFree;
  rotation: Float64Array;
  evaluations = 0;

  constructor(part: SpinFree, start: Float64Array) {
    this.#part = part;
    this.rotation = start;
  }

  /** The norm itself at the present point. */
  async norm(context: JobContext): Promise<number> {
    const turned = await this.#turned(this.rotation, context);
    return (await majoranaNorm(turned, 0, false, context)).lambda;
  }

  async run(
    objective: Objective,
    steps: number,
    context: JobContext,
    onStep: (step: number) => void,
  ): Promise<void> {
    const { n } = this.#part;
    const memory = new GradientMemory(PAIRS);
    let value = await this.#value(this.rotation, objective, context);
    const history: number[] = [value.lambda];
    let length = LONGEST / 4;
    for (let step = 0; step < steps; step++) {
      onStep(step);
      const moved = await this.#search(value, memory.direction(value.gradient), length, objective, context);
      if (!moved) break;
      memory.learn(
        moved.step,
        moved.value.gradient.map((x, i) => x - value.gradient[i]!),
      );
      this.rotation = polished(multiply(matrixExponential(moved.step, n), this.rotation, n, n, n), n);
      value = moved.value;
      // From the second step on, directions carry their length.
      length = Number.POSITIVE_INFINITY;
      history.push(value.lambda);
      const earlier = history[history.length - 1 - SETTLED_STEPS];
      if (earlier !== undefined && earlier - value.lambda < SETTLED * Math.abs(value.lambda)) break;
    }
  }

  /** Backtracking; `longest` caps the first attempt. null where no step descends. */
  async #search(
    value: GroupValue,
    direction: Float64Array,
    longest: number,
    objective: Objective,
    context: JobContext,
  ): Promise<{ readonly value: GroupValue; readonly step: Float64Array } | null> {
    const { n } = this.#part;
    let largest = 0;
    for (const x of direction) largest = Math.max(largest, Math.abs(x));
    if (largest === 0) return null;
    // Both triangles hold the derivative with respect to one angle.
    const slope = dot(value.gradient, direction) / 2;
    let length =
      longest === Number.POSITIVE_INFINITY
        ? Math.min(1, LONGEST / largest)
        : Math.min(longest, LONGEST) / largest;
    for (let attempt = 0; attempt < MAX_BACKTRACKS; attempt++, length *= 0.35) {
      const step = direction.map((x) => length * x);
      const u = multiply(matrixExponential(step, n), this.rotation, n, n, n);
      const found = await this.#value(u, objective, context);
      if (found.lambda <= value.lambda + 1e-4 * length * slope) return { value: found, step };
    }
    return null;
  }

  async #value(u: Float64Array, objective: Objective, context: JobContext): Promise<GroupValue> {
    this.evaluations++;
    const { lambda, gradient } = await objective(await this.#turned(u, context));
    await context.checkpoint();
    return { lambda, gradient: gradient! };
  }

  async #turned(u: Float64Array, context: JobContext): Promise<SpinFree> {
    await context.checkpoint();
    const { n, h, g } = this.#part;
    const uh = multiply(u, h, n, n, n);
    return {
      n,
      h: multiply(uh, u, n, n, n, { transposeB: true }),
      g: await rotatedSquare(n, g, u, context),
    };
  }
}

function identity(n: number): Float64Array {
  const u = new Float64Array(n * n);
  for (let p = 0; p < n; p++) u[p * n + p] = 1;
  return u;
}

/** exp of an antisymmetric matrix of uniform random angles. */
function turnedAtRandom(n: number, size: number, random: () => number): Float64Array {
  const x = new Float64Array(n * n);
  for (let p = 0; p < n; p++) {
    for (let q = 0; q < p; q++) {
      const angle = Math.sqrt(3) * size * random();
      x[p * n + q] = angle;
      x[q * n + p] = -angle;
    }
  }
  return matrixExponential(x, n);
}

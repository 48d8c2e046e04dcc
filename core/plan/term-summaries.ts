import { buildEncoding, parseVariant } from '../encode';
import type { SpinHamiltonian } from '../hamiltonian';
import type { IntegralSet, SelectableTerm } from '../integrals';
import type { JobContext } from '../job';
import type { TermSummary } from './comparison';
import { hamiltonianOf, type SystemRequest } from './system';

/** Equal Majorana products joined: the least norm, and without spin parts no more work. */
const JOINED = parseVariant('sparse/joint/index/none/clean');
/** Spin-dependent parts coefficient by coefficient, a little above the least norm. */
const TERM_BY_TERM = parseVariant('sparse/-/index/none/clean');

const WHOLE = { electrons: null, occupations: null };

/**
 * What each term weighs alone: its one-norm as a linear combination of Majorana products, and its largest integral in
 * magnitude (stored form). Hartree.
 */
export async function termSummaries(
  set: IntegralSet,
  terms: readonly SelectableTerm[],
  context: JobContext,
  system: Omit<SystemRequest, 'terms'> = WHOLE,
): Promise<TermSummary[]> {
  const summaries: TermSummary[] = [];
  for (const name of terms) {
    const alone = hamiltonianOf(set, { ...system, terms: [name] });
    summaries.push({ name, oneNorm: await oneNorm(alone, context), maxAbs: largest(alone) });
    await context.checkpoint();
  }
  return summaries;
}

async function oneNorm(alone: SpinHamiltonian, context: JobContext): Promise<number> {
  if (alone.kind === 'spinor') return spinorOneNorm(alone);
  const { spinOrbit, spinSpin } = alone.g;
  const variant = spinOrbit || spinSpin ? TERM_BY_TERM : JOINED;
  return (await buildEncoding(alone, null, variant, {}, context)).lambda.total;
}

/** Ladder operators in place of Majorana products: an upper bound, as spinor files hold no term apart. */
function spinorOneNorm({ k, g }: Extract<SpinHamiltonian, { kind: 'spinor' }>): number {
  const sum = ({ re, im }: { re: Float64Array; im: Float64Array }): number =>
    re.reduce((total, x, i) => total + Math.hypot(x, im[i]!), 0);
  return sum(k) + 0.5 * sum(g);
}

function largest(hamiltonian: SpinHamiltonian): number {
  if (hamiltonian.kind === 'spinor') {
    const { h, g } = hamiltonian;
    return Math.max(maxAbs(h.re), maxAbs(h.im), maxAbs(g.re), maxAbs(g.im));
  }
  const { charge, spinOrbit, spinSpin } = hamiltonian.g;
  const arrays = [hamiltonian.h.planes, charge, spinSpin, spinOrbit?.same ?? null];
  const other = spinOrbit?.other;
  const ofOther =
    other === undefined
      ? 0
      : other instanceof Float64Array
        ? maxAbs(other)
        : Math.abs(other.timesSame) * maxAbs(spinOrbit!.same);
  return Math.max(ofOther, ...arrays.map((array) => (array ? maxAbs(array) : 0)));
}

function maxAbs(values: Float64Array): number {
  let found = 0;
  for (const value of values) found = Math.max(found, Math.abs(value));
  return found;
}

import { workerContext } from '../../../app/cli/context';
import { loadInputs, openInputs } from '../../../app/cli/inputs';
import { TaskPool } from '../../../app/cli/pool';
import { lcuNorms } from '../../../core/factor';
import { chargeFactors } from '../../../core/factor/coulomb';
import { planeSpectra } from '../../../core/factor/spectra';
import { spinOrbitTriples } from '../../../core/factor/triples';
import { buildHamiltonian } from '../../../core/hamiltonian';
import type { SelectableTerm } from '../../../core/integrals/terms';

/** Stages that the baseline has too, and what a run needed. Seconds and MiB. */
export interface StageTimes {
  readonly read: number;
  readonly coulomb: number;
  readonly inner: number;
  readonly spinOrbit: number;
  readonly peakMiB: number;
  /** λ of the three parts and how many factors: to see that both computed the same kind of thing. */
  readonly lambda: { readonly coulomb: number; readonly spinOrbit: number };
  readonly factors: number;
  readonly triples: number;
}

const TERMS: readonly SelectableTerm[] = ['sf', 'so1', 'somf', 'so2'];
/** Remainder of the Coulomb trace at which Cholesky stops: what a threshold of 1e-4 Eh asks for with 50 orbitals. */
const REMAINDER = 8e-8;

/** Runs the like-for-like stages once in this process. */
export async function runStages(folder: string, workers: number): Promise<StageTimes> {
  // Starting threads is to us what importing libraries is to the baseline: neither is timed.
  const pool = workers > 1 ? new TaskPool(workers, new URL('./worker.js', import.meta.url), 1) : null;
  const context = workerContext(1, pool, null, () => {});
  let last = performance.now();
  const lap = (): number => {
    const now = performance.now();
    const seconds = (now - last) / 1000;
    last = now;
    return seconds;
  };
  const inputs = await openInputs({ files: [folder], recipe: null }, context);
  const set = await loadInputs(inputs, TERMS, 'throw', context);
  const h = buildHamiltonian(set, { terms: TERMS });
  if (h.kind !== 'spatial') throw new Error('the large set is over spatial orbitals');
  const read = lap();
  const charge = await chargeFactors(h.orbitals, h.g, REMAINDER, context);
  const coulomb = lap();
  const { weights, vectors } = charge;
  const spectra = await planeSpectra('even', [0], h.orbitals, vectors, weights.length, context);
  const inner = lap();
  const triples = await spinOrbitTriples(h, context);
  const spinOrbit = lap();
  const n = h.orbitals;
  let lambda = 0;
  for (const [t, w] of weights.entries()) {
    let norm = 0;
    for (const x of spectra.subarray(t * n, (t + 1) * n)) norm += Math.abs(x);
    lambda += 0.25 * w * norm * norm;
  }
  const sum = (values: Float64Array): number => values.reduce((a, b) => a + b, 0);
  await pool?.close();
  return {
    read,
    coulomb,
    inner,
    spinOrbit,
    peakMiB: process.resourceUsage().maxRSS / 1024,
    lambda: { coulomb: lambda, spinOrbit: triples.reduce((total, block) => total + sum(lcuNorms(block)), 0) },
    factors: weights.length,
    triples: triples.reduce((total, block) => total + block.count, 0),
  };
}

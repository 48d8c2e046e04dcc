import { type TripletOperator, toSpinOrbitals } from '../../hamiltonian';
import type { JobContext, Task } from '../../job';
import { hermitianEigenvalues } from '../../linalg';
import { planeInto, sectorLayout } from '../elements';
import type { SquareFactors } from '../factors';

interface Batch {
  readonly block: Pick<SquareFactors, 'sector' | 'planes' | 'n' | 'dim'>;
  readonly count: number;
  readonly vectors: Float64Array;
}

/** Factors in one piece of parallel work. */
const CHUNK = 32;

/** Eigenvalues of a batch of factors over 2N modes, ascending. */
export const modeSpectraTask: Task<Batch, Float64Array> = {
  name: 'factor.mode-spectra',
  async run({ block: { sector, planes, n, dim }, count, vectors }, ctx) {
    const { slots } = sectorLayout(sector, planes, n);
    const operator: TripletOperator = { sector, n, planes: new Float64Array(4 * n * n) };
    const out = new Float64Array(count * 2 * n);
    for (let t = 0; t < count; t++) {
      await ctx.checkpoint();
      for (const { mu, offset, symmetric } of slots) {
        planeInto(operator.planes, mu * n * n, vectors, t * dim + offset, n, symmetric);
      }
      out.set(hermitianEigenvalues(toSpinOrbitals(operator)), t * 2 * n);
    }
    return out;
  },
};

/** count × 2N eigenvalues of Σ_μ L^{t,μ}⊗σ^μ. */
export async function modeSpectra(block: SquareFactors, ctx: JobContext): Promise<Float64Array> {
  const { sector, planes, n, dim, count } = block;
  const inputs: Batch[] = [];
  for (let from = 0; from < count; from += CHUNK) {
    const to = Math.min(count, from + CHUNK);
    const vectors = block.vectors.slice(from * dim, to * dim);
    inputs.push({ block: { sector, planes, n, dim }, count: to - from, vectors });
  }
  const out = new Float64Array(count * 2 * n);
  for (const [i, part] of (await ctx.map(modeSpectraTask, inputs)).entries())
    out.set(part, i * CHUNK * 2 * n);
  return out;
}

import { planeInto, type SquareFactors, sectorLayout, type TripleFactors } from '../factor';
import { type TripletOperator, toSpinOrbitals } from '../hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs } from '../integrals/integral-set';
import type { JobContext, Task } from '../job';
import { hermitianEigenvalues, hermitianEigenvaluesBatch } from '../linalg';
import { ROW_ZERO, type SquareItem, type TripleItem } from './items';

/** ½‖·‖_* of a batch of Hermitian matrices and how many of their eigenvalue pairs are not zero. */
export interface HermitianNorms {
  readonly norms: Float64Array;
  readonly pairs: Int32Array;
}

interface SquareBatch {
  readonly kind: 'squares';
  readonly block: Pick<SquareFactors, 'sector' | 'planes' | 'n' | 'dim'>;
  readonly vectors: Float64Array;
  readonly shifts: Float64Array;
}

interface TripleBatch {
  readonly kind: 'triples';
  readonly n: number;
  readonly antisymmetric: Float64Array;
  readonly symmetric: Float64Array;
  /** Shift of S and the c of {X, Y} = ½[(cX + Y/c)² − (cX − Y/c)²], one each. */
  readonly shifts: Float64Array;
  readonly balances: Float64Array;
}

type Batch = SquareBatch | TripleBatch;
const CHUNK = 32;

/** Spinor one-norms of a batch of factors or triples. */
export const spinorNormsTask: Task<Batch, HermitianNorms> = {
  name: 'encode.spinor-norms',
  async run(batch, ctx) {
    await ctx.checkpoint();
    return batch.kind === 'squares' ? squareBatch(batch) : tripleBatch(batch);
  },
};

/** Eigenvalues over 2N modes; Kramers pairs (even) or ± pairs (odd) share a row. */
function squareBatch({ block, vectors, shifts }: SquareBatch): HermitianNorms {
  const { n, sector, planes, dim } = block;
  const layout = sectorLayout(sector, planes, n);
  const count = shifts.length;
  const operator: TripletOperator = { sector, n, planes: new Float64Array(4 * n * n) };
  const norms = new Float64Array(count);
  const pairs = new Int32Array(count);
  for (let t = 0; t < count; t++) {
    for (const slot of layout.slots) {
      planeInto(operator.planes, slot.mu * n * n, vectors, t * dim + slot.offset, n, slot.symmetric);
    }
    for (let p = 0; p < n; p++) operator.planes[p * n + p]! -= shifts[t]!;
    const values = hermitianEigenvalues(toSpinOrbitals(operator));
    [norms[t], pairs[t]] = normAndPairs(values, 0, 2 * n, 0.5);
  }
  return { norms, pairs };
}

/**
 * ½‖c a⊗σ^k ± (S − shift)/c ⊗ 1‖_* over 2N modes. In the eigenbasis of σ^k the matrix is S/c + icA beside its complex
 * conjugate, so one N×N problem gives both; the signs and the other-orbit part a⊗1, S⊗σ^k only change signs.
 */
function tripleBatch({ n, antisymmetric, symmetric, shifts, balances }: TripleBatch): HermitianNorms {
  const count = shifts.length;
  const re = new Float64Array(count * n * n);
  const im = new Float64Array(count * n * n);
  for (let t = 0; t < count; t++) {
    const at = t * n * n;
    const c = balances[t]!;
    if (c === 0) continue; // Y is the identity, which the shift took out: nothing is left
    planeInto(im, at, antisymmetric, t * numAntisymmetricPairs(n), n, false);
    planeInto(re, at, symmetric, t * numSymmetricPairs(n), n, true);
    for (let p = 0; p < n; p++) re[at + p * n + p]! -= shifts[t]!;
    for (let i = at; i < at + n * n; i++) {
      re[i]! /= c;
      im[i]! *= c;
    }
  }
  const values = hermitianEigenvaluesBatch(re, im, count, n);
  const norms = new Float64Array(count);
  const pairs = new Int32Array(count);
  for (let t = 0; t < count; t++) [norms[t], pairs[t]] = normAndPairs(values, t * n, (t + 1) * n, 1);
  return { norms, pairs };
}

/** Times·Σ|ε| and the number of rows: of the values above zero, `times` of each. */
function normAndPairs(values: Float64Array, from: number, to: number, times: number): [number, number] {
  let sum = 0;
  const largest = Math.max(Math.abs(values[from]!), Math.abs(values[to - 1]!));
  let count = 0;
  for (let i = from; i < to; i++) {
    sum += Math.abs(values[i]!);
    if (Math.abs(values[i]!) > ROW_ZERO * largest) count++;
  }
  return [times * sum, Math.ceil(times * count)];
}

async function inBatches(
  count: number,
  ctx: JobContext,
  make: (from: number, to: number) => Batch,
): Promise<HermitianNorms> {
  const inputs: Batch[] = [];
  for (let from = 0; from < count; from += CHUNK) inputs.push(make(from, Math.min(count, from + CHUNK)));
  const norms = new Float64Array(count);
  const pairs = new Int32Array(count);
  let at = 0;
  for (const part of await ctx.map(spinorNormsTask, inputs)) {
    norms.set(part.norms, at);
    pairs.set(part.pairs, at);
    at += part.norms.length;
  }
  return { norms, pairs };
}

/** ½‖Σ_μ L^{t,μ}⊗σ^μ‖_* of each factor, shifted. */
export function squareSpinorNorms(
  block: SquareFactors,
  items: readonly SquareItem[],
  ctx: JobContext,
): Promise<HermitianNorms> {
  const { sector, planes, n, dim } = block;
  return inBatches(block.count, ctx, (from, to) => ({
    kind: 'squares',
    block: { sector, planes, n, dim },
    vectors: block.vectors.slice(from * dim, to * dim),
    shifts: Float64Array.from(items.slice(from, to), (item) => item.shift),
  }));
}

/** The common one-norm of cX ± Y/c for each triple, for Y shifted (same orbit) or not (other orbit). */
export function tripleSpinorNorms(
  block: TripleFactors,
  items: readonly TripleItem[],
  shifted: boolean,
  ctx: JobContext,
): Promise<HermitianNorms> {
  const { n } = block;
  const nanti = numAntisymmetricPairs(n);
  const npair = numSymmetricPairs(n);
  return inBatches(block.count, ctx, (from, to) => {
    const part = items.slice(from, to);
    return {
      kind: 'triples',
      n,
      antisymmetric: block.antisymmetric.slice(from * nanti, to * nanti),
      symmetric: block.symmetric.slice(from * npair, to * npair),
      shifts: Float64Array.from(part, (item) => (shifted ? item.shift : 0)),
      balances: Float64Array.from(part, (item) =>
        Math.sqrt((shifted ? item.normSame : item.normOther) / item.normX),
      ),
    };
  });
}

import { planeInto, type SquareFactors, sectorLayout, type TripleFactors } from '../factor';
import { type TripletOperator, toSpinOrbitals } from '../hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs } from '../integrals/integral-set';
import type { JobContext, Task } from '../job';
import { hermitianEigenvalues, hermitianEigenvaluesBatch } from '../linalg';
import { ROW_ZERO, type SquareItem } from './items';

/** ½‖·‖_* of a batch of Hermitian matrices and how many of their eigenvalue pairs are not zero. */
export interface HermitianNorms {
  readonly norms: Float64Array;
  readonly pairs: Int32Array;
}

interface SquareBatch {
  readonly block: Pick<SquareFactors, 'sector' | 'planes' | 'n' | 'dim'>;
  readonly vectors: Float64Array;
  readonly shifts: Float64Array;
}

interface TripleBatch {
  readonly n: number;
  readonly antisymmetric: Float64Array;
  readonly symmetric: Float64Array;
  /** c of {X, Y} = ½[(cX + Y/c)² − (cX − Y/c)²], one each. */
  readonly balances: Float64Array;
  /** Shifts of S, one each for every face. */
  readonly shifts: readonly Float64Array[];
}

/** Figures of triples on each face, and the rows that all faces share. */
export interface TripleNorms {
  readonly norms: readonly Float64Array[];
  readonly rows: Int32Array;
}

const CHUNK = 32;

/** Spinor one-norms of a batch of factors or triples. */
export const spinorNormsTask: Task<SquareBatch, HermitianNorms> = {
  name: 'encode.spinor-norms',
  async run(batch, ctx) {
    await ctx.checkpoint();
    return squareBatch(batch);
  },
};

/** The same for triples. */
export const tripleNormsTask: Task<TripleBatch, TripleNorms> = {
  name: 'encode.triple-norms',
  async run(batch, ctx) {
    await ctx.checkpoint();
    return tripleBatch(batch);
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
    [norms[t], pairs[t]] = normAndPairs(values);
  }
  return { norms, pairs };
}

/**
 * ½‖c a⊗σ^k ± (S − shift)/c ⊗ 1‖_* over 2N modes. In the eigenbasis of σ^k the matrix is S/c + icA beside its complex
 * conjugate, so one N×N problem gives both; the signs and the other-orbit part a⊗1, S⊗σ^k only change signs, and a
 * shift moves eigenvalues without touching their vectors: all faces share rows.
 */
function tripleBatch({ n, antisymmetric, symmetric, shifts, balances }: TripleBatch): TripleNorms {
  const count = balances.length;
  const re = new Float64Array(count * n * n);
  const im = new Float64Array(count * n * n);
  for (let t = 0; t < count; t++) {
    tripleInto(re, im, t * n * n, n, antisymmetric, symmetric, t, balances[t]!);
  }
  const values = hermitianEigenvaluesBatch(re, im, count, n);
  const norms = shifts.map(() => new Float64Array(count));
  const rows = new Int32Array(count);
  for (let t = 0; t < count; t++) {
    const faces = faceValues(
      values.subarray(t * n, (t + 1) * n),
      balances[t]!,
      (f) => shifts[f]![t]!,
      shifts.length,
    );
    for (const [f, own] of faces.entries()) norms[f]![t] = own.reduce((sum, x) => sum + Math.abs(x), 0);
    rows[t] = sharedRows(faces).length;
  }
  return { norms, rows };
}

/** S/c + icA of triple `t` at `at`; 0 where c is, for then Y is the identity, which a shift takes out. */
export function tripleInto(
  re: Float64Array,
  im: Float64Array,
  at: number,
  n: number,
  antisymmetric: Float64Array,
  symmetric: Float64Array,
  t: number,
  c: number,
): void {
  if (c === 0) return;
  planeInto(im, at, antisymmetric, t * numAntisymmetricPairs(n), n, false);
  planeInto(re, at, symmetric, t * numSymmetricPairs(n), n, true);
  for (let i = at; i < at + n * n; i++) {
    re[i]! /= c;
    im[i]! *= c;
  }
}

/** Eigenvalues of S/c + icA on each face: shifted by that face's shift of S. */
export function faceValues(
  values: Float64Array,
  c: number,
  shift: (face: number) => number,
  faces: number,
): Float64Array[] {
  return Array.from({ length: faces }, (_, f) => values.map((x) => (c === 0 ? 0 : x - shift(f) / c)));
}

/** Numbers of the eigenvalues that carry weight on any face. */
export function sharedRows(faces: readonly Float64Array[]): number[] {
  const zeros = faces.map((own) => ROW_ZERO * Math.max(Math.abs(own[0]!), Math.abs(own[own.length - 1]!)));
  const out: number[] = [];
  for (let i = 0; i < faces[0]!.length; i++) {
    if (faces.some((own, f) => Math.abs(own[i]!) > zeros[f]!)) out.push(i);
  }
  return out;
}

/** ½Σ|ε| and the number of rows: a pair of values above zero each. */
function normAndPairs(values: Float64Array): [number, number] {
  let sum = 0;
  const largest = Math.max(Math.abs(values[0]!), Math.abs(values[values.length - 1]!));
  let count = 0;
  for (const x of values) {
    sum += Math.abs(x);
    if (Math.abs(x) > ROW_ZERO * largest) count++;
  }
  return [sum / 2, Math.ceil(count / 2)];
}

/** Ranges of CHUNK out of `count`. */
function chunks(count: number): [number, number][] {
  const out: [number, number][] = [];
  for (let from = 0; from < count; from += CHUNK) out.push([from, Math.min(count, from + CHUNK)]);
  return out;
}

/** ½‖Σ_μ L^{t,μ}⊗σ^μ‖_* of each factor, shifted. */
export async function squareSpinorNorms(
  block: SquareFactors,
  items: readonly SquareItem[],
  ctx: JobContext,
): Promise<HermitianNorms> {
  const { sector, planes, n, dim, count } = block;
  const inputs = chunks(count).map(
    ([from, to]): SquareBatch => ({
      block: { sector, planes, n, dim },
      vectors: block.vectors.slice(from * dim, to * dim),
      shifts: Float64Array.from(items.slice(from, to), (item) => item.shift),
    }),
  );
  const norms = new Float64Array(count);
  const pairs = new Int32Array(count);
  for (const [i, part] of (await ctx.map(spinorNormsTask, inputs)).entries()) {
    norms.set(part.norms, i * CHUNK);
    pairs.set(part.pairs, i * CHUNK);
  }
  return { norms, pairs };
}

/**
 * The common one-norm of cX ± Y/c for each triple on each face.
 *
 * @param balances - c of each triple
 * @param shifts - of S, one array for each face
 */
export async function tripleSpinorNorms(
  block: TripleFactors,
  balances: Float64Array,
  shifts: readonly Float64Array[],
  ctx: JobContext,
): Promise<TripleNorms> {
  const { n, count } = block;
  const nanti = numAntisymmetricPairs(n);
  const npair = numSymmetricPairs(n);
  const inputs = chunks(count).map(
    ([from, to]): TripleBatch => ({
      n,
      antisymmetric: block.antisymmetric.slice(from * nanti, to * nanti),
      symmetric: block.symmetric.slice(from * npair, to * npair),
      balances: balances.slice(from, to),
      shifts: shifts.map((own) => own.slice(from, to)),
    }),
  );
  const norms = shifts.map(() => new Float64Array(count));
  const rows = new Int32Array(count);
  for (const [i, part] of (await ctx.map(tripleNormsTask, inputs)).entries()) {
    for (const [f, own] of part.norms.entries()) norms[f]!.set(own, i * CHUNK);
    rows.set(part.rows, i * CHUNK);
  }
  return { norms, rows };
}

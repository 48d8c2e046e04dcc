import { otherOrbitBlock, type SpatialHamiltonian, sameOrbitBlock } from '../hamiltonian';
import { numAntisymmetricPairs, numSymmetricPairs } from '../integrals/integral-set';
import type { JobContext, Task } from '../job';
import { type SingularValues, singularValues } from '../linalg';
import { canonicalTriples } from './clusters';
import { type Block, matrixBlocks, submatrix } from './components';
import { ZERO_WEIGHT } from './eigenvectors';
import type { TripleFactors } from './factors';
import { pairSpectra } from './spectra';

interface SvdInput {
  readonly rows: number;
  readonly cols: number;
  readonly a: Float64Array;
}

/** Singular triples of one block of one Cartesian component. */
export const svdTask: Task<SvdInput, SingularValues> = {
  name: 'factor.svd',
  run({ rows, cols, a }, ctx) {
    // The tolerance is relative to the largest s, which the Frobenius norm bounds from above.
    let square = 0;
    for (const x of a) square += x * x;
    const tolerance = square > 0 ? ZERO_WEIGHT / Math.sqrt(square) : 0;
    return singularValues(a, rows, cols, ctx, { tolerance });
  },
};

/**
 * Two-electron spin–orbit as triples: one SVD per Cartesian component, split first into the blocks that spatial
 * symmetry leaves. One list where the other-orbit array is a multiple of the same-orbit one, else one list each.
 */
export async function spinOrbitTriples(h: SpatialHamiltonian, ctx: JobContext): Promise<TripleFactors[]> {
  const spinOrbit = h.g.spinOrbit;
  if (!spinOrbit) return [];
  const n = h.orbitals;
  const same = (k: Component) => sameOrbitBlock(n, h.g, k);
  if (!(spinOrbit.other instanceof Float64Array)) {
    return [await tripleList(n, same, 1, spinOrbit.other.timesSame, ctx)];
  }
  const lists = [
    await tripleList(n, same, 1, 0, ctx),
    await tripleList(n, (k) => otherOrbitBlock(n, h.g, k), 0, 1, ctx),
  ];
  return lists.filter((list) => list.count > 0);
}

type Component = 1 | 2 | 3;

interface Piece {
  readonly k: Component;
  readonly block: Block;
}

async function tripleList(
  n: number,
  blockOf: (k: Component) => Float64Array,
  sameScale: number,
  otherScale: number,
  ctx: JobContext,
): Promise<TripleFactors> {
  const nanti = numAntisymmetricPairs(n);
  const npair = numSymmetricPairs(n);
  const pieces: Piece[] = [];
  const inputs: SvdInput[] = [];
  for (const k of [1, 2, 3] as const) {
    const matrix = blockOf(k);
    for (const block of matrixBlocks(matrix, nanti, npair)) {
      pieces.push({ k, block });
      inputs.push({
        rows: block.rows.length,
        cols: block.cols.length,
        a: submatrix(matrix, npair, block),
      });
    }
    await ctx.checkpoint();
  }
  ctx.report('spin–orbit factors', 0, inputs.length);
  const solved = await ctx.map(svdTask, inputs);
  ctx.report('spin–orbit factors', inputs.length, inputs.length);

  const perComponent = [1, 2, 3].map((k) => {
    const merged = mergeBlocks(
      solved.flatMap((svd, i) => (pieces[i]!.k === k ? [{ svd, block: pieces[i]!.block }] : [])),
      nanti,
      npair,
    );
    return canonicalTriples(merged);
  });
  const count = perComponent.reduce((sum, { rank }) => sum + rank, 0);
  const out = {
    component: new Uint8Array(count),
    strengths: new Float64Array(count),
    antisymmetric: new Float64Array(count * nanti),
    symmetric: new Float64Array(count * npair),
  };
  let at = 0;
  perComponent.forEach((svd, k) => {
    out.component.fill(k + 1, at, at + svd.rank);
    out.strengths.set(svd.s, at);
    out.antisymmetric.set(svd.u, at * nanti);
    out.symmetric.set(svd.v, at * npair);
    at += svd.rank;
  });
  const antisymmetricNorms = await pairSpectra(n, false, out.antisymmetric, count, ctx);
  const symmetricValues = await pairSpectra(n, true, out.symmetric, count, ctx);
  return {
    kind: 'triples',
    part: 'spin-orbit',
    n,
    count,
    sameScale,
    otherScale,
    ...out,
    antisymmetricNorms,
    symmetricValues,
  };
}

/** Triples of all blocks of a component in descending order of s, vectors spread back to all pairs. */
function mergeBlocks(
  parts: readonly { readonly svd: SingularValues; readonly block: Block }[],
  rows: number,
  cols: number,
): SingularValues {
  const all = parts.flatMap(({ svd, block }) =>
    Array.from(svd.s, (s, i) => ({ s, i, svd, block })).filter(({ s }) => s > ZERO_WEIGHT),
  );
  all.sort((a, b) => b.s - a.s);
  const out = {
    s: Float64Array.from(all, ({ s }) => s),
    u: new Float64Array(all.length * rows),
    v: new Float64Array(all.length * cols),
  };
  all.forEach(({ i, svd, block }, t) => {
    block.rows.forEach((row, j) => {
      out.u[t * rows + row] = svd.u[i * svd.rows + j]!;
    });
    block.cols.forEach((col, j) => {
      out.v[t * cols + col] = svd.v[i * svd.cols + j]!;
    });
  });
  return { rows, cols, rank: all.length, ...out };
}

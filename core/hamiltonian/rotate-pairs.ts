import { numAntisymmetricPairs, numSymmetricPairs } from '../integrals/integral-set';
import type { JobContext, Task } from '../job';
import { multiply } from '../linalg';

interface PairRows {
  readonly n: number;
  readonly symmetric: boolean;
  readonly rows: number;
  /** rows × pairs, bare integrals over p ≥ q or p > q. */
  readonly values: Float64Array;
  /** n×n, φ'_p = Σ_q U_pq φ_q. */
  readonly u: Float64Array;
}

/** Numbers in one unpacked batch of planes: some milliseconds of work. */
const BATCH = 200_000;
/** Numbers in one piece for a worker. */
const PIECE = 1_000_000;

/** X → U X Uᵀ for every row, a symmetric or antisymmetric plane over its pairs. */
export const rotatePairsTask: Task<PairRows, Float64Array> = {
  name: 'hamiltonian.rotate-pairs',
  async run({ n, symmetric, rows, values, u }, context) {
    const pairs = symmetric ? numSymmetricPairs(n) : numAntisymmetricPairs(n);
    const out = new Float64Array(rows * pairs);
    const batch = Math.max(1, Math.floor(BATCH / (n * n)));
    for (let from = 0; from < rows; from += batch) {
      await context.checkpoint();
      const count = Math.min(batch, rows - from);
      const planes = new Float64Array(count * n * n);
      for (let t = 0; t < count; t++) unpack(planes, t * n * n, values, (from + t) * pairs, n, symmetric);
      const half = multiply(planes, u, count * n, n, n, { transposeB: true });
      const turned = multiply(transposedPlanes(half, count, n), u, count * n, n, n, { transposeB: true });
      // (U X Uᵀ)ᵀ of each plane: itself, or its negative.
      for (let t = 0; t < count; t++) pack(out, (from + t) * pairs, turned, t * n * n, n, symmetric);
    }
    return out;
  },
};

/** Every row turned, in parallel pieces. Cost 4n³ operations a row. */
export async function rotatePairs(input: PairRows, context: JobContext): Promise<Float64Array> {
  const { n, symmetric, rows, values, u } = input;
  const pairs = symmetric ? numSymmetricPairs(n) : numAntisymmetricPairs(n);
  if (pairs === 0) return new Float64Array(0);
  const piece = Math.max(1, Math.floor(PIECE / pairs));
  const inputs: PairRows[] = [];
  for (let from = 0; from < rows; from += piece) {
    const to = Math.min(rows, from + piece);
    inputs.push({ n, symmetric, rows: to - from, values: values.slice(from * pairs, to * pairs), u });
  }
  const pieces = await context.map(rotatePairsTask, inputs);
  const out = new Float64Array(rows * pairs);
  let at = 0;
  for (const part of pieces) {
    out.set(part, at);
    at += part.length;
  }
  return out;
}

function unpack(
  planes: Float64Array,
  at: number,
  values: Float64Array,
  from: number,
  n: number,
  symmetric: boolean,
): void {
  const sign = symmetric ? 1 : -1;
  for (let p = 0, i = from; p < n; p++) {
    for (let q = 0; q < p; q++) {
      const x = values[i++]!;
      planes[at + p * n + q] = x;
      planes[at + q * n + p] = sign * x;
    }
    if (symmetric) planes[at + p * n + p] = values[i++]!;
  }
}

/** Both halves are averaged: rounding must not make the result depend on which one is kept. */
function pack(
  values: Float64Array,
  at: number,
  planes: Float64Array,
  from: number,
  n: number,
  symmetric: boolean,
): void {
  const sign = symmetric ? 1 : -1;
  for (let p = 0, i = at; p < n; p++) {
    for (let q = 0; q < p; q++) {
      values[i++] = (sign * planes[from + p * n + q]! + planes[from + q * n + p]!) / 2;
    }
    if (symmetric) values[i++] = planes[from + p * n + p]!;
  }
}

function transposedPlanes(planes: Float64Array, count: number, n: number): Float64Array {
  const out = new Float64Array(planes.length);
  for (let t = 0; t < count; t++) {
    const at = t * n * n;
    for (let p = 0; p < n; p++) for (let q = 0; q < n; q++) out[at + q * n + p] = planes[at + p * n + q]!;
  }
  return out;
}

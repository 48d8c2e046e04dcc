import type { JobContext } from '../job';
import { multiply, transpose } from './multiply';
import { symmetricEigenAsync } from './symmetric';
import type { SingularValues } from './types';

export interface SingularOptions {
  /** Triples with s ≤ tolerance · s_max are dropped. @defaultValue 1e-12 */
  readonly tolerance?: number;
}

/**
 * Singular values and vectors of a rows×cols matrix by way of the smaller Gram matrix.
 *
 * @remarks
 * With AAᵀ = Σ s² u uᵀ the other side is v = Aᵀu/s, so A = Σ s u vᵀ holds to rounding.
 */
export async function singularValues(
  a: Float64Array,
  rows: number,
  cols: number,
  context: JobContext,
  options: SingularOptions = {},
): Promise<SingularValues> {
  if (rows > cols) {
    const t = await singularValues(transpose(a, rows, cols), cols, rows, context, options);
    return { rows, cols, rank: t.rank, s: t.s, u: t.v, v: t.u };
  }
  const tolerance = options.tolerance ?? 1e-12;
  const gram = multiply(a, a, rows, cols, rows, { transposeB: true });
  const eigen = await symmetricEigenAsync(gram, rows, context);
  const projected = multiply(eigen.vectors, a, rows, rows, cols);
  const s = new Float64Array(rows);
  for (let i = 0; i < rows; i++) {
    let sum = 0;
    for (let k = 0; k < cols; k++) sum += projected[i * cols + k] ** 2;
    s[i] = Math.sqrt(sum);
  }
  const order = Array.from(s.keys()).sort((x, y) => s[y] - s[x] || x - y);
  const kept = order.filter((i) => s[i] > tolerance * s[order[0]]);
  const rank = kept.length;
  const out = {
    s: new Float64Array(rank),
    u: new Float64Array(rank * rows),
    v: new Float64Array(rank * cols),
  };
  kept.forEach((from, to) => {
    out.s[to] = s[from];
    out.u.set(eigen.vectors.subarray(from * rows, (from + 1) * rows), to * rows);
    for (let k = 0; k < cols; k++) out.v[to * cols + k] = projected[from * cols + k] / s[from];
  });
  return { rows, cols, rank, ...out };
}

import type { Planes } from '../linalg';
import type { SparseHermitian } from './sparse-hermitian';

/** y = H x. */
export function multiplySparse(matrix: SparseHermitian, x: Planes, y: Planes): void {
  const { dim, diagonal, start, row, re, im } = matrix;
  for (let i = 0; i < dim; i++) y.re[i] = diagonal[i]! * x.re[i]!;
  if (im.length === 0 && x.im.length === 0) {
    for (let j = 0; j < dim; j++) {
      const xj = x.re[j]!;
      let sum = 0;
      for (let e = start[j]!; e < start[j + 1]!; e++) {
        const i = row[e]!;
        y.re[i]! += re[e]! * xj;
        sum += re[e]! * x.re[i]!;
      }
      y.re[j]! += sum;
    }
    return;
  }
  for (let i = 0; i < dim; i++) y.im[i] = diagonal[i]! * x.im[i]!;
  for (let j = 0; j < dim; j++) {
    const xr = x.re[j]!;
    const xi = x.im[j]!;
    let sr = 0;
    let si = 0;
    for (let e = start[j]!; e < start[j + 1]!; e++) {
      const i = row[e]!;
      const a = re[e]!;
      const b = im.length === 0 ? 0 : im[e]!;
      y.re[i]! += a * xr - b * xi;
      y.im[i]! += a * xi + b * xr;
      sr += a * x.re[i]! + b * x.im[i]!;
      si += a * x.im[i]! - b * x.re[i]!;
    }
    y.re[j]! += sr;
    y.im[j]! += si;
  }
}

/** All elements, row-major; `im` has length 0 for a real matrix. */
export function denseMatrix(matrix: SparseHermitian): Planes {
  return denseSubmatrix(matrix, [...matrix.diagonal.keys()]);
}

/** The rows and columns in `list` (ascending) as a dense matrix. */
export function denseSubmatrix(matrix: SparseHermitian, list: readonly number[]): Planes {
  const size = list.length;
  const index = new Int32Array(matrix.dim).fill(-1);
  for (const [i, from] of list.entries()) index[from] = i;
  const re = new Float64Array(size * size);
  const im = new Float64Array(matrix.im.length > 0 ? size * size : 0);
  for (const [j, from] of list.entries()) {
    re[j * size + j] = matrix.diagonal[from]!;
    for (let e = matrix.start[from]!; e < matrix.start[from + 1]!; e++) {
      const i = index[matrix.row[e]!]!;
      if (i === -1) continue;
      re[i * size + j] = matrix.re[e]!;
      re[j * size + i] = matrix.re[e]!;
      if (im.length > 0) {
        im[i * size + j] = matrix.im[e]!;
        im[j * size + i] = -matrix.im[e]!;
      }
    }
  }
  return { re, im };
}

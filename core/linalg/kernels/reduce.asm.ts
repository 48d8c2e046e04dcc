// Householder reduction of small symmetric or antisymmetric matrices to tridiagonal form, and batches of it.
import { qlValues } from './ql.asm';
import { triangleRankTwo, triangleTimes } from './rows.asm';

const TINY: f64 = 1e-290; // less than this is no content, and its reciprocal would overflow

/**
 * Lower triangle of A (n×n), sign = ±1 for symmetric or antisymmetric. d: diagonal (0 for antisymmetric); e[i] = T_{i+1,i}, i < n − 1;
 * h[i]: ‖u‖²/2 of the reflector left in row i, 0 for none. w: n numbers of room.
 */
export function reduceTriangle(a: i32, ld: i32, n: i32, sign: f64, d: i32, e: i32, h: i32, w: i32): void {
  for (let i = n - 1; i > 0; i--) {
    const row = <usize>(a + i * ld) << 3, end = row + (<usize>i << 3), last = end - 8;
    const offDiagonal = (<usize>(e + i) << 3) - 8, size = <usize>(h + i) << 3;
    let scale: f64 = 0;
    for (let p = row; p < last; p += 8) scale += abs(load<f64>(p));
    if (scale < TINY) {
      store<f64>(offDiagonal, load<f64>(last));
      store<f64>(size, 0);
      continue;
    }
    scale += abs(load<f64>(last));
    const inverse = 1 / scale;
    let sum: f64 = 0;
    for (let p = row; p < end; p += 8) {
      const x = load<f64>(p) * inverse;
      store<f64>(p, x);
      sum += x * x;
    }
    const f = load<f64>(last);
    const g = f >= 0 ? -sqrt(sum) : sqrt(sum);
    store<f64>(offDiagonal, scale * g);
    const norm = sum - f * g;
    store<f64>(last, f - g);
    store<f64>(size, norm);

    const u = a + i * ld, pw = <usize>w << 3, length = <usize>i << 3;
    triangleTimes(a, ld, i, sign, u, w);
    let overlap: f64 = 0;
    for (let k: usize = 0; k < length; k += 8) overlap += load<f64>(pw + k) * load<f64>(row + k);
    // w ← (A u − (u·A u / 2h) u) / h; the overlap vanishes for antisymmetric A.
    const shift = sign > 0 ? overlap / (norm + norm) : 0;
    const per = 1 / norm;
    for (let k: usize = 0; k < length; k += 8) {
      store<f64>(pw + k, (load<f64>(pw + k) - shift * load<f64>(row + k)) * per);
    }
    triangleRankTwo(a, ld, i, u, w, -sign, -1);
  }
  for (let i = 0; i < n; i++) {
    store<f64>(<usize>(d + i) << 3, sign > 0 ? load<f64>(<usize>(a + i * ld + i) << 3) : 0);
  }
}

/**
 * Eigenvalues, unordered, of `count` matrices stored one after another with row stride ld and n rows each; of iA where
 * sign = −1. Overwrites the matrices. room: 3n numbers. Returns the number of matrices that did not converge.
 */
export function eigenvaluesOfMany(a: i32, ld: i32, n: i32, count: i32, sign: f64, values: i32, room: i32): i32 {
  const e = room, h = room + n, w = h + n;
  let failed = 0;
  for (let i = 0; i < count; i++, a += ld * n, values += n) {
    reduceTriangle(a, ld, n, sign, values, e, h, w);
    // A diagonal unitary turns iT into the real symmetric matrix with the sizes of T's elements beside a zero diagonal.
    if (qlValues(values, e, n) != 0) failed++;
  }
  return failed;
}

// Complex Householder reduction of Hermitian matrices in two planes, and batches of it.
import { qlValues } from './ql.asm';

const TINY: f64 = 1e-290; // less than this is no content, and its reciprocal would overflow

// @ts-ignore: decorator
@inline
function madd(sum: v128, x: v128, y: v128): v128 {
  return f64x2.add(sum, f64x2.mul(x, y));
}

// @ts-ignore: decorator
@inline
function msub(sum: v128, x: v128, y: v128): v128 {
  return f64x2.sub(sum, f64x2.mul(x, y));
}

// @ts-ignore: decorator
@inline
function total(x: v128): f64 {
  return f64x2.extract_lane(x, 0) + f64x2.extract_lane(x, 1);
}

/** y = A x, A Hermitian n×n by its lower triangle; the imaginary part of the diagonal is not read. */
export function hermitianTimes(ar: i32, ai: i32, ld: i32, n: i32, xr: i32, xi: i32, yr: i32, yi: i32): void {
  const stride = <usize>ld << 3;
  const pxr = <usize>xr << 3, pxi = <usize>xi << 3, pyr = <usize>yr << 3, pyi = <usize>yi << 3;
  memory.fill(pyr, 0, <usize>n << 3);
  memory.fill(pyi, 0, <usize>n << 3);
  let r = <usize>ar << 3, q = <usize>ai << 3;
  for (let j = 0; j < n; j++, r += stride, q += stride) {
    const at = <usize>j << 3, even = at & ~15;
    const xjr = load<f64>(pxr + at), xji = load<f64>(pxi + at);
    const vr = f64x2.splat(xjr), vi = f64x2.splat(xji);
    let sr = f64x2.splat(0), si = sr;
    for (let k: usize = 0; k < even; k += 16) {
      const a = v128.load(r + k), b = v128.load(q + k), xkr = v128.load(pxr + k), xki = v128.load(pxi + k);
      sr = msub(madd(sr, a, xkr), b, xki);
      si = madd(madd(si, a, xki), b, xkr);
      v128.store(pyr + k, madd(madd(v128.load(pyr + k), a, vr), b, vi));
      v128.store(pyi + k, msub(madd(v128.load(pyi + k), a, vi), b, vr));
    }
    let tr = total(sr), ti = total(si);
    if (even < at) {
      const a = load<f64>(r + even), b = load<f64>(q + even), xkr = load<f64>(pxr + even), xki = load<f64>(pxi + even);
      tr += a * xkr - b * xki;
      ti += a * xki + b * xkr;
      store<f64>(pyr + even, load<f64>(pyr + even) + a * xjr + b * xji);
      store<f64>(pyi + even, load<f64>(pyi + even) + a * xji - b * xjr);
    }
    const diagonal = load<f64>(r + at);
    store<f64>(pyr + at, load<f64>(pyr + at) + tr + diagonal * xjr);
    store<f64>(pyi + at, load<f64>(pyi + at) + ti + diagonal * xji);
  }
}

/** A_jk −= x_j y_k* + y_j x_k* on the lower triangle (k ≤ j < n). */
function hermitianRankTwo(ar: i32, ai: i32, ld: i32, n: i32, xr: i32, xi: i32, yr: i32, yi: i32): void {
  const stride = <usize>ld << 3;
  const pxr = <usize>xr << 3, pxi = <usize>xi << 3, pyr = <usize>yr << 3, pyi = <usize>yi << 3;
  let r = <usize>ar << 3, q = <usize>ai << 3;
  for (let j = 0; j < n; j++, r += stride, q += stride) {
    const at = <usize>j << 3, end = at + 8, even = end & ~15;
    const xjr = load<f64>(pxr + at), xji = load<f64>(pxi + at), yjr = load<f64>(pyr + at), yji = load<f64>(pyi + at);
    const vxr = f64x2.splat(xjr), vxi = f64x2.splat(xji), vyr = f64x2.splat(yjr), vyi = f64x2.splat(yji);
    for (let k: usize = 0; k < even; k += 16) {
      const xkr = v128.load(pxr + k), xki = v128.load(pxi + k), ykr = v128.load(pyr + k), yki = v128.load(pyi + k);
      v128.store(r + k, msub(msub(msub(msub(v128.load(r + k), vxr, ykr), vxi, yki), vyr, xkr), vyi, xki));
      v128.store(q + k, madd(msub(madd(msub(v128.load(q + k), vxi, ykr), vxr, yki), vyi, xkr), vyr, xki));
    }
    if (even < end) {
      const xkr = load<f64>(pxr + even), xki = load<f64>(pxi + even), ykr = load<f64>(pyr + even), yki = load<f64>(pyi + even);
      store<f64>(r + even, load<f64>(r + even) - xjr * ykr - xji * yki - yjr * xkr - yji * xki);
      store<f64>(q + even, load<f64>(q + even) - xji * ykr + xjr * yki - yji * xkr + yjr * xki);
    }
  }
}

/**
 * d: diagonal of T. tr, ti: T_{i,i−1} at i (complex; the caller takes the phases out). h[i]: ‖u‖²/2 of the reflector left in
 * row i of both planes, 0 for none. w: 2n numbers of room.
 */
export function reduceHermitian(ar: i32, ai: i32, ld: i32, n: i32, d: i32, tr: i32, ti: i32, h: i32, w: i32): void {
  const wr = w, wi = w + n;
  for (let i = n - 1; i > 0; i--) {
    const row = <usize>(ar + i * ld) << 3, col = <usize>(ai + i * ld) << 3;
    const length = <usize>i << 3, last = length - 8;
    const ptr = <usize>(tr + i) << 3, pti = <usize>(ti + i) << 3, size = <usize>(h + i) << 3;
    // The column above the diagonal is the conjugate of the row: x_k = A_ik*.
    let scale: f64 = 0;
    for (let k: usize = 0; k < length; k += 8) {
      const x = -load<f64>(col + k);
      store<f64>(col + k, x);
      if (k < last) scale += abs(load<f64>(row + k)) + abs(x);
    }
    const fr = load<f64>(row + last), fi = load<f64>(col + last);
    if (scale < TINY) {
      store<f64>(ptr, fr);
      store<f64>(pti, -fi);
      store<f64>(size, 0);
      continue;
    }
    scale += abs(fr) + abs(fi);
    const inverse = 1 / scale;
    let sum: f64 = 0;
    for (let k: usize = 0; k < length; k += 8) {
      const x = load<f64>(row + k) * inverse, y = load<f64>(col + k) * inverse;
      store<f64>(row + k, x);
      store<f64>(col + k, y);
      sum += x * x + y * y;
    }
    // x becomes −phase·‖x‖·e_{i−1}: no cancellation in u = x + phase·‖x‖·e_{i−1}.
    const x = load<f64>(row + last), y = load<f64>(col + last);
    const root = sqrt(sum), modulus = sqrt(x * x + y * y);
    // A phase from numbers that all but underflow would not have modulus 1; none is needed then.
    const none = modulus < 1e-150;
    const pr = none ? 1 : x / modulus, pi = none ? 0 : y / modulus;
    store<f64>(ptr, -scale * root * pr);
    store<f64>(pti, scale * root * pi);
    store<f64>(row + last, x + root * pr);
    store<f64>(col + last, y + root * pi);
    const norm = sum + root * modulus;
    store<f64>(size, norm);

    const ur = ar + i * ld, ui = ai + i * ld, pwr = <usize>wr << 3, pwi = <usize>wi << 3;
    hermitianTimes(ar, ai, ld, i, ur, ui, wr, wi);
    let overlap: f64 = 0;
    for (let k: usize = 0; k < length; k += 8) {
      overlap += load<f64>(row + k) * load<f64>(pwr + k) + load<f64>(col + k) * load<f64>(pwi + k);
    }
    const shift = overlap / (norm + norm), per = 1 / norm;
    for (let k: usize = 0; k < length; k += 8) {
      store<f64>(pwr + k, (load<f64>(pwr + k) - shift * load<f64>(row + k)) * per);
      store<f64>(pwi + k, (load<f64>(pwi + k) - shift * load<f64>(col + k)) * per);
    }
    hermitianRankTwo(ar, ai, ld, i, ur, ui, wr, wi);
  }
  for (let i = 0; i < n; i++) store<f64>(<usize>(d + i) << 3, load<f64>(<usize>(ar + i * ld + i) << 3));
}

/**
 * Eigenvalues, unordered, of `count` Hermitian matrices stored one after another. Overwrites both planes. room: 5n numbers.
 * Returns the number of matrices that did not converge.
 */
export function hermitianValuesOfMany(ar: i32, ai: i32, ld: i32, n: i32, count: i32, values: i32, room: i32): i32 {
  const tr = room, ti = tr + n, h = ti + n, w = h + n;
  let failed = 0;
  for (let m = 0; m < count; m++, ar += ld * n, ai += ld * n, values += n) {
    reduceHermitian(ar, ai, ld, n, values, tr, ti, h, w);
    for (let i = 1; i < n; i++) {
      const x = load<f64>(<usize>(tr + i) << 3), y = load<f64>(<usize>(ti + i) << 3);
      store<f64>(<usize>(tr + i - 1) << 3, sqrt(x * x + y * y));
    }
    if (qlValues(values, tr, n) != 0) failed++;
  }
  return failed;
}

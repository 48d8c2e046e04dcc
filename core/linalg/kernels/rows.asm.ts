// Matrix–vector pieces on contiguous rows, four rows at a time. Positions and strides in numbers.

// @ts-ignore: decorator
@inline
function madd(sum: v128, x: v128, y: v128): v128 {
  return f64x2.add(sum, f64x2.mul(x, y));
}

// @ts-ignore: decorator
@inline
function total(x: v128): f64 {
  return f64x2.extract_lane(x, 0) + f64x2.extract_lane(x, 1);
}

/** out[r] = Σ_k rows[r,k]·x[k], r < count, k < length. */
export function rowDots(rows: i32, ld: i32, count: i32, x: i32, length: i32, out: i32): void {
  const stride = <usize>ld << 3, end = <usize>length << 3, even = end & ~15;
  const px = <usize>x << 3;
  let r0 = <usize>rows << 3, to = <usize>out << 3, r = 0;
  for (; r + 4 <= count; r += 4, r0 += stride << 2, to += 32) {
    const r1 = r0 + stride, r2 = r1 + stride, r3 = r2 + stride;
    let s0 = f64x2.splat(0), s1 = s0, s2 = s0, s3 = s0;
    for (let k: usize = 0; k < even; k += 16) {
      const v = v128.load(px + k);
      s0 = madd(s0, v128.load(r0 + k), v);
      s1 = madd(s1, v128.load(r1 + k), v);
      s2 = madd(s2, v128.load(r2 + k), v);
      s3 = madd(s3, v128.load(r3 + k), v);
    }
    let t0 = total(s0), t1 = total(s1), t2 = total(s2), t3 = total(s3);
    if (even < end) {
      const v = load<f64>(px + even);
      t0 += load<f64>(r0 + even) * v;
      t1 += load<f64>(r1 + even) * v;
      t2 += load<f64>(r2 + even) * v;
      t3 += load<f64>(r3 + even) * v;
    }
    store<f64>(to, t0); store<f64>(to, t1, 8); store<f64>(to, t2, 16); store<f64>(to, t3, 24);
  }
  for (; r < count; r++, r0 += stride, to += 8) {
    let s = f64x2.splat(0);
    for (let k: usize = 0; k < even; k += 16) s = madd(s, v128.load(r0 + k), v128.load(px + k));
    let t = total(s);
    if (even < end) t += load<f64>(r0 + even) * load<f64>(px + even);
    store<f64>(to, t);
  }
}

/** y[k] += Σ_r f[r]·rows[r,k]; f[r] is at f + r·step. */
export function addRows(rows: i32, ld: i32, count: i32, f: i32, step: i32, y: i32, length: i32): void {
  const stride = <usize>ld << 3, end = <usize>length << 3, even = end & ~15, gap = <usize>step << 3;
  const py = <usize>y << 3;
  let r0 = <usize>rows << 3, pf = <usize>f << 3, r = 0;
  for (; r + 4 <= count; r += 4, r0 += stride << 2, pf += gap << 2) {
    const r1 = r0 + stride, r2 = r1 + stride, r3 = r2 + stride;
    const f0 = v128.load_splat<f64>(pf), f1 = v128.load_splat<f64>(pf + gap);
    const f2 = v128.load_splat<f64>(pf + 2 * gap), f3 = v128.load_splat<f64>(pf + 3 * gap);
    for (let k: usize = 0; k < even; k += 16) {
      let s = madd(v128.load(py + k), f0, v128.load(r0 + k));
      s = madd(s, f1, v128.load(r1 + k));
      s = madd(s, f2, v128.load(r2 + k));
      v128.store(py + k, madd(s, f3, v128.load(r3 + k)));
    }
    if (even < end) {
      let s = load<f64>(py + even) + f64x2.extract_lane(f0, 0) * load<f64>(r0 + even);
      s += f64x2.extract_lane(f1, 0) * load<f64>(r1 + even);
      s += f64x2.extract_lane(f2, 0) * load<f64>(r2 + even);
      store<f64>(py + even, s + f64x2.extract_lane(f3, 0) * load<f64>(r3 + even));
    }
  }
  for (; r < count; r++, r0 += stride, pf += gap) {
    const f0 = v128.load_splat<f64>(pf);
    for (let k: usize = 0; k < even; k += 16) v128.store(py + k, madd(v128.load(py + k), f0, v128.load(r0 + k)));
    if (even < end) store<f64>(py + even, load<f64>(py + even) + f64x2.extract_lane(f0, 0) * load<f64>(r0 + even));
  }
}

/**
 * y = A x for n×n A given by its lower triangle in one pass over it: symmetric for sign = 1, antisymmetric (diagonal
 * ignored) for sign = −1.
 */
export function triangleTimes(a: i32, ld: i32, n: i32, sign: f64, x: i32, y: i32): void {
  const stride = <usize>ld << 3;
  const px = <usize>x << 3, py = <usize>y << 3;
  memory.fill(py, 0, <usize>n << 3);
  let r0 = <usize>a << 3, j = 0;
  for (; j + 4 <= n; j += 4, r0 += stride << 2) {
    const r1 = r0 + stride, r2 = r1 + stride, r3 = r2 + stride;
    const at = <usize>j << 3;
    const x0 = load<f64>(px + at), x1 = load<f64>(px + at, 8), x2 = load<f64>(px + at, 16), x3 = load<f64>(px + at, 24);
    const v0 = f64x2.splat(sign * x0), v1 = f64x2.splat(sign * x1), v2 = f64x2.splat(sign * x2), v3 = f64x2.splat(sign * x3);
    let s0 = f64x2.splat(0), s1 = s0, s2 = s0, s3 = s0;
    for (let k: usize = 0; k < at; k += 16) {
      const v = v128.load(px + k);
      const a0 = v128.load(r0 + k), a1 = v128.load(r1 + k), a2 = v128.load(r2 + k), a3 = v128.load(r3 + k);
      s0 = madd(s0, a0, v);
      s1 = madd(s1, a1, v);
      s2 = madd(s2, a2, v);
      s3 = madd(s3, a3, v);
      const low = f64x2.add(f64x2.mul(a0, v0), f64x2.mul(a1, v1));
      const high = f64x2.add(f64x2.mul(a2, v2), f64x2.mul(a3, v3));
      v128.store(py + k, f64x2.add(v128.load(py + k), f64x2.add(low, high)));
    }
    const a10 = load<f64>(r1 + at), a20 = load<f64>(r2 + at), a21 = load<f64>(r2 + at, 8);
    const a30 = load<f64>(r3 + at), a31 = load<f64>(r3 + at, 8), a32 = load<f64>(r3 + at, 16);
    let d0: f64 = 0, d1: f64 = 0, d2: f64 = 0, d3: f64 = 0;
    if (sign > 0) {
      d0 = load<f64>(r0 + at) * x0; d1 = load<f64>(r1 + at, 8) * x1;
      d2 = load<f64>(r2 + at, 16) * x2; d3 = load<f64>(r3 + at, 24) * x3;
    }
    store<f64>(py + at, total(s0) + d0 + sign * (a10 * x1 + a20 * x2 + a30 * x3));
    store<f64>(py + at, total(s1) + a10 * x0 + d1 + sign * (a21 * x2 + a31 * x3), 8);
    store<f64>(py + at, total(s2) + a20 * x0 + a21 * x1 + d2 + sign * (a32 * x3), 16);
    store<f64>(py + at, total(s3) + a30 * x0 + a31 * x1 + a32 * x2 + d3, 24);
  }
  for (; j < n; j++, r0 += stride) {
    const at = <usize>j << 3;
    const xj = load<f64>(px + at), back = sign * xj;
    let s: f64 = 0;
    for (let k: usize = 0; k < at; k += 8) {
      const v = load<f64>(r0 + k);
      s += v * load<f64>(px + k);
      store<f64>(py + k, load<f64>(py + k) + v * back);
    }
    if (sign > 0) s += load<f64>(r0 + at) * xj;
    store<f64>(py + at, s);
  }
}

/** A_jk += f·x_j y_k + g·y_j x_k on the lower triangle (k ≤ j < n). */
export function triangleRankTwo(a: i32, ld: i32, n: i32, x: i32, y: i32, f: f64, g: f64): void {
  const stride = <usize>ld << 3;
  const px = <usize>x << 3, py = <usize>y << 3;
  let r0 = <usize>a << 3, j = 0;
  for (; j + 2 <= n; j += 2, r0 += stride << 1) {
    const r1 = r0 + stride, at = <usize>j << 3;
    const x0 = g * load<f64>(py + at), y0 = f * load<f64>(px + at);
    const x1 = g * load<f64>(py + at, 8), y1 = f * load<f64>(px + at, 8);
    const vx0 = f64x2.splat(x0), vy0 = f64x2.splat(y0), vx1 = f64x2.splat(x1), vy1 = f64x2.splat(y1);
    for (let k: usize = 0; k < at; k += 16) {
      const xk = v128.load(px + k), yk = v128.load(py + k);
      v128.store(r0 + k, f64x2.add(v128.load(r0 + k), f64x2.add(f64x2.mul(vx0, xk), f64x2.mul(vy0, yk))));
      v128.store(r1 + k, f64x2.add(v128.load(r1 + k), f64x2.add(f64x2.mul(vx1, xk), f64x2.mul(vy1, yk))));
    }
    // The square on the diagonal; its upper right corner is written too and never read.
    const xk = v128.load(px + at), yk = v128.load(py + at);
    v128.store(r0 + at, f64x2.add(v128.load(r0 + at), f64x2.add(f64x2.mul(vx0, xk), f64x2.mul(vy0, yk))));
    v128.store(r1 + at, f64x2.add(v128.load(r1 + at), f64x2.add(f64x2.mul(vx1, xk), f64x2.mul(vy1, yk))));
  }
  if (j < n) {
    const at = <usize>j << 3;
    const xj = g * load<f64>(py + at), yj = f * load<f64>(px + at);
    for (let k: usize = 0; k <= at; k += 8) {
      store<f64>(r0 + k, load<f64>(r0 + k) + (xj * load<f64>(px + k) + yj * load<f64>(py + k)));
    }
  }
}

// Implicit QL on a symmetric tridiagonal matrix.

const EPSILON: f64 = 2.220446049250313e-16;
const MAX_STEPS = 80;

/**
 * d: diagonal, becomes the eigenvalues, unordered; e[i]: between i and i+1, destroyed. The rotations go to the n rows
 * (stride ld, `width` numbers) of z, so that rows which start as Qᵀ end as eigenvectors.
 * Returns 0, or 1 if an eigenvalue did not converge.
 */
export function qlSteps(d: i32, e: i32, n: i32, z: i32, ld: i32, width: i32): i32 {
  if (n == 0) return 0;
  const pd = <usize>d << 3, pe = <usize>e << 3;
  store<f64>(pe + (<usize>(n - 1) << 3), 0);
  let scale: f64 = 0;
  for (let i: usize = 0; i < <usize>n << 3; i += 8) scale = max(scale, max(abs(load<f64>(pd + i)), abs(load<f64>(pe + i))));
  if (scale < 1e-290) return 0; // nothing but rounding beside zeros, and the reciprocal would overflow
  // Largest element 1: squares cannot overflow, and what underflows is far below the accuracy.
  scaleBoth(pd, pe, n, 1 / scale);
  for (let l = 0; l < n; l++) {
    for (let step = 0; ; step++) {
      const m = splitAfter(pd, pe, l, n);
      if (m == l) break;
      if (step > MAX_STEPS) return 1;
      sweep(pd, pe, l, m, <usize>z << 3, <usize>ld << 3, <usize>width << 3);
    }
  }
  scaleBoth(pd, pe, n, scale);
  return 0;
}

/**
 * Values only: d becomes the eigenvalues, unordered; e is destroyed. The rotations are taken in squares (Pal, Walker & Kahan;
 * Reinsch 1971, quoted from memory): no root and one division less on the path from one step to the next. Returns 0, or 1 if an
 * eigenvalue did not converge.
 */
export function qlValues(d: i32, e: i32, n: i32): i32 {
  if (n == 0) return 0;
  const pd = <usize>d << 3, pe = <usize>e << 3;
  store<f64>(pe + (<usize>(n - 1) << 3), 0);
  let scale: f64 = 0;
  for (let i: usize = 0; i < <usize>n << 3; i += 8) scale = max(scale, max(abs(load<f64>(pd + i)), abs(load<f64>(pe + i))));
  if (scale < 1e-290) return 0;
  scaleBoth(pd, pe, n, 1 / scale);
  for (let i: usize = 0; i < <usize>n << 3; i += 8) store<f64>(pe + i, load<f64>(pe + i) * load<f64>(pe + i));
  for (let l = 0; l < n; l++) {
    for (let step = 0; ; step++) {
      const m = splitSquares(pd, pe, l, n);
      if (m == l) break;
      if (step > MAX_STEPS) return 1;
      sweepSquares(pd, pe, <usize>l << 3, <usize>m << 3);
    }
  }
  for (let i: usize = 0; i < <usize>n << 3; i += 8) store<f64>(pd + i, load<f64>(pd + i) * scale);
  return 0;
}

/** As splitAfter, on squares. */
// @ts-ignore: decorator
@inline
function splitSquares(pd: usize, pe: usize, l: i32, n: i32): i32 {
  let m = l;
  let here = abs(load<f64>(pd + (<usize>l << 3)));
  for (; m < n - 1; m++) {
    const at = <usize>m << 3;
    const next = abs(load<f64>(pd + at, 8));
    const bound = EPSILON * (here + next + 0.0625);
    if (load<f64>(pe + at) <= bound * bound) break;
    here = next;
  }
  return m;
}

/** One step on rows l…m (byte offsets); e holds squares, none of them zero. */
// @ts-ignore: decorator
@inline
function sweepSquares(pd: usize, pe: usize, l: usize, m: usize): void {
  const beside = sqrt(load<f64>(pe + l)), corner = load<f64>(pd + l);
  const half = (load<f64>(pd + l, 8) - corner) / (2 * beside);
  const root = sqrt(half * half + 1);
  const shift = corner - beside / (half >= 0 ? half + root : half - root);
  let c: f64 = 1, s: f64 = 0;
  let gamma = load<f64>(pd + m) - shift;
  let p = gamma * gamma;
  for (let i = m; i > l; ) {
    i -= 8;
    const square = load<f64>(pe + i), r = p + square;
    store<f64>(pe + i, s * r, 8);
    const before = c, old = gamma, alpha = load<f64>(pd + i);
    const inverse = r / p; // 1/c, beside the divisions for c and s instead of after them
    c = p / r;
    s = square / r;
    gamma = c * (alpha - shift) - s * old;
    store<f64>(pd + i, old + (alpha - gamma), 8);
    p = c != 0 ? gamma * gamma * inverse : before * square;
  }
  store<f64>(pe + l, s * p);
  store<f64>(pd + l, shift + gamma);
  store<f64>(pe + m, 0);
}

function scaleBoth(pd: usize, pe: usize, n: i32, f: f64): void {
  for (let i: usize = 0; i < <usize>n << 3; i += 8) {
    store<f64>(pd + i, load<f64>(pd + i) * f);
    store<f64>(pe + i, load<f64>(pe + i) * f);
  }
}

/** First position from l on whose off-diagonal element is negligible. */
// @ts-ignore: decorator
@inline
function splitAfter(pd: usize, pe: usize, l: i32, n: i32): i32 {
  let m = l;
  let here = abs(load<f64>(pd + (<usize>l << 3)));
  for (; m < n - 1; m++) {
    const at = <usize>m << 3;
    const next = abs(load<f64>(pd + at, 8));
    // The floor is for zero diagonals, where a relative test would never be met.
    if (abs(load<f64>(pe + at)) <= EPSILON * (here + next + 0.0625)) break;
    here = next;
  }
  return m;
}

/** One implicit QL step with Wilkinson's shift on rows l…m. */
// @ts-ignore: decorator
@inline
function sweep(pd: usize, pe: usize, l: i32, m: i32, z: usize, ld: usize, width: usize): void {
  const dl = pd + (<usize>l << 3), el = pe + (<usize>l << 3), em = pe + (<usize>m << 3);
  let g = (load<f64>(dl, 8) - load<f64>(dl)) / (2 * load<f64>(el));
  let r = sqrt(g * g + 1);
  g = load<f64>(pd + (<usize>m << 3)) - load<f64>(dl) + load<f64>(el) / (g >= 0 ? g + r : g - r);
  let s: f64 = 1, c: f64 = 1, p: f64 = 0;
  for (let i = m - 1; i >= l; i--) {
    const at = <usize>i << 3;
    const f = s * load<f64>(pe + at), b = c * load<f64>(pe + at);
    r = sqrt(f * f + g * g);
    store<f64>(pe + at, r, 8);
    if (r == 0) {
      // The matrix fell apart in the middle of the step.
      store<f64>(pd + at, load<f64>(pd + at, 8) - p, 8);
      store<f64>(em, 0);
      return;
    }
    const inverse = 1 / r;
    s = f * inverse;
    c = g * inverse;
    g = load<f64>(pd + at, 8) - p;
    const t = (load<f64>(pd + at) - g) * s + 2 * c * b;
    p = s * t;
    store<f64>(pd + at, g + p, 8);
    g = c * t - b;
    rotate(z + <usize>i * ld, ld, width, c, s);
  }
  store<f64>(dl, load<f64>(dl) - p);
  store<f64>(el, g);
  store<f64>(em, 0);
}

/** Rotates row x and the row after it. */
// @ts-ignore: decorator
@inline
function rotate(x: usize, ld: usize, width: usize, c: f64, s: f64): void {
  const y = x + ld, vc = f64x2.splat(c), vs = f64x2.splat(s), even = width & ~15;
  for (let k: usize = 0; k < even; k += 16) {
    const a = v128.load(x + k), b = v128.load(y + k);
    v128.store(y + k, f64x2.add(f64x2.mul(vs, a), f64x2.mul(vc, b)));
    v128.store(x + k, f64x2.sub(f64x2.mul(vc, a), f64x2.mul(vs, b)));
  }
  if (even < width) {
    const a = load<f64>(x + even), b = load<f64>(y + even);
    store<f64>(y + even, s * a + c * b);
    store<f64>(x + even, c * a - s * b);
  }
}

import { multiply } from './multiply';

/** Complex numbers in two planes; `im` has length 0 when everything is real. */
export interface Planes {
  readonly re: Float64Array;
  readonly im: Float64Array;
}

/** Zeroed planes of `size` numbers. */
export function planes(size: number, complex: boolean): Planes {
  return { re: new Float64Array(size), im: new Float64Array(complex ? size : 0) };
}

/** View of rows from…to (exclusive) of width n. */
export function rowsOf(x: Planes, from: number, to: number, n: number): Planes {
  const cut = (plane: Float64Array) => (plane.length === 0 ? plane : plane.subarray(from * n, to * n));
  return { re: cut(x.re), im: cut(x.im) };
}

/** Overlaps S_ij = ⟨x_i|y_j⟩ of two sets of rows of length n. */
export function overlaps(x: Planes, y: Planes, xs: number, ys: number, n: number): Planes {
  const product = (a: Float64Array, b: Float64Array) => multiply(a, b, xs, n, ys, { transposeB: true });
  const re = product(x.re, y.re);
  if (x.im.length === 0) return { re, im: new Float64Array(0) };
  const im = product(x.re, y.im);
  const ii = product(x.im, y.im);
  const ir = product(x.im, y.re);
  for (let k = 0; k < re.length; k++) {
    re[k] += ii[k];
    im[k] -= ir[k];
  }
  return { re, im };
}

/** Rows Σ_j c_ij x_j with c of count×xs. */
export function combine(c: Planes, x: Planes, count: number, xs: number, n: number): Planes {
  const product = (a: Float64Array, b: Float64Array) => multiply(a, b, count, xs, n);
  const re = product(c.re, x.re);
  if (x.im.length === 0) return { re, im: new Float64Array(0) };
  const im = product(c.re, x.im);
  const ii = product(c.im, x.im);
  const ir = product(c.im, x.re);
  for (let k = 0; k < re.length; k++) {
    re[k] -= ii[k];
    im[k] += ir[k];
  }
  return { re, im };
}

/** 2-norm of one vector. */
export function norm(x: Planes): number {
  let sum = 0;
  for (let k = 0; k < x.re.length; k++) sum += x.re[k] * x.re[k];
  for (let k = 0; k < x.im.length; k++) sum += x.im[k] * x.im[k];
  return Math.sqrt(sum);
}

/** x ← f x. */
export function scaleInPlace(x: Planes, f: number): void {
  for (let k = 0; k < x.re.length; k++) x.re[k] *= f;
  for (let k = 0; k < x.im.length; k++) x.im[k] *= f;
}

/** x ← x − y. */
export function subtractInPlace(x: Planes, y: Planes): void {
  for (let k = 0; k < x.re.length; k++) x.re[k] -= y.re[k];
  for (let k = 0; k < x.im.length; k++) x.im[k] -= y.im[k];
}

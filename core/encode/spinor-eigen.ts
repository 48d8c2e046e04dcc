import { type ComplexMatrix, type HermitianEigen, hermitianEigen } from '../linalg';

/** Weights and unit vectors of rows: n complex numbers a row. */
export interface SpinorVectors {
  readonly n: number;
  readonly values: Float64Array;
  readonly re: Float64Array;
  readonly im: Float64Array;
}

/** Eigenvalues closer than this part of the largest may have vectors of one another. */
const CLUSTER = 1e-8;

/**
 * The `count` heaviest eigenvectors whose time-reversed partners iσ_y w* make up the rest of the matrix: one of each
 * Kramers pair where it is even, one of each ± pair where it is odd. What an eigenproblem returns for a degenerate
 * level is any basis of it; here partners are orthogonal to all rows to rounding.
 */
export function partnerRows(matrix: ComplexMatrix, odd: boolean, count: number): SpinorVectors {
  const eigen = hermitianEigen(matrix);
  const chosen = odd ? upperHalf(eigen) : kramersPairs(eigen);
  chosen.sort((a, b) => Math.abs(b.value) - Math.abs(a.value));
  return gathered(eigen.n, chosen.slice(0, count));
}

/** The `count` heaviest eigenvectors, each for itself: half of its eigenvalue is the weight of 2n − 1. */
export function singleRows(matrix: ComplexMatrix, count: number): SpinorVectors {
  const eigen = hermitianEigen(matrix);
  const chosen = Array.from(eigen.values, (value, i) => ({ ...vectorOf(eigen, i), value: value / 2 }));
  chosen.sort((a, b) => Math.abs(b.value) - Math.abs(a.value));
  return gathered(eigen.n, chosen.slice(0, count));
}

interface Vector {
  readonly re: Float64Array;
  readonly im: Float64Array;
}

interface Row extends Vector {
  readonly value: number;
}

const vectorOf = ({ n, re, im }: HermitianEigen, i: number): Vector => ({
  re: re.slice(i * n, (i + 1) * n),
  im: im.slice(i * n, (i + 1) * n),
});

/** Positive eigenvalues: the partners have the negative ones. */
function upperHalf(eigen: HermitianEigen): Row[] {
  const { n, values } = eigen;
  return Array.from({ length: n / 2 }, (_, j) => {
    const i = n - 1 - j;
    return { ...vectorOf(eigen, i), value: values[i]! };
  });
}

function kramersPairs(eigen: HermitianEigen): Row[] {
  const { n, values } = eigen;
  const largest = Math.max(Math.abs(values[0]!), Math.abs(values[n - 1]!));
  const rows: Row[] = [];
  const found: Vector[] = [];
  for (let from = 0; from < n; ) {
    let to = from + 1;
    while (to < n && (values[to]! - values[to - 1]! <= CLUSTER * largest || (to - from) % 2 === 1)) to++;
    // Pivoting: of the cluster's vectors the one with the most left outside the pairs found so far.
    for (let pair = 0; pair < (to - from) / 2; pair++) {
      let best: Vector | null = null;
      let most = 0;
      for (let i = from; i < to; i++) {
        const rest = vectorOf(eigen, i);
        // Twice, for the first pass leaves rounding behind where little is left.
        for (let pass = 0; pass < 2; pass++) {
          for (const vector of found) subtractProjection(rest, vector);
        }
        const left = squareOf(rest);
        if (left > most) {
          most = left;
          best = rest;
        }
      }
      const row = normalised(eigen, best!, most);
      rows.push(row);
      found.push(row, partner(row));
    }
    from = to;
  }
  return rows;
}

/** The unit vector, and its Rayleigh quotient as the value. */
function normalised(eigen: HermitianEigen, { re, im }: Vector, square: number): Row {
  const scale = 1 / Math.sqrt(square);
  const row = { re: re.map((x) => scale * x), im: im.map((x) => scale * x) };
  let value = 0;
  for (let i = 0; i < eigen.n; i++) {
    const [x, y] = overlap(vectorOf(eigen, i), row);
    value += eigen.values[i]! * (x * x + y * y);
  }
  return { ...row, value };
}

/** iσ_y w*: w_p↑ ← w*_p↓, w_p↓ ← −w*_p↑. */
export function partner({ re, im }: Vector): Vector {
  const out = { re: new Float64Array(re.length), im: new Float64Array(re.length) };
  for (let p = 0; p < re.length; p += 2) {
    out.re[p] = re[p + 1]!;
    out.im[p] = -im[p + 1]!;
    out.re[p + 1] = -re[p]!;
    out.im[p + 1] = im[p]!;
  }
  return out;
}

/** ⟨a|b⟩. */
function overlap(a: Vector, b: Vector): [number, number] {
  let x = 0;
  let y = 0;
  for (let i = 0; i < a.re.length; i++) {
    x += a.re[i]! * b.re[i]! + a.im[i]! * b.im[i]!;
    y += a.re[i]! * b.im[i]! - a.im[i]! * b.re[i]!;
  }
  return [x, y];
}

function subtractProjection(target: Vector, unit: Vector): void {
  const [x, y] = overlap(unit, target);
  for (let i = 0; i < unit.re.length; i++) {
    target.re[i]! -= x * unit.re[i]! - y * unit.im[i]!;
    target.im[i]! -= x * unit.im[i]! + y * unit.re[i]!;
  }
}

function squareOf({ re, im }: Vector): number {
  let sum = 0;
  for (let i = 0; i < re.length; i++) sum += re[i]! ** 2 + im[i]! ** 2;
  return sum;
}

function gathered(n: number, rows: readonly Row[]): SpinorVectors {
  const re = new Float64Array(rows.length * n);
  const im = new Float64Array(rows.length * n);
  for (const [i, row] of rows.entries()) {
    re.set(row.re, i * n);
    im.set(row.im, i * n);
  }
  return { n, values: Float64Array.from(rows, (row) => row.value), re, im };
}

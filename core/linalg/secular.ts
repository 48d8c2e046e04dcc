/**
 * Roots of the secular equation 1/ρ + Σ_i z_i²/(d_i − λ) = 0 for d strictly ascending, z_i ≠ 0, ρ > 0: the
 * eigenvalues of diag(d) + ρ z zᵀ. Root j lies between d_j and d_{j+1} (the last one below d_k + ρ‖z‖²) and is
 * returned as the nearer pole and the distance from it, since λ itself would lose the digits of the distance.
 */
export interface SecularRoots {
  readonly pole: Int32Array;
  readonly offset: Float64Array;
}

const MAX_STEPS = 100;

/** Finds roots from…to (exclusive) into `roots`. */
export function solveSecular(
  roots: SecularRoots,
  d: Float64Array,
  z: Float64Array,
  k: number,
  rho: number,
  from: number,
  to: number,
): void {
  for (let j = from; j < to; j++) {
    if (j < k - 1) innerRoot(roots, d, z, k, rho, j);
    else lastRoot(roots, d, z, k, rho);
  }
}

/**
 * Two-pole interpolation: the sums over the poles up to j and above j are each replaced by one pole that has their
 * value and slope at the current point ("middle way" of Li, LAPACK Working Note 89, quoted from memory). A bracket keeps it
 * safe.
 */
function innerRoot(
  roots: SecularRoots,
  d: Float64Array,
  z: Float64Array,
  k: number,
  rho: number,
  j: number,
): void {
  const gap = d[j + 1] - d[j];
  let middle = 1 / rho;
  for (let i = 0; i < k; i++) middle += (z[i] * z[i]) / (d[i] - d[j] - gap / 2);
  const base = middle >= 0 ? j : j + 1;
  const origin = d[base];
  let low = middle >= 0 ? 0 : -gap / 2;
  let high = middle >= 0 ? gap / 2 : 0;
  const left = d[j] - origin;
  const right = d[j + 1] - origin;
  let x = firstGuess(middle, z[j] * z[j], z[j + 1] * z[j + 1], gap, base === j);
  if (!(x > low && x < high)) x = (low + high) / 2;
  for (let step = 0; step < MAX_STEPS; step++) {
    let below = 0;
    let belowSlope = 0;
    for (let i = 0; i <= j; i++) {
      const t = z[i] / (d[i] - origin - x);
      below += z[i] * t;
      belowSlope += t * t;
    }
    let above = 0;
    let aboveSlope = 0;
    for (let i = j + 1; i < k; i++) {
      const t = z[i] / (d[i] - origin - x);
      above += z[i] * t;
      aboveSlope += t * t;
    }
    const w = 1 / rho + below + above;
    const slope = belowSlope + aboveSlope;
    if (Math.abs(w) <= Number.EPSILON * (8 * (above - below) + 1 / rho + Math.abs(x) * slope)) break;
    if (w < 0) low = x;
    else high = x;
    const p = left - x;
    const q = right - x;
    const c = w - p * belowSlope - q * aboveSlope;
    const a = (p + q) * w - p * q * slope;
    const b = p * q * w;
    const root = Math.sqrt(Math.max(0, a * a - 4 * b * c));
    let move = a <= 0 ? (a - root) / (2 * c) : (2 * b) / (a + root);
    if (!(w * move < 0)) move = -w / slope;
    let next = x + move;
    if (!(next > low && next < high)) next = (low + high) / 2;
    if (Math.abs(next - x) <= Number.EPSILON * Math.abs(next)) {
      x = next;
      break;
    }
    x = next;
  }
  roots.pole[j] = base;
  roots.offset[j] = x;
}

/** Solves for the two neighbouring poles with the others frozen at the middle of the interval. */
function firstGuess(middle: number, zj: number, zk: number, gap: number, fromLeft: boolean): number {
  // middle = c − zj/(gap/2) + zk/(gap/2)
  const c = middle + (2 * (zj - zk)) / gap;
  if (fromLeft) {
    // c − zj/x + zk/(gap − x) = 0
    const a = c * gap + zj + zk;
    const b = zj * gap;
    const root = Math.sqrt(Math.max(0, a * a - 4 * b * c));
    return a > 0 ? (2 * b) / (a + root) : (a - root) / (2 * c);
  }
  // c − zj/(gap + x) − zk/x = 0, x < 0
  const a = c * gap - zj - zk;
  const b = -zk * gap;
  const root = Math.sqrt(Math.max(0, a * a - 4 * b * c));
  return a < 0 ? (2 * b) / (root - a) : -(a + root) / (2 * c);
}

/** The largest root: one pole with the function's value and slope, from the right of all poles. */
function lastRoot(roots: SecularRoots, d: Float64Array, z: Float64Array, k: number, rho: number): void {
  const origin = d[k - 1];
  let squares = 0;
  for (let i = 0; i < k; i++) squares += z[i] * z[i];
  let low = 0;
  let high = rho * squares * (1 + 4 * Number.EPSILON);
  let x = rho * z[k - 1] * z[k - 1];
  if (!(x > low && x < high)) x = high / 2;
  for (let step = 0; step < MAX_STEPS; step++) {
    let sum = 0;
    let slope = 0;
    for (let i = 0; i < k; i++) {
      const t = z[i] / (d[i] - origin - x);
      sum += z[i] * t;
      slope += t * t;
    }
    const w = 1 / rho + sum;
    if (Math.abs(w) <= Number.EPSILON * (8 * Math.abs(sum) + 1 / rho + x * slope)) break;
    if (w < 0) low = x;
    else high = x;
    let next = (slope * x * x) / (w + slope * x);
    if (!(next > low && next < high)) next = (low + high) / 2;
    if (Math.abs(next - x) <= Number.EPSILON * next) {
      x = next;
      break;
    }
    x = next;
  }
  roots.pole[k - 1] = k - 1;
  roots.offset[k - 1] = x;
}

import { planeOf, type SpatialHamiltonian, squareOfTriangle } from '../../hamiltonian';
import { numSymmetricPairs, symmetricPair } from '../../integrals/integral-set';
import type { JobContext } from '../../job';
import { multiply } from '../../linalg';

/** Rows of pairs between two checkpoints. */
const ROWS_AT_ONCE = 64;

/** Spin-free part of a Hamiltonian over N real orbitals, stored form, hartree. */
export interface SpinFree {
  readonly n: number;
  /** h⁰, n×n. */
  readonly h: Float64Array;
  /** (pq|rs), npair × npair. */
  readonly g: Float64Array;
}

export interface NormValue {
  /** Hartree. */
  readonly lambda: number;
  /** ∂λ/∂X of h → e^X h e^{−X} and likewise g, at X = 0: n×n, antisymmetric. Absent where not asked for. */
  readonly gradient: Float64Array | null;
}

/** The charge part alone; null where the Hamiltonian has no two-electron charge part. */
export function spinFreePart(hamiltonian: SpatialHamiltonian): SpinFree | null {
  const { orbitals: n, g } = hamiltonian;
  if (!g.charge) return null;
  return { n, h: Float64Array.from(planeOf(hamiltonian.h, 0)), g: squareOfTriangle(n, g.charge) };
}

/**
 * One-norm of the Majorana strings of a spin-free Hamiltonian, equal strings merged, without the identity:
 *
 *     Σ_pq |h_pq + Σ_r (pq|rr) − ½ Σ_r (pr|rq)| + ½ Σ_{p>r, s>q} |(pq|rs) − (ps|rq)| + ¼ Σ_pqrs |(pq|rs)|
 *
 * (E. Koridon et al., Phys. Rev. Research 3, 033127 (2021)), with |x| replaced by √(x² + ε²) − ε.
 *
 * @param epsilon - hartree, ≥ 0; 0 gives the norm itself, whose gradient takes sign(0) = 0.
 */
export async function majoranaNorm(
  { n, h, g }: SpinFree,
  epsilon: number,
  withGradient: boolean,
  context: JobContext,
): Promise<NormValue> {
  const npair = numSymmetricPairs(n);
  const e2 = epsilon * epsilon;
  const size = (x: number): number => Math.sqrt(x * x + e2) - epsilon;
  const slope = (x: number): number => (x === 0 ? 0 : x / Math.sqrt(x * x + e2));
  const pair = pairTable(n);
  // Derivatives with respect to g_PQ, both triangles independent.
  const d = withGradient ? new Float64Array(npair * npair) : null;
  let lambda = 0;
  const one = oneBodyPlane(n, h, g, pair);
  const slopes = new Float64Array(n * n);
  for (let i = 0; i < n * n; i++) {
    lambda += size(one[i]!);
    slopes[i] = slope(one[i]!);
  }
  const multiplicity = multiplicities(n, pair);
  for (let a = 0, i = 0; a < npair; a++) {
    if (a % ROWS_AT_ONCE === 0) await context.checkpoint();
    for (let b = 0; b < npair; b++, i++) {
      const weight = 0.25 * multiplicity[a]! * multiplicity[b]!;
      lambda += weight * size(g[i]!);
      if (d) d[i] = weight * slope(g[i]!);
    }
  }
  for (let p = 0; p < n; p++) {
    await context.checkpoint();
    for (let r = 0; r < p; r++) {
      for (let s = 0; s < n; s++) {
        const ps = pair[p * n + s]! * npair;
        const rs = pair[r * n + s]!;
        for (let q = 0; q < s; q++) {
          const direct = pair[p * n + q]! * npair + rs;
          const crossed = ps + pair[r * n + q]!;
          const x = g[direct]! - g[crossed]!;
          lambda += 0.5 * size(x);
          if (!d) continue;
          const t = 0.5 * slope(x);
          d[direct]! += t;
          d[crossed]! -= t;
        }
      }
    }
  }
  if (!d) return { lambda, gradient: null };
  for (let p = 0; p < n; p++) {
    for (let q = 0; q < n; q++) {
      const t = slopes[p * n + q]!;
      for (let r = 0; r < n; r++) {
        d[pair[p * n + q]! * npair + pair[r * n + r]!]! += t;
        d[pair[p * n + r]! * npair + pair[r * n + q]!]! -= 0.5 * t;
      }
    }
  }
  return { lambda, gradient: await generatorGradient(n, h, g, slopes, d, pair, multiplicity, context) };
}

/**
 * −Σ_p (pp|pp) and its gradient: orbitals of largest self-repulsion are localised ones (C. Edmiston and K. Ruedenberg,
 * Rev. Mod. Phys. 35, 457 (1963)).
 */
export async function selfRepulsion({ n, h, g }: SpinFree, context: JobContext): Promise<NormValue> {
  const npair = numSymmetricPairs(n);
  const pair = pairTable(n);
  const d = new Float64Array(npair * npair);
  let lambda = 0;
  for (let p = 0; p < n; p++) {
    const at = pair[p * n + p]! * (npair + 1);
    lambda -= g[at]!;
    d[at] = -1;
  }
  const multiplicity = multiplicities(n, pair);
  return {
    lambda,
    gradient: await generatorGradient(n, h, g, new Float64Array(n * n), d, pair, multiplicity, context),
  };
}

/** Number of the symmetric pair of p and q at p·n + q. */
function pairTable(n: number): Int32Array {
  return Int32Array.from({ length: n * n }, (_, i) => symmetricPair(Math.floor(i / n), i % n));
}

/** How many of pq, qp there are. */
function multiplicities(n: number, pair: Int32Array): Float64Array {
  const out = new Float64Array(numSymmetricPairs(n)).fill(2);
  for (let p = 0; p < n; p++) out[pair[p * n + p]!] = 1;
  return out;
}

/** h_pq + Σ_r (pq|rr) − ½ Σ_r (pr|rq). */
function oneBodyPlane(n: number, h: Float64Array, g: Float64Array, pair: Int32Array): Float64Array {
  const npair = numSymmetricPairs(n);
  const out = Float64Array.from(h);
  for (let p = 0; p < n; p++) {
    for (let q = 0; q < n; q++) {
      let sum = 0;
      const row = pair[p * n + q]! * npair;
      for (let r = 0; r < n; r++) {
        sum += g[row + pair[r * n + r]!]! - 0.5 * g[pair[p * n + r]! * npair + pair[r * n + q]!]!;
      }
      out[p * n + q]! += sum;
    }
  }
  return out;
}

/**
 * With dh = Xh − hX and the four index changes of g, all alike under its symmetries:
 * dλ = Σ_pa Γ_pa X_pa, Γ = 2 F h + 4 Σ_q,R (D_[pq]R / m_[pq]) g_[aq]R, D symmetrised. The gradient is Γ − Γᵀ.
 */
async function generatorGradient(
  n: number,
  h: Float64Array,
  g: Float64Array,
  f: Float64Array,
  d: Float64Array,
  pair: Int32Array,
  multiplicity: Float64Array,
  context: JobContext,
): Promise<Float64Array> {
  const npair = numSymmetricPairs(n);
  for (let a = 0; a < npair; a++) {
    if (a % ROWS_AT_ONCE === 0) await context.checkpoint();
    for (let b = 0; b < a; b++) {
      const mean = 0.5 * (d[a * npair + b]! + d[b * npair + a]!);
      d[a * npair + b] = mean;
      d[b * npair + a] = mean;
    }
  }
  const gamma = multiply(f, h, n, n, n).map((x) => 2 * x);
  const left = new Float64Array(n * npair);
  const right = new Float64Array(n * npair);
  for (let q = 0; q < n; q++) {
    await context.checkpoint();
    for (let p = 0; p < n; p++) {
      const from = pair[p * n + q]!;
      const scale = 4 / multiplicity[from]!;
      for (let i = 0; i < npair; i++) left[p * npair + i] = scale * d[from * npair + i]!;
      right.set(g.subarray(from * npair, (from + 1) * npair), p * npair);
    }
    const part = multiply(left, right, n, npair, n, { transposeB: true });
    for (let i = 0; i < n * n; i++) gamma[i]! += part[i]!;
  }
  const gradient = new Float64Array(n * n);
  for (let p = 0; p < n; p++) {
    for (let a = 0; a < n; a++) gradient[p * n + a] = gamma[p * n + a]! - gamma[a * n + p]!;
  }
  return gradient;
}

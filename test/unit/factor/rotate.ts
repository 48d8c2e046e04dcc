import { fromStoredForm, type SpatialHamiltonian } from '../../../core/hamiltonian';
import {
  numAntisymmetricPairs,
  numSymmetricPairs,
  pairsTriangleLength,
  symmetricPair,
} from '../../../core/integrals/integral-set';
import { uniform } from '../hamiltonian/random-hamiltonian';

export type Matrix = readonly (readonly number[])[];

/** Product of rotations by random angles in the given coordinate planes of n dimensions. */
export function rotation(n: number, planes: readonly (readonly [number, number])[], seed: number): Matrix {
  const random = uniform(seed);
  const r = Array.from({ length: n }, (_, i) =>
    Array.from({ length: n }, (_, j): number => (i === j ? 1 : 0)),
  );
  for (const [a, b] of planes) {
    const angle = Math.PI * random();
    const [c, s] = [Math.cos(angle), Math.sin(angle)];
    for (const row of r) [row[a], row[b]] = [c * row[a]! - s * row[b]!, s * row[a]! + c * row[b]!];
  }
  return r;
}

/** T_p'q'… = Σ U_p'p U_q'q … T_pq…, all indices. */
function transform(tensor: Float64Array, n: number, rank: number, u: Matrix): Float64Array {
  let current = tensor;
  for (let d = 0; d < rank; d++) {
    const stride = n ** (rank - 1 - d);
    const next = new Float64Array(current.length);
    for (let i = 0; i < next.length; i++) {
      const x = Math.floor(i / stride) % n;
      for (let y = 0; y < n; y++) next[i]! += u[x]![y]! * current[i + (y - x) * stride]!;
    }
    current = next;
  }
  return current;
}

/** Components k' = Σ_k S_k'k (component k). */
function mixComponents(parts: readonly Float64Array[], s: Matrix): Float64Array[] {
  return s.map((row) => parts[0]!.map((_, i) => row.reduce((sum, x, k) => sum + x * parts[k]![i]!, 0)));
}

/**
 * The Hamiltonian over orbitals φ'_p = Σ_q U_pq φ_q in a spin frame turned by S: the same operator. Charge and one
 * spin–orbit array with a multiple as other-orbit part only.
 */
export function rotated(h: SpatialHamiltonian, u: Matrix, s: Matrix): SpatialHamiltonian {
  const n = h.orbitals;
  const nanti = numAntisymmetricPairs(n);
  const npair = numSymmetricPairs(n);
  const index = (p: number, q: number, r: number, t: number) => ((p * n + q) * n + r) * n + t;
  const plane = (mu: number) => transform(h.h.planes.subarray(mu * n * n, (mu + 1) * n * n), n, 2, u);
  const planes = new Float64Array(4 * n * n);
  planes.set(plane(0));
  for (const [k, values] of mixComponents([plane(1), plane(2), plane(3)], s).entries()) {
    planes.set(values, (k + 1) * n * n);
  }
  const full = (value: (p: number, q: number, r: number, t: number) => number) => {
    const out = new Float64Array(n ** 4);
    for (let p = 0, i = 0; p < n; p++) {
      for (let q = 0; q < n; q++) {
        for (let r = 0; r < n; r++) for (let t = 0; t < n; t++) out[i++] = value(p, q, r, t);
      }
    }
    return transform(out, n, 4, u);
  };
  const { charge, spinOrbit } = h.g;
  const c = full((p, q, r, t) => charge![symmetricPair(symmetricPair(p, q), symmetricPair(r, t))]!);
  const turnedCharge = new Float64Array(pairsTriangleLength(n));
  const components = [0, 1, 2].map((k) =>
    full((p, q, r, t) => {
      if (p === q) return 0;
      const [a, b] = p > q ? [p, q] : [q, p];
      const row = k * nanti + (a * (a - 1)) / 2 + b;
      return (p > q ? 1 : -1) * spinOrbit!.same[row * npair + symmetricPair(r, t)]!;
    }),
  );
  const w = mixComponents(components, s);
  const same = new Float64Array(3 * nanti * npair);
  for (let p = 0; p < n; p++) {
    for (let q = 0; q <= p; q++) {
      for (let r = 0; r < n; r++) {
        for (let t = 0; t <= r; t++) {
          const i = index(p, q, r, t);
          turnedCharge[symmetricPair(symmetricPair(p, q), symmetricPair(r, t))] = c[i]!;
          if (p === q) continue;
          const pair = (p * (p - 1)) / 2 + q;
          for (let k = 0; k < 3; k++) same[(k * nanti + pair) * npair + symmetricPair(r, t)] = w[k]![i]!;
        }
      }
    }
  }
  const g = { charge: turnedCharge, spinOrbit: { same, other: spinOrbit!.other }, spinSpin: null };
  return fromStoredForm({ ...h, h: { ...h.h, planes }, g });
}

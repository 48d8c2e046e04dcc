import {
  type Mu,
  PAULI_ENTRIES,
  type SpatialHamiltonian,
  tensorElement,
  toSpinOrbitals,
} from '../../hamiltonian';
import type { JobContext } from '../../job';

/*
 * The Majorana strings that a symmetry shift touches. Over spin orbitals P = (p, σ), equal strings merged,
 *
 *     H = … + Σ_PQ κ_PQ b_PQ + Σ_{P≠Q} Σ_R V_PQ,R b_PQ b_RR / (1 + δ_PQ),    V_PQ,R = (PQ|RR) − (PR|RQ),
 *
 * b = a†_P a_Q without its identity part: b_RR is ½iγ_R0γ_R1, and the real and the imaginary part of κ_PQ + κ_QP* weigh
 * two strings of ½ each. With ξ (N̂ − η) added, V_PQ,R + ξ_PQ for P ≠ Q, V_PP,R + ξ_PP + ξ_RR, and
 * κ_PQ + (N − η) ξ_PQ + δ_PQ (Σ_r ξ_rr + scalar); no other string changes. For spin-free H the weights are those of
 * E. Koridon et al., Phys. Rev. Research 3, 033127 (2021).
 */

/** weight · |value + x|, one coordinate x of ξ. */
export interface Term {
  readonly value: number;
  readonly weight: number;
}

/** Everything that ξ^μ_pq, p > q, changes; the coordinate is the lower-triangle element of the plane. */
export interface OffDiagonal {
  readonly mu: Mu;
  readonly p: number;
  readonly q: number;
  readonly terms: readonly Term[];
}

/** Everything that the diagonal of ξ⁰ and the scalar change. */
export interface Diagonal {
  readonly n: number;
  /** N − η. */
  readonly excess: number;
  /** weight · |value + x_p + x_r|, p ≤ r. */
  readonly pairs: readonly (Term & { readonly p: number; readonly r: number })[];
  /** weight · |value + (N − η) x_p + Σ_r x_r + scalar|. */
  readonly single: readonly (Term & { readonly p: number })[];
}

type Complex = readonly [re: number, im: number];

/** All strings that a shift touches, O(N³) of them. */
export async function touchedStrings(h: SpatialHamiltonian, ctx: JobContext) {
  const n = h.orbitals;
  const kappa = mergedOneBody(h);
  const excess = n - h.electrons;
  const offDiagonal: OffDiagonal[] = [];
  const pairs: (Term & { p: number; r: number })[] = [];
  const single: (Term & { p: number })[] = [];
  for (let p = 0; p < n; p++) {
    ctx.report('strings that a shift touches', p, n);
    for (let q = 0; q < p; q++) {
      await ctx.checkpoint();
      offDiagonal.push(...offDiagonalTerms(h, kappa, excess, p, q));
    }
    for (let r = p; r < n; r++) {
      const v = antisymmetrised(h, p, p, r);
      for (let s = 0; s < 2; s++) {
        for (let t = 0; t < 2; t++) {
          if (p === r && s >= t) continue;
          pairs.push({ p, r, value: v(s, s, t)[0], weight: 0.25 });
        }
      }
    }
    for (const P of [2 * p, 2 * p + 1]) single.push({ p, value: kappa.re[P * 2 * n + P]!, weight: 0.5 });
  }
  ctx.report('strings that a shift touches', n, n);
  const diagonal: Diagonal = { n, excess, pairs, single };
  return { offDiagonal, diagonal };
}

/** Which spins P = (p, σ), Q = (q, τ) a component joins, its part of the element, and its sign there. */
const PLACES: readonly (readonly (readonly [s: number, t: number, part: 0 | 1, sign: 1 | -1])[])[] = [
  [
    [0, 0, 0, 1],
    [1, 1, 0, 1],
  ],
  [
    [0, 1, 1, 1],
    [1, 0, 1, 1],
  ],
  // iA·(−i) = A.
  [
    [0, 1, 0, 1],
    [1, 0, 0, -1],
  ],
  [
    [0, 0, 1, 1],
    [1, 1, 1, -1],
  ],
];

function offDiagonalTerms(
  h: SpatialHamiltonian,
  kappa: { readonly re: Float64Array; readonly im: Float64Array },
  excess: number,
  p: number,
  q: number,
): OffDiagonal[] {
  const n = h.orbitals;
  const terms: Term[][] = [[], [], [], []];
  for (let r = 0; r < n; r++) {
    const v = antisymmetrised(h, p, q, r);
    for (const [mu, places] of PLACES.entries()) {
      for (const [s, t, part, sign] of places) {
        for (let u = 0; u < 2; u++) {
          if ((r === p && u === s) || (r === q && u === t)) continue;
          terms[mu]!.push({ value: sign * v(s, t, u)[part], weight: 0.5 });
        }
      }
    }
  }
  return PLACES.map((places, mu): OffDiagonal => {
    if (excess !== 0) {
      for (const [s, t, part, sign] of places) {
        const at = (2 * p + s) * 2 * n + 2 * q + t;
        const element = (part === 0 ? kappa.re : kappa.im)[at]!;
        // |κ + (N − η) x| = |N − η| · |κ/(N − η) + x|
        terms[mu]!.push({ value: (sign * element) / excess, weight: Math.abs(excess) });
      }
    }
    return { mu: mu as Mu, p, q, terms: terms[mu]! };
  });
}

/** V_PQ,R of orbitals p, q, r as a function of the spins of P, Q, R. */
function antisymmetrised(h: SpatialHamiltonian, p: number, q: number, r: number) {
  const n = h.orbitals;
  const table = (a: number, b: number, c: number, d: number) =>
    ([0, 1, 2, 3] as const).map((mu) =>
      ([0, 1, 2, 3] as const).map((nu) => tensorElement(h.g, n, mu, nu, a, b, c, d)),
    );
  const direct = table(p, q, r, r);
  const exchange = table(p, r, r, q);
  return (s: number, t: number, u: number): Complex => {
    const [a, b] = spinSum(direct, s, t, u, u);
    const [c, d] = spinSum(exchange, s, u, u, t);
    return [a - c, b - d];
  };
}

/** Σ_μν g^μν σ^μ_ab σ^ν_cd. */
function spinSum(g: readonly (readonly Complex[])[], a: number, b: number, c: number, d: number): Complex {
  let re = 0;
  let im = 0;
  for (const [mu, first] of PAULI_ENTRIES.entries()) {
    const left = first.find(({ row, column }) => row === a && column === b);
    if (!left) continue;
    for (const [nu, second] of PAULI_ENTRIES.entries()) {
      const right = second.find(({ row, column }) => row === c && column === d);
      if (!right) continue;
      const [sr, si] = [left.re * right.re - left.im * right.im, left.re * right.im + left.im * right.re];
      const [gr, gi] = g[mu]![nu]!;
      re += sr * gr - si * gi;
      im += sr * gi + si * gr;
    }
  }
  return [re, im];
}

/** κ^μ_pq = k^μ_pq + Σ_r g^{μ0}_pqrr over spin orbitals: products of one-body strings without the identity leave it. */
function mergedOneBody(h: SpatialHamiltonian) {
  const n = h.orbitals;
  const planes = Float64Array.from(h.k.planes);
  for (const mu of [0, 1, 2, 3] as const) {
    for (let p = 0; p < n; p++) {
      for (let q = 0; q < n; q++) {
        for (let r = 0; r < n; r++) {
          const [re, im] = tensorElement(h.g, n, mu, 0, p, q, r, r);
          planes[(mu * n + p) * n + q]! += mu === 0 ? re : im;
        }
      }
    }
  }
  return toSpinOrbitals({ sector: 'even', n, planes });
}

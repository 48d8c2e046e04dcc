import type { TripletItem, TripletProgram, TripletRow, VectorProducts } from '../../../core/encode/program';
import type { Mu } from '../../../core/hamiltonian/operators';

/**
 * Dense operators on the Fock space of a few modes, written from the definitions (Jordan–Wigner, orbital-major),
 * as the oracle for circuits. Complex square matrices, row-major re and im.
 */
export interface Dense {
  readonly n: number;
  readonly re: Float64Array;
  readonly im: Float64Array;
}

export const zeros = (n: number): Dense => ({
  n,
  re: new Float64Array(n * n),
  im: new Float64Array(n * n),
});

export function addScaled(target: Dense, a: Dense, re: number, im = 0): void {
  for (let i = 0; i < a.re.length; i++) {
    target.re[i]! += re * a.re[i]! - im * a.im[i]!;
    target.im[i]! += re * a.im[i]! + im * a.re[i]!;
  }
}

export function times(a: Dense, b: Dense): Dense {
  const out = zeros(a.n);
  for (let i = 0; i < a.n; i++) {
    for (let k = 0; k < a.n; k++) {
      const [x, y] = [a.re[i * a.n + k]!, a.im[i * a.n + k]!];
      if (x === 0 && y === 0) continue;
      for (let j = 0; j < a.n; j++) {
        out.re[i * a.n + j]! += x * b.re[k * a.n + j]! - y * b.im[k * a.n + j]!;
        out.im[i * a.n + j]! += x * b.im[k * a.n + j]! + y * b.re[k * a.n + j]!;
      }
    }
  }
  return out;
}

export function dagger(a: Dense): Dense {
  const out = zeros(a.n);
  for (let i = 0; i < a.n; i++) {
    for (let j = 0; j < a.n; j++) {
      out.re[j * a.n + i] = a.re[i * a.n + j]!;
      out.im[j * a.n + i] = -a.im[i * a.n + j]!;
    }
  }
  return out;
}

/** a_m: annihilates mode m; basis state b has mode m full where bit m is set. */
export function annihilator(modes: number, m: number): Dense {
  const out = zeros(2 ** modes);
  for (let b = 0; b < out.n; b++) {
    if (((b >> m) & 1) === 0) continue;
    let sign = 1;
    for (let k = 0; k < m; k++) if ((b >> k) & 1) sign = -sign;
    out.re[(b ^ (1 << m)) * out.n + b] = sign;
  }
  return out;
}

/** γ_{m,0} = a + a†, γ_{m,1} = −i(a − a†). */
export function majorana(modes: number, m: number, kind: number): Dense {
  const a = annihilator(modes, m);
  const out = zeros(a.n);
  addScaled(out, a, kind === 0 ? 1 : 0, kind === 0 ? 0 : -1);
  addScaled(out, dagger(a), kind === 0 ? 1 : 0, kind === 0 ? 0 : 1);
  return out;
}

const PAULI: readonly (readonly [number, number][])[] = [
  [
    [1, 0],
    [0, 0],
    [0, 0],
    [1, 0],
  ],
  [
    [0, 0],
    [1, 0],
    [1, 0],
    [0, 0],
  ],
  [
    [0, 0],
    [0, -1],
    [0, 1],
    [0, 0],
  ],
  [
    [1, 0],
    [0, 0],
    [0, 0],
    [-1, 0],
  ],
];

/** T^μ_pq = Σ_στ (σ^μ)_στ a†_pσ a_qτ. */
export function triplet(orbitals: number, mu: Mu, p: number, q: number): Dense {
  const modes = 2 * orbitals;
  const out = zeros(2 ** modes);
  for (const s of [0, 1]) {
    for (const t of [0, 1]) {
      const [re, im] = PAULI[mu]![2 * s + t]!;
      if (re === 0 && im === 0) continue;
      addScaled(out, times(dagger(annihilator(modes, 2 * p + s)), annihilator(modes, 2 * q + t)), re, im);
    }
  }
  return out;
}

/**
 * The operator of one row face, straight from its meaning and not from Majorana products: S rows
 * T^μ(u) − δ_μ0, A rows ½ O^μ(u, v), O^μ = i Σ (u_p v_q − v_p u_q) T^μ_pq. Where rounding has left u and v not
 * quite orthogonal, the Majorana products of an A row of charge hold the further scalar i u·v.
 */
export function rowOperator(orbitals: number, row: TripletRow, face: number): Dense {
  const out = zeros(4 ** orbitals);
  const { mu, sign } = row.faces[face]!;
  for (let p = 0; p < orbitals; p++) {
    for (let q = 0; q < orbitals; q++) {
      const t = triplet(orbitals, mu, p, q);
      if (row.kind === 'S') addScaled(out, t, sign * row.u[p]! * row.u[q]!);
      else addScaled(out, t, 0, (sign / 2) * (row.u[p]! * row.v[q]! - row.v[p]! * row.u[q]!));
    }
  }
  if (row.kind === 'A' && mu === 0) {
    const overlap = row.u.reduce((sum, x, p) => sum + x * row.v[p]!, 0);
    for (let i = 0; i < out.n; i++) out.im[i * out.n + i]! += sign * overlap;
  }
  if (row.kind === 'S' && mu === 0) for (let i = 0; i < out.n; i++) out.re[i * out.n + i]! -= sign;
  return out;
}

/** Σ rows weight·op, A rows with the sign of the square of a paired item. */
export function factorOperator(orbitals: number, item: TripletItem, face: number, square: 0 | 1): Dense {
  const out = zeros(4 ** orbitals);
  for (const row of item.rows) {
    const flip = item.paired && square === 1 && row.kind === 'A' ? -1 : 1;
    addScaled(out, rowOperator(orbitals, row, face), flip * row.faces[face]!.weight);
  }
  return out;
}

export const factorNorm = (item: TripletItem, face: number) =>
  item.rows.reduce((sum, row) => sum + row.faces[face]!.weight, 0);

/** λ of a program. */
export const programLambda = (program: TripletProgram) =>
  program.oneBody.reduce((sum, row) => sum + row.faces[0]!.weight, 0) +
  program.items.reduce((sum, item) => sum + item.lambda.reduce((a, b) => a + b, 0), 0) +
  (program.products?.lambda.reduce((a, b) => a + b, 0) ?? 0);

/** A product without its λ: sign·½{M_m, M_n}, or sign·(2M_m² − 1), M(u) = T⁰(u) − 1. */
export function productOperator(orbitals: number, products: VectorProducts, p: number): Dense {
  const charge = (i: number) => {
    const u = products.vectors[i]!;
    return rowOperator(orbitals, { kind: 'S', u, v: u, faces: [{ mu: 0, weight: 1, sign: 1 }] }, 0);
  };
  const [m, n] = [products.first[p]!, products.second[p]!];
  const [a, b] = [charge(m), charge(n)];
  const sign = products.sign[p]!;
  const out = zeros(4 ** orbitals);
  addScaled(out, times(a, b), (m === n ? 1 : 0.5) * sign);
  addScaled(out, times(b, a), (m === n ? 1 : 0.5) * sign);
  if (m === n) for (let i = 0; i < out.n; i++) out.re[i * out.n + i]! -= sign;
  return out;
}

/** The operator a program encodes, H − c: one-body rows, Σ sign·λ·(2(M/Λ)² − 1) and products. */
export function programOperator(program: TripletProgram): Dense {
  const n = program.orbitals;
  const out = zeros(4 ** n);
  for (const row of program.oneBody) addScaled(out, rowOperator(n, row, 0), row.faces[0]!.weight);
  for (const item of program.items) {
    for (const [face, lambda] of item.lambda.entries()) {
      for (const square of item.paired ? ([0, 1] as const) : ([0] as const)) {
        const m = factorOperator(n, item, face, square);
        const scale = (item.sign * (square === 1 ? -1 : 1) * lambda) / (item.paired ? 2 : 1);
        addScaled(out, times(dagger(m), m), (2 * scale) / factorNorm(item, face) ** 2);
        for (let i = 0; i < out.n; i++) out.re[i * out.n + i]! -= scale;
      }
    }
  }
  for (const [p, lambda] of (program.products?.lambda ?? new Float64Array(0)).entries()) {
    addScaled(out, productOperator(n, program.products!, p), lambda);
  }
  return out;
}

import type { SpinorHamiltonian } from '../hamiltonian';

/** Elements below this part of the largest say nothing reliable about a phase. */
const RELIABLE = 1e-6;

interface Equation {
  /** Σ coefficient · φ_m = angle (mod 2π). */
  readonly coefficients: ReadonlyMap<number, number>;
  readonly angle: number;
  readonly size: number;
}

/**
 * Phases φ_m with Θψ_2m = e^{iφ_m} ψ_2m+1: programs return Kramers pairs with arbitrary ones. Invariance under time
 * reversal asks for
 *
 *     h_P̄Q̄ = s_P s_Q h_PQ* e^{i(φ_p − φ_q)},   g_P̄Q̄R̄S̄ = s_P s_Q s_R s_S g_PQRS* e^{i(φ_p − φ_q + φ_r − φ_s)}
 *
 * (bar: partner; s = −1 for the second of a pair). The largest elements that leave one unknown each fix the phases; those
 * that nothing fixes do not matter and are 0.
 *
 * @returns one phase a spinor: 0 for the first of a pair, φ_m for the second. Whether time reversal holds at all
 *   shows only in the gauge they give.
 */
export function kramersPhases(h: SpinorHamiltonian): Float64Array {
  const pairs = h.spinors / 2;
  const phase = new Float64Array(pairs);
  const known = new Uint8Array(pairs);
  known[0] = 1;
  // The one-body part nearly always suffices; the tensor has M⁴ elements.
  const oneBody = reliable(equationsOf(h.h, 2, h.spinors, known));
  while (fixOne(oneBody, phase, known));
  if (known.includes(0)) {
    const twoBody = reliable([...oneBody, ...equationsOf(h.g, 4, h.spinors, known)]);
    while (known.includes(0)) {
      if (!fixOne(twoBody, phase, known)) known[known.indexOf(0)] = 1;
    }
  }
  return Float64Array.from({ length: h.spinors }, (_, p) => (p % 2 === 1 ? phase[p >> 1]! : 0));
}

/** Uses the largest equation with one unknown of coefficient ±1, else ±2 (either of the two roots will do). */
function fixOne(equations: readonly Equation[], phase: Float64Array, known: Uint8Array): boolean {
  const found = solvable(equations, known, 1) ?? solvable(equations, known, 2);
  if (!found) return false;
  let { angle } = found.equation;
  for (const [m, c] of found.equation.coefficients) if (m !== found.pair) angle -= c * phase[m]!;
  phase[found.pair] = angle / found.equation.coefficients.get(found.pair)!;
  known[found.pair] = 1;
  return true;
}

/** The largest equation whose only unknown has the coefficient ±`times`. */
function solvable(equations: readonly Equation[], known: Uint8Array, times: number) {
  for (const equation of equations) {
    let unknown = -1;
    let fits = true;
    for (const [m, c] of equation.coefficients) {
      if (known[m]) continue;
      fits &&= unknown < 0 && Math.abs(c) === times;
      unknown = m;
    }
    if (fits && unknown >= 0) return { equation, pair: unknown };
  }
  return null;
}

function reliable(equations: Equation[]): Equation[] {
  equations.sort((a, b) => b.size - a.size);
  const least = RELIABLE * (equations[0]?.size ?? 0);
  return equations.filter(({ size }) => size > least);
}

/** Equations of all elements of a tensor of the given rank that involve an unknown phase. */
function equationsOf(
  { re, im }: SpinorHamiltonian['h'],
  rank: 2 | 4,
  m: number,
  known: Uint8Array,
): Equation[] {
  let largest = 0;
  for (let i = 0; i < re.length; i++) largest = Math.max(largest, Math.abs(re[i]!), Math.abs(im[i]!));
  const least = RELIABLE * largest;
  const equations: Equation[] = [];
  for (let a = 0; a < re.length; a++) {
    if (Math.abs(re[a]!) + Math.abs(im[a]!) <= least) continue;
    const coefficients = new Map<number, number>();
    let partner = 0;
    let sign = 1;
    let open = false;
    // Indices from the last to the first: annihilated, created, annihilated, created.
    for (let d = 0, rest = a, stride = 1; d < rank; d++, rest = Math.floor(rest / m), stride *= m) {
      const p = rest % m;
      partner += (p ^ 1) * stride;
      if (p & 1) sign = -sign;
      const sum = (coefficients.get(p >> 1) ?? 0) + (d % 2 === 0 ? -1 : 1);
      if (sum === 0) coefficients.delete(p >> 1);
      else coefficients.set(p >> 1, sum);
      open ||= !known[p >> 1];
    }
    const size = Math.min(Math.hypot(re[a]!, im[a]!), Math.hypot(re[partner]!, im[partner]!));
    if (!open || coefficients.size === 0 || size === 0) continue;
    // arg(partner · element · s)
    const x = sign * (re[a]! * re[partner]! - im[a]! * im[partner]!);
    const y = sign * (re[a]! * im[partner]! + im[a]! * re[partner]!);
    equations.push({ coefficients, angle: Math.atan2(y, x), size });
  }
  return equations;
}

/** The two-electron tensor over ψ'_P = e^{iφ_P} ψ_P. */
export function tensorInGauge(h: SpinorHamiltonian, phases: Float64Array): SpinorHamiltonian {
  const m = h.spinors;
  const re = new Float64Array(h.g.re.length);
  const im = new Float64Array(re.length);
  for (let p = 0, i = 0; p < m; p++) {
    for (let q = 0; q < m; q++) {
      for (let r = 0; r < m; r++) {
        for (let s = 0; s < m; s++, i++) {
          const angle = phases[q]! - phases[p]! + phases[s]! - phases[r]!;
          const [c, d] = [Math.cos(angle), Math.sin(angle)];
          re[i] = c * h.g.re[i]! - d * h.g.im[i]!;
          im[i] = c * h.g.im[i]! + d * h.g.re[i]!;
        }
      }
    }
  }
  return { ...h, g: { re, im } };
}

/** Coordinates of Hermitian matrices over ψ' turned back to ψ: L_PQ = L'_PQ e^{i(φ_P − φ_Q)}. */
export function vectorsFromGauge(
  vectors: Float64Array,
  count: number,
  m: number,
  phases: Float64Array,
): Float64Array {
  const out = Float64Array.from(vectors);
  const symmetric = (m * (m + 1)) / 2;
  for (let t = 0; t < count; t++) {
    for (let p = 1; p < m; p++) {
      for (let q = 0; q < p; q++) {
        const s = t * m * m + (p * (p + 1)) / 2 + q;
        const a = t * m * m + symmetric + (p * (p - 1)) / 2 + q;
        const angle = phases[p]! - phases[q]!;
        const [c, d] = [Math.cos(angle), Math.sin(angle)];
        const [x, y] = [vectors[s]!, vectors[a]!];
        out[s] = c * x - d * y;
        out[a] = c * y + d * x;
      }
    }
  }
  return out;
}

import type { SpinorItem, SpinorProgram, SpinorRow } from '../encode';
import type { JobContext } from '../job';
import { type ComplexMatrix, hermitianEigenvalues, symmetricEigenvalues } from '../linalg';
import type { RealisedRounding } from './energy-error';
import { largestExpectation } from './energy-error-rows';

/** Items between two checkpoints: some 50 ms for 50 orbitals. */
const AT_ONCE = 4;

/**
 * Bounds the operator norm of encoded − given, item by item, from the rounded rows themselves.
 *
 * A square is s·λ(2B² − 1), B = Σ weight/Λ·op Hermitian with ‖B‖ ≤ 1. With B' = B + Δ the difference is of norm
 * ≤ |λ' − λ| + 2λ‖Δ‖(‖B‖ + ‖B'‖). A paired item is s·λ(B₁² − B₂²); both squares have the same norms, so the same holds. One-body
 * items differ by ‖Σ (weight'·op' − weight·op)‖ each.
 *
 * @param encoded - with the same rows in the same order, as `encodedSpinorProgram` gives them
 * @param electrons - of the sector, or null for all of Fock space, where norms are larger
 */
export async function realisedSpinorRounding(
  given: SpinorProgram,
  encoded: SpinorProgram,
  electrons: number | null,
  context: JobContext,
): Promise<RealisedRounding> {
  const { partners } = given;
  const norm = (terms: readonly Term[], item: SpinorItem, odd: boolean) =>
    largestExpectation(modeValues(terms, item.kind, partners, odd), electrons);
  let oneBody = 0;
  for (const [t, item] of given.oneBody.entries()) {
    const odd = item.faces[0]!.odd;
    oneBody += norm([...termsOf(encoded.oneBody[t]!.rows, 0, 1), ...termsOf(item.rows, 0, -1)], item, odd);
  }
  const items = new Float64Array(given.items.length);
  for (const [t, item] of given.items.entries()) {
    if (t % AT_ONCE === 0) {
      context.report('rounding error', t, items.length);
      await context.checkpoint();
    }
    for (const [face, { lambda, odd }] of item.faces.entries()) {
      const rounded = encoded.items[t]!;
      items[t]! += Math.abs(rounded.faces[face]!.lambda - lambda);
      if (lambda === 0) continue;
      const before = termsOf(item.rows, face, 1 / weightOf(item, face));
      const after = termsOf(rounded.rows, face, 1 / weightOf(rounded, face));
      const old = norm(before, item, odd);
      const change = norm([...after, ...before.map((term) => ({ ...term, x: -term.x }))], item, odd);
      items[t]! += 2 * lambda * change * (2 * old + change);
    }
  }
  let [bound, squares] = [oneBody, oneBody ** 2];
  for (const x of items) {
    bound += x;
    squares += x * x;
  }
  return { bound, typical: Math.sqrt(squares), oneBody, items, products: new Float64Array(0), electrons };
}

/** x·op of a row. */
interface Term {
  readonly x: number;
  readonly row: SpinorRow;
}

const termsOf = (rows: readonly SpinorRow[], face: number, scale: number): Term[] =>
  rows.map((row) => ({ x: scale * row.faces[face]!.weight * row.faces[face]!.sign, row }));

const weightOf = (item: SpinorItem, face: number): number =>
  item.rows.reduce((sum, row) => sum + row.faces[face]!.weight, 0);

/**
 * d_j of Σ x·op = Σ_j d_j (n_j − ½) over all 2N modes, ascending. Vectors with a spin of their own leave the opposite one
 * to their partners: the same values there, or with the opposite sign where the partners have it.
 */
function modeValues(
  terms: readonly Term[],
  kind: SpinorItem['kind'],
  partners: boolean,
  odd: boolean,
): Float64Array {
  const n = terms[0]!.row.re.length;
  const sum = { n, re: new Float64Array(n * n), im: new Float64Array(n * n) };
  for (const { x, row } of terms) {
    addProjector(sum, row.re, row.im, partners ? x : 2 * x);
    if (kind === 'full' && partners) addPartner(sum, row, odd ? -x : x);
  }
  if (kind === 'full') return hermitianEigenvalues(sum);
  const own = kind === 'real' ? symmetricEigenvalues(sum.re, n) : hermitianEigenvalues(sum);
  const other = partners ? own.map((d) => (odd ? -d : d)) : new Float64Array(n);
  return Float64Array.from([...own, ...other]).sort();
}

/** matrix += x·ww†. */
function addProjector({ n, re, im }: ComplexMatrix, a: Float64Array, b: Float64Array, x: number): void {
  if (x === 0) return;
  for (let p = 0; p < n; p++) {
    const [c, d] = [x * a[p]!, x * b[p]!];
    for (let q = 0; q < n; q++) {
      re[p * n + q]! += c * a[q]! + d * b[q]!;
      im[p * n + q]! += d * a[q]! - c * b[q]!;
    }
  }
}

/** The same of iσ_y w*. */
function addPartner(matrix: ComplexMatrix, { re, im }: SpinorRow, x: number): void {
  const a = re.map((_, i) => (i % 2 === 0 ? re[i + 1]! : -re[i - 1]!));
  const b = im.map((_, i) => (i % 2 === 0 ? -im[i + 1]! : im[i - 1]!));
  addProjector(matrix, a, b, x);
}

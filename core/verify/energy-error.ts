import type { TripletItem, TripletProgram, VectorProducts } from '../encode';
import type { JobContext } from '../job';
import { addRows, largestExpectation, normOfRows, operatorOfRows } from './energy-error-rows';

/** What rounding a program's weights and vectors changes of H, hartree. */
export interface RealisedRounding {
  /** Rigorous: no level of the sector moves by more. Sum of {@link oneBody}, {@link items} and {@link products}. */
  readonly bound: number;
  /** Root of the sum of squares instead: the size to expect where they err independently. Not a bound. */
  readonly typical: number;
  /** Operator norm of the difference of the one-body rows, exact but for a time-odd remainder. */
  readonly oneBody: number;
  /** Bound of each item. */
  readonly items: Float64Array;
  /** Bound of each product of two vectors. */
  readonly products: Float64Array;
  /** Fock space (null) or the electrons of the sector that the norms are taken in. */
  readonly electrons: number | null;
}

/** Items between two checkpoints: some 50 ms for 50 orbitals. */
const AT_ONCE = 8;

/**
 * Bounds the operator norm of encoded − given, item by item and without forming g, from the rounded rows themselves.
 *
 * A square is s·λ(2B†B − 1), B = Σ weight/Λ·op of norm ≤ 1. With B' = B + Δ the difference is
 * s(λ' − λ)(2B'†B' − 1) + 2sλ(B'†B' − B†B), of norm ≤ |λ' − λ| + 2λ[‖Δ‖(‖B‖ + ‖B'‖) + c²], c the scalar that rounded A
 * rows leave. A paired item is 2sλ{X, Y}, X its A rows and Y its S rows, likewise. A product sλ·½{M, M'} of norm ≤ 1 changes by
 * ≤ |λ' − λ| + λ(‖ΔM‖ + ‖ΔM'‖), a square sλ(2M² − 1) by twice the latter. All norms are operator norms of one-body
 * operators, from their eigenvalues.
 *
 * @param encoded - with the same rows in the same order of each kind, as `encodedProgram` gives them
 * @param electrons - of the sector, or null for all of Fock space, where norms are larger
 */
export async function realisedRounding(
  given: TripletProgram,
  encoded: TripletProgram,
  electrons: number | null,
  context: JobContext,
): Promise<RealisedRounding> {
  const n = given.orbitals;
  const difference = addRows(
    operatorOfRows(n, encoded.oneBody, 0, 1),
    operatorOfRows(n, given.oneBody, 0, 1),
    -1,
  );
  // i·scalar of the one-body part adds to its norm; it cancels between spins where the circuit is Hermitian.
  const oneBody = normOfRows(difference, electrons) + Math.abs(difference.scalar);
  const items = new Float64Array(given.items.length);
  for (const [t, item] of given.items.entries()) {
    if (t % AT_ONCE === 0) {
      context.report('rounding error', t, items.length);
      await context.checkpoint();
    }
    items[t] = itemBound(n, item, encoded.items[t]!, electrons);
  }
  const products = productBounds(given.products, encoded.products, electrons);
  let [bound, squares] = [oneBody, oneBody ** 2];
  for (const errors of [items, products]) {
    for (const x of errors) {
      bound += x;
      squares += x * x;
    }
  }
  return { bound, typical: Math.sqrt(squares), oneBody, items, products, electrons };
}

function productBounds(
  given: VectorProducts | undefined,
  encoded: VectorProducts | undefined,
  electrons: number | null,
): Float64Array {
  if (!given || !encoded) return new Float64Array(0);
  // T⁰(u') − T⁰(u) has the eigenvalues ± sin of the angle between them, for either spin.
  const change = given.vectors.map((u, m) => {
    const v = encoded.vectors[m]!;
    const apart = u.reduce((sum, x, p) => sum + (x - v[p]!) ** 2, 0) / 2;
    const sine = Math.sqrt(Math.max(0, apart * (2 - apart)));
    const values = new Float64Array(2 * u.length).fill(-sine, 0, 2).fill(sine, -2);
    return largestExpectation(values, electrons);
  });
  return given.lambda.map((lambda, i) => {
    const [m, n] = [given.first[i]!, given.second[i]!];
    return Math.abs(encoded.lambda[i]! - lambda) + lambda * (m === n ? 2 : 1) * (change[m]! + change[n]!);
  });
}

function itemBound(n: number, given: TripletItem, encoded: TripletItem, electrons: number | null): number {
  let sum = 0;
  for (const [face, lambda] of given.lambda.entries()) {
    const rounded = encoded.lambda[face]!;
    sum += Math.abs(rounded - lambda);
    if (lambda === 0) continue;
    const parts = given.paired ? (['S', 'A'] as const) : (['both'] as const);
    const norms = parts.map((kinds) => {
      const before = operatorOfRows(n, given.rows, face, 1 / weightOf(given, face), kinds);
      const after = operatorOfRows(n, encoded.rows, face, 1 / weightOf(encoded, face), kinds);
      const change = normOfRows(addRows(after, before, -1), electrons);
      const old = normOfRows(before, electrons);
      return { change, old, now: old + change, scalar: after.scalar };
    });
    const [y, x] = norms;
    // λ[(Y + X)²− (Y − X)²] = 2λ{X, Y}: scalars of A rows cancel between the two squares.
    sum += x
      ? 4 * lambda * (x.change * y!.now + x.old * y!.change)
      : 2 * lambda * (y!.change * (y!.old + y!.now) + y!.scalar ** 2);
  }
  return sum;
}

function weightOf(item: TripletItem, face: number): number {
  return item.rows.reduce((sum, row) => sum + row.faces[face]!.weight, 0);
}

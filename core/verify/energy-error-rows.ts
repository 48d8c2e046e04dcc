import type { TripletRow } from '../encode';
import { isSymmetricPlane, type TripletOperator, toSpinOrbitals, zeroOperator } from '../hamiltonian';
import { antisymmetricNormsBatch, hermitianEigenvalues, symmetricEigenvalues } from '../linalg';

/** Σ rows weight·op as a Hermitian operator less its identity part, and what rounding makes not Hermitian of it. */
export interface RowsOperator {
  readonly even: TripletOperator;
  readonly odd: TripletOperator;
  /** c in Σ = Hermitian + i c: scalar of charge A rows whose vectors are not quite orthogonal. */
  readonly scalar: number;
}

/**
 * @param scale - of all weights
 * @param kinds - which rows count
 */
export function operatorOfRows(
  n: number,
  rows: readonly TripletRow[],
  face: number,
  scale: number,
  kinds: 'S' | 'A' | 'both' = 'both',
): RowsOperator {
  const even = zeroOperator('even', n);
  const odd = zeroOperator('odd', n);
  let scalar = 0;
  for (const { kind, u, v, faces } of rows) {
    if (kinds !== 'both' && kind !== kinds) continue;
    const { mu, weight, sign } = faces[face]!;
    const x = scale * weight * sign;
    if (x === 0) continue;
    const { planes } = isSymmetricPlane('even', mu) === (kind === 'S') ? even : odd;
    const at = mu * n * n;
    if (kind === 'S') {
      for (let p = 0; p < n; p++) {
        const left = x * u[p]!;
        for (let q = 0; q < n; q++) planes[at + p * n + q]! += left * u[q]!;
      }
      continue;
    }
    for (let p = 0; p < n; p++) {
      for (let q = 0; q < p; q++) {
        const a = 0.5 * x * (u[p]! * v[q]! - v[p]! * u[q]!);
        planes[at + p * n + q]! += a;
        planes[at + q * n + p]! -= a;
      }
      if (mu === 0) scalar += x * u[p]! * v[p]!;
    }
  }
  return { even, odd, scalar };
}

/** a + scale·b. */
export function addRows(a: RowsOperator, b: RowsOperator, scale: number): RowsOperator {
  const add = (x: TripletOperator, y: TripletOperator): TripletOperator => ({
    ...x,
    planes: x.planes.map((value, i) => value + scale * y.planes[i]!),
  });
  return { even: add(a.even, b.even), odd: add(a.odd, b.odd), scalar: a.scalar + scale * b.scalar };
}

/**
 * Largest |expectation value| of Σ_j d_j (n_j − ½), the Hermitian part, over 2N modes. Exact where the operator is of one
 * time-reversal sector, else the sum of both (triangle inequality).
 */
export function normOfRows({ even, odd }: RowsOperator, electrons: number | null): number {
  return (
    largestExpectation(modeEigenvalues(even), electrons) + largestExpectation(modeEigenvalues(odd), electrons)
  );
}

/**
 * Largest |expectation value| of Σ_j d_j (n_j − ½): ½Σ|d_j| on Fock space; with η electrons the η largest or smallest
 * d_j less half the trace.
 *
 * @param values - d_j, ascending
 */
export function largestExpectation(values: Float64Array, electrons: number | null): number {
  let [trace, below, size] = [0, 0, 0];
  for (const [j, d] of values.entries()) {
    trace += d;
    size += Math.abs(d);
    if (electrons !== null && j < electrons) below += d;
  }
  if (electrons === null) return 0.5 * size;
  let above = 0;
  for (let j = values.length - electrons; j < values.length; j++) above += values[j]!;
  return Math.max(above - 0.5 * trace, 0.5 * trace - below);
}

/** Eigenvalues over the 2N spin orbitals, ascending. */
function modeEigenvalues(operator: TripletOperator): Float64Array {
  const { n, sector, planes } = operator;
  const plane = (mu: number) => planes.subarray(mu * n * n, (mu + 1) * n * n);
  const filled = ([0, 1, 2, 3] as const).filter((mu) => plane(mu).some((x) => x !== 0));
  const spins = filled.filter((mu) => mu !== 0);
  if (filled.length === 0) return new Float64Array(2 * n);
  if (spins.length > 1) return hermitianEigenvalues(toSpinOrbitals(operator));
  // One spin axis: ↑ and ↓ along it fall apart. Even: S ± iA, conjugates of each other. Odd: iA ± S, negatives.
  const k = spins[0] ?? null;
  const symmetric = sector === 'even' ? plane(0) : k === null ? new Float64Array(n * n) : plane(k);
  const antisymmetric = sector === 'odd' ? plane(0) : k === null ? null : plane(k);
  if (antisymmetric && symmetric.every((x) => x === 0)) {
    const a = antisymmetricNormsBatch(antisymmetric, 1, n);
    const values = new Float64Array(2 * n);
    a.forEach((x, j) => {
      values.fill(x, 4 * j, 4 * j + 2);
      values.fill(-x, 4 * j + 2, 4 * j + 4);
    });
    return values.sort();
  }
  const half = antisymmetric?.some((x) => x !== 0)
    ? hermitianEigenvalues({ n, re: symmetric.slice(), im: antisymmetric.slice() })
    : symmetricEigenvalues(symmetric, n);
  const other = sector === 'even' ? half : half.map((x) => -x);
  return Float64Array.from([...half, ...other]).sort();
}

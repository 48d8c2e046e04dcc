import type { Finding } from '../../job';
import { numSymmetricPairs } from '../integral-set';
import { element, unpair } from '../recipe/symmetry';
import { originsOf, sumParts, triangleElement, type Unchecked } from './sums';

/**
 * What every repulsion satisfies, and a wrong index order does not: (pq|pq) ≥ 0; Schwarz,
 * (pq|rs)² ≤ (pq|pq)(rs|rs); and (pp|qq) ≥ (pq|pq), the Coulomb integral of two real orbitals being no smaller
 * than their exchange integral (C. C. J. Roothaan, Rev. Mod. Phys. 23, 69 (1951)). In physicists' order the two
 * change places.
 */
export function checkCoulomb(set: Unchecked): Finding[] {
  const isCoulomb = (part: { term: string }) => part.term === 'sf';
  const values = sumParts(set, isCoulomb).chargeCharge;
  if (values === null) return [];
  const where = originsOf(set.twoElectron.filter(isCoulomb));
  const n = set.orbitals;
  const negative = negativeDiagonal(values, n, where);
  return [
    ...negative,
    ...missingRepulsion(values, n, where),
    ...(negative.length > 0 ? [] : swapped(values, n, where)),
  ];
}

function negativeDiagonal(values: Float64Array, n: number, where: string): Finding[] {
  const pairs = numSymmetricPairs(n);
  const diagonal = (P: number) => values[(P * (P + 1)) / 2 + P]!;
  let worst = 0;
  let at = 0;
  let max = 0;
  let count = 0;
  for (let P = 0; P < pairs; P++) max = Math.max(max, Math.abs(diagonal(P)));
  for (let P = 0; P < pairs; P++) {
    if (diagonal(P) >= -1e-8 * max) continue;
    count++;
    if (diagonal(P) < worst) [worst, at] = [diagonal(P), P];
  }
  if (count === 0) return [];
  return [
    {
      severity: 'error',
      code: 'coulomb-not-positive',
      where,
      found: `${element([...unpair(at), ...unpair(at)])} = ${worst} Eh${count > 1 ? ` and ${count - 1} more negative diagonal elements` : ''}`,
      expected: '(pq|pq) ≥ 0, the repulsion of a charge with itself',
      mend: 'Wrong sign, or a wrong index order: try "order": "physicists" on an array or list, or "scale": -1.',
    },
  ];
}

function missingRepulsion(values: Float64Array, n: number, where: string): Finding[] {
  const missing: number[] = [];
  for (let p = 0; p < n; p++) {
    if (triangleElement(values, p, p, p, p) === 0) missing.push(p + 1);
  }
  // None at all is a model without repulsion; some is a hole in the file.
  if (missing.length === 0 || missing.length === n) return [];
  return [
    {
      severity: 'warning',
      code: 'missing-element',
      where,
      found: `no (pp|pp) for orbital${missing.length > 1 ? 's' : ''} ${missing.slice(0, 8).join(', ')}${missing.length > 8 ? ', …' : ''}`,
      expected: 'a positive number for every orbital',
      mend: 'Lines are missing in the file, or the list was cut short: write it again.',
    },
  ];
}

function swapped(values: Float64Array, n: number, where: string): Finding[] {
  let violations = 0;
  let distinct = 0;
  let worst = 0;
  let at: [number, number] = [0, 0];
  for (let p = 0; p < n; p++) {
    for (let q = 0; q < p; q++) {
      const direct = triangleElement(values, p, p, q, q);
      const exchange = triangleElement(values, p, q, p, q);
      if (Math.abs(direct - exchange) <= 1e-8 * Math.abs(direct)) continue;
      distinct++;
      if (exchange <= direct) continue;
      violations++;
      if (exchange - direct > worst) [worst, at] = [exchange - direct, [p, q]];
    }
  }
  if (violations === 0) return schwarz(values, n, where);
  const [p, q] = at;
  return [
    {
      severity: violations > distinct / 2 ? 'error' : 'warning',
      code: 'index-order',
      where,
      found: `${element([p, p, q, q])} = ${triangleElement(values, p, p, q, q)} below ${element([p, q, p, q])} = ${triangleElement(values, p, q, p, q)} Eh, and so for ${violations} of ${distinct} pairs`,
      expected: 'Coulomb integrals (pp|qq) no smaller than exchange integrals (pq|pq)',
      mend: 'Coulomb and exchange integrals change places between ⟨pq|rs⟩ and (pq|rs): the "order" is the other one, "physicists" where nothing was said (an FCIDUMP must be in chemists’ order).',
    },
  ];
}

function schwarz(values: Float64Array, n: number, where: string): Finding[] {
  const pairs = numSymmetricPairs(n);
  let worst = 0;
  let at: [number, number] = [0, 0];
  let max = 0;
  for (let P = 0; P < pairs; P++) max = Math.max(max, values[(P * (P + 1)) / 2 + P]!);
  for (let P = 0, position = 0; P < pairs; P++) {
    const diagonalP = Math.max(0, values[(P * (P + 1)) / 2 + P]!);
    for (let Q = 0; Q <= P; Q++, position++) {
      const bound = Math.sqrt(diagonalP * Math.max(0, values[(Q * (Q + 1)) / 2 + Q]!));
      const excess = Math.abs(values[position]!) - bound;
      if (excess > worst) [worst, at] = [excess, [P, Q]];
    }
  }
  // √ of a rounded diagonal loses half the digits, so the margin is wider than elsewhere.
  if (worst <= 1e-6 * max) return [];
  const indices = [...unpair(at[0]), ...unpair(at[1])] as [number, number, number, number];
  return [
    {
      severity: 'warning',
      code: 'coulomb-not-positive',
      where,
      found: `|${element(indices)}| = ${Math.abs(triangleElement(values, ...indices))} Eh, ${worst.toExponential(2)} above its Schwarz bound`,
      expected: '(pq|rs)² ≤ (pq|pq)(rs|rs)',
      mend: 'Elements are missing or doubled, or two index orders are mixed in the file.',
    },
  ];
}

import type { Finding } from '../../job';
import { maxAbs, sumParts, tensorComponent, type Unchecked } from './sums';

/** Parts that hold the same numbers for the same operator: the element would be counted twice. */
export function checkRepeats(set: Unchecked): Finding[] {
  const arrays: { id: string; origin: string; kind: string; term: string; values: Float64Array }[] = [];
  for (const { id, origin, term, charge, spin } of set.oneElectron) {
    arrays.push({ id, origin, term, kind: charge ? 'charge' : 'spin', values: (charge ?? spin)! });
  }
  for (const part of set.twoElectron) {
    const { id, origin, term, kind } = part;
    if (part.kind !== 'spin-orbit') arrays.push({ id, origin, term, kind, values: part.values });
    else if (part.same !== null) arrays.push({ id, origin, term, kind: 'same', values: part.same });
    else if (part.other instanceof Float64Array)
      arrays.push({ id, origin, term, kind: 'other', values: part.other });
  }
  const findings: Finding[] = [];
  for (const [index, part] of arrays.entries()) {
    const twin = arrays
      .slice(0, index)
      .find(
        (other) => other.kind === part.kind && other.term === part.term && isSame(other.values, part.values),
      );
    if (twin === undefined) continue;
    findings.push({
      severity: 'warning',
      code: 'counted-twice',
      where: `${part.origin} (part "${part.id}")`,
      found: `the same numbers as part "${twin.id}" (${twin.origin}) for the same term ${part.term}`,
      expected: 'each contribution once, because parts of equal role add up',
      mend: 'Remove one of the two parts and put its file under "ignore".',
    });
  }
  return findings;
}

function isSame(a: Float64Array, b: Float64Array): boolean {
  const size = maxAbs(a);
  return size > 0 && a.length === b.length && a.every((value, i) => Math.abs(value - b[i]!) <= 1e-10 * size);
}

/** Components of a vector or tensor that no part gives, while others are there. */
export function checkComponents(
  parts: readonly {
    readonly role: string;
    readonly components: readonly string[];
    readonly origin: string;
  }[],
): Finding[] {
  const findings: Finding[] = [];
  for (const role of new Set(parts.map((part) => part.role))) {
    const ofRole = parts.filter((part) => part.role === role && part.components.length > 0);
    if (ofRole.length === 0) continue;
    const given = new Set(
      ofRole.flatMap((part) => part.components.flatMap((name) => [name, [...name].reverse().join('')])),
    );
    const all =
      ofRole[0]!.components[0]!.length === 1 ? ['x', 'y', 'z'] : ['xx', 'xy', 'xz', 'yy', 'yz', 'zz'];
    const missing = all.filter((name) => !given.has(name));
    if (missing.length === 0) continue;
    findings.push({
      severity: 'warning',
      code: 'missing-component',
      where: [...new Set(ofRole.map((part) => part.origin))].join(', '),
      found: `role "${role}" without component${missing.length > 1 ? 's' : ''} ${missing.join(', ')}`,
      expected: all.join(', '),
      mend: 'Add a part for what is missing; absent components count as zero.',
    });
  }
  return findings;
}

/** Dipolar spin–spin is traceless, Σ_k A^kk = 0; a trace is the contact term or a wrong component order. */
export function checkTraceless(set: Unchecked): Finding[] {
  const n = set.orbitals;
  const values = sumParts(set, (part) => part.term === 'ss').spinSpin;
  if (values === null) return [];
  const [xx, yy, zz] = [0, 3, 5].map((kl) => tensorComponent(values, n, kl)) as [
    Float64Array,
    Float64Array,
    Float64Array,
  ];
  let worst = 0;
  for (let i = 0; i < xx.length; i++) worst = Math.max(worst, Math.abs(xx[i]! + yy[i]! + zz[i]!));
  const size = maxAbs(values);
  if (worst <= 1e-8 * size) return [];
  return [
    {
      severity: 'warning',
      code: 'trace',
      where: set.twoElectron
        .filter((part) => part.term === 'ss')
        .map((part) => `${part.origin} (part "${part.id}")`)
        .join(', '),
      found: `a trace xx + yy + zz up to ${worst.toExponential(2)} Eh`,
      expected: `zero to 1e-8 of the largest element, ${size.toExponential(2)} Eh`,
      mend: 'The contact term may be inside (then leave out the part "spin-spin contact"), or the components are in another order.',
    },
  ];
}

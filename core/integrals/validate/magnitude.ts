import type { Finding } from '../../job';
import { fromHartree } from '../../units';
import { maxAbs, originsOf, sumParts, type Unchecked } from './sums';

/** No spin–orbit element between valence or semicore orbitals reaches this; common practice, no source. */
const LARGE_SPIN_ORBIT = 1;
/** 2e-3 cm⁻¹, far below what any atom but hydrogen has; common practice, no source. */
const SMALL_SPIN_ORBIT = 1e-8;
/** (1s1s|1s1s) = 5Z/8 of the heaviest elements is about 70 Eh. */
const LARGE_REPULSION = 200;

/** Sizes that no Breit–Pauli Hamiltonian in hartree has, and that a wrong unit explains. */
export function checkMagnitudes(set: Unchecked): Finding[] {
  const spinFree = sumParts(set, (part) => part.term === 'sf');
  const largestOne = maxAbs(spinFree.charge);
  const largestTwo = maxAbs(spinFree.chargeCharge);
  const findings: Finding[] = [];
  for (const part of set.oneElectron) {
    if (part.spin === null) continue;
    const size = maxAbs(part.spin);
    if (size > LARGE_SPIN_ORBIT) {
      const beyond = largestOne > 0 && size > largestOne;
      findings.push(
        tooLarge(
          part,
          size,
          `about ${LARGE_SPIN_ORBIT} Eh at most${beyond ? `, and below the spin-free ${largestOne} Eh` : ''}`,
          beyond,
        ),
      );
    } else if (size > 0 && size < SMALL_SPIN_ORBIT) {
      findings.push(tooSmall(part, size));
    }
  }
  for (const part of set.twoElectron) {
    if (part.kind === 'charge-charge' || largestTwo === 0) continue;
    const size =
      part.kind === 'spin-spin' ? maxAbs(part.values) : Math.max(maxAbs(part.same), otherSize(part.other));
    if (size > largestTwo) {
      findings.push(
        tooLarge(part, size, `far less than the largest repulsion integral, ${largestTwo} Eh`, true),
      );
    }
  }
  if (largestTwo > LARGE_REPULSION) {
    findings.push({
      severity: 'warning',
      code: 'unit',
      where: originsOf(set.twoElectron.filter((part) => part.term === 'sf')),
      found: `repulsion integrals up to ${largestTwo} Eh`,
      expected: `at most about 70 Eh (5Z/8 for the 1s shell of the heaviest elements)`,
      mend: 'The numbers may be in eV or cm⁻¹: set "unit".',
    });
  }
  return findings;
}

const otherSize = (other: Float64Array | { readonly timesSame: number } | null): number =>
  other instanceof Float64Array ? maxAbs(other) : 0;

function tooLarge(
  part: { readonly id: string; readonly origin: string },
  size: number,
  expected: string,
  isError: boolean,
): Finding {
  return {
    severity: isError ? 'error' : 'warning',
    code: 'unit',
    where: `${part.origin} (part "${part.id}")`,
    found: `elements up to ${size.toPrecision(4)} Eh`,
    expected,
    mend: `If the file is in cm⁻¹, set "unit": "cm-1" (then ${(size / fromHartree(1, 'cm-1')).toPrecision(3)} Eh); if it is bare of α², set "scale".`,
  };
}

function tooSmall(part: { readonly id: string; readonly origin: string }, size: number): Finding {
  return {
    severity: 'warning',
    code: 'unit',
    where: `${part.origin} (part "${part.id}")`,
    found: `no element above ${size.toExponential(2)} Eh (${fromHartree(size, 'cm-1').toExponential(1)} cm⁻¹)`,
    expected: 'spin–orbit elements of at least 1e-7 Eh in anything but hydrogen',
    mend: 'The file may be in hartree already: remove "unit", or check "scale".',
  };
}

import type { Finding, JobContext } from '../../job';
import { checkCoulomb } from './coulomb';
import { checkMagnitudes } from './magnitude';
import { checkRepeats, checkTraceless } from './repeats';
import { checkOtherOverSame, checkScreening } from './spin-orbit';
import type { Unchecked } from './sums';

/**
 * Checks that need the set as a whole. What an array promises by its role alone (Hermiticity, permutations, time
 * reversal) is checked while it is read, because the packed form cannot show it any more.
 */
export async function validate(set: Unchecked, context: JobContext): Promise<Finding[]> {
  const findings: Finding[] = [];
  for (const check of [
    checkMagnitudes,
    checkCoulomb,
    checkOtherOverSame,
    checkScreening,
    checkTraceless,
    checkRepeats,
  ]) {
    findings.push(...check(set));
    await context.checkpoint();
  }
  return findings;
}

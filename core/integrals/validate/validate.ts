import type { Finding, JobContext } from '../../job';
import type { SpatialIntegrals } from '../integral-set';

/** Checks that need the set as a whole; what each array promises by its role was checked on reading. */
export async function validate(_set: SpatialIntegrals, _context: JobContext): Promise<Finding[]> {
  return [];
}

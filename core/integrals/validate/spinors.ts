import type { Finding, JobContext } from '../../job';
import type { SpinorIntegrals } from '../integral-set';

export async function validateSpinors(
  _set: Omit<SpinorIntegrals, 'findings'>,
  _origin: string,
  _context: JobContext,
): Promise<Finding[]> {
  return [];
}

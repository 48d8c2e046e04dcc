import type { SpatialHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import type { Encoding } from './encoding';
import type { VariantName } from './variant';

export async function encodeSparse(
  _h: SpatialHamiltonian,
  _variant: VariantName,
  _threshold: number,
  _ctx: JobContext,
): Promise<Encoding> {
  throw new Error('sparse encoding: not written yet');
}

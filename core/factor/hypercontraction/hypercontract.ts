import type { SpatialHamiltonian } from '../../hamiltonian';
import type { JobContext } from '../../job';
import type { Hypercontraction, HypercontractionOptions } from './block';

/** Signature only for the moment. */
export async function hypercontract(
  _h: SpatialHamiltonian,
  _options: HypercontractionOptions,
  _ctx: JobContext,
): Promise<Hypercontraction> {
  throw new Error('not written yet');
}

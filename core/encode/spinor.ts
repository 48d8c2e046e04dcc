import type { Factorisation } from '../factor';
import type { SpinorHamiltonian } from '../hamiltonian';
import type { Encoding } from './encoding';
import type { VariantName } from './variant';

export function encodeSpinors(_h: SpinorHamiltonian, _f: Factorisation, _variant: VariantName): Encoding {
  throw new Error('spinor files: not written yet');
}

import type { Factorisation } from '../factor';
import type { SpinHamiltonian } from '../hamiltonian';
import { InputError, type JobContext } from '../job';
import { encodeSpatial } from './assemble';
import type { Encoding } from './encoding';
import { encodeSparse } from './sparse/encode';
import { encodeShiftedSparse } from './sparse-shift/encode';
import { encodeSpinors } from './spinor';
import { formatVariant, type VariantName } from './variant';

export interface EncodingOptions {
  /** Of the sparse form, which has no factorisation to carry it: hartree, ≥ 0. @defaultValue 0 */
  readonly threshold?: number;
}

/**
 * The encoding of a Hamiltonian that a variant names: λ by part, sizes for counting, and the Hamiltonian it stands for.
 *
 * @param factorisation - of this Hamiltonian in the variant's grouping; shared between variants. null for sparse.
 * @throws InputError `spinor-only`, `grouping-mismatch`.
 */
export async function buildEncoding(
  hamiltonian: SpinHamiltonian,
  factorisation: Factorisation | null,
  variant: VariantName,
  options: EncodingOptions,
  ctx: JobContext,
): Promise<Encoding> {
  const name = formatVariant(variant);
  if (hamiltonian.kind === 'spinor' && variant.factorisation !== 'spinor') {
    throw new InputError({
      code: 'spinor-only',
      where: `variant "${name}"`,
      found: `the ${variant.factorisation} form for complex spinor integrals, which have no spin apart from space`,
      expected: 'spinor factors',
      mend: 'Use spinor/joint/index/… or spinor/separate/index/….',
    });
  }
  if (hamiltonian.kind === 'spatial' && variant.factorisation === 'sparse') {
    const encode = variant.shift === 'none' ? encodeSparse : encodeShiftedSparse;
    return encode(hamiltonian, variant, options.threshold ?? 0, ctx);
  }
  if (factorisation?.grouping !== variant.grouping) {
    throw new RangeError(`variant ${name} needs a ${variant.grouping} factorisation`);
  }
  return hamiltonian.kind === 'spinor'
    ? encodeSpinors(hamiltonian, factorisation, variant)
    : encodeSpatial(hamiltonian, factorisation, variant, ctx);
}

import { addScaled, type SpatialHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import { type FactoriseOptions, factorise } from './factorise';
import type { Factorisation } from './factors';
import type { HypercontractionOptions } from './hypercontraction/block';
import { hypercontract } from './hypercontraction/hypercontract';

export interface HypercontractedOptions
  extends Pick<FactoriseOptions, 'threshold' | 'occupations' | 'keepSpinParts'>,
    Pick<HypercontractionOptions, 'rank' | 'residualTarget' | 'steps' | 'onBest' | 'start'> {
  /** Whether the fit has a symmetry shift: it then holds in the sector of η electrons alone. */
  readonly shift: boolean;
}

/**
 * Separate grouping with the charge part hypercontracted. Spin-dependent parts are factors, of which truncation drops what
 * it would drop beside Coulomb factors at the same threshold, or none (`keepSpinParts`); the fit's residual and mean field are added to theirs.
 */
export async function hypercontractedFactorisation(
  h: SpatialHamiltonian,
  options: HypercontractedOptions,
  ctx: JobContext,
): Promise<Factorisation> {
  const { threshold = 0, keepSpinParts = false, occupations, ...fitting } = options;
  const reference = occupations ? { occupations } : {};
  const spin = await factorise(
    h,
    { grouping: 'separate', threshold, withoutCoulomb: true, keepSpinParts, ...reference },
    ctx,
  );
  if (!h.g.charge) return spin;
  const fit = await hypercontract(h, { ...fitting, ...reference }, ctx);
  const folded = spin.foldedMeanField;
  return {
    grouping: 'separate',
    blocks: [fit.block, ...spin.blocks],
    residual: {
      frobenius: Math.hypot(spin.residual.frobenius, fit.residual.frobenius),
      oneNormBound: spin.residual.oneNormBound + fit.residual.oneNormBound,
      dropped: spin.residual.dropped + fit.residual.dropped,
    },
    foldedMeanField:
      folded && 'planes' in folded ? addScaled(folded, fit.foldedMeanField) : fit.foldedMeanField,
    foldedConstant: spin.foldedConstant + fit.foldedConstant,
    // What factors would have to say of the Coulomb part does not matter here.
    notes: fit.notes,
  };
}

import {
  type Factorisation,
  type HypercontractedFactors,
  type HypercontractedOptions,
  hypercontractedFactorisation,
  hypercontractedNorm,
} from '../factor';
import type { SpatialHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import { hamiltonianOfFactors } from './energy-estimate-hamiltonian';
import type { LowStates } from './low-states';

/** Residual of the first fit, hartree an orbital: about where λ stops falling. */
const FIRST = 0.001;
const FITS = 4;
/** A fit this many times as heavy as the first is near the least residual of its rank: it is not taken. */
const MOST_NORM = 1.4;
/** By how much the residual is lowered at once. */
const LOWERED = { least: 0.25, most: 0.7 } as const;

/**
 * A hypercontraction of the charge part whose residual is lowered until low states (low-states.ts) move against each other,
 * or couple, by no more than `allowed`. The energy of the reference tells little of that: the fit's mean field is exact for it.
 *
 * @param allowed - hartree; 0: the first fit is taken as it is
 */
export async function fittedCharge(
  h: SpatialHamiltonian,
  options: HypercontractedOptions,
  { statesOf, allowed }: { readonly statesOf: () => Promise<LowStates>; readonly allowed: number },
  context: JobContext,
): Promise<Factorisation> {
  let residualTarget = FIRST * h.orbitals;
  let best = await hypercontractedFactorisation(h, { ...options, residualTarget }, context);
  let block = fitOf(best);
  if (allowed === 0 || !block) return best;
  const states = await statesOf();
  const heaviest = MOST_NORM * hypercontractedNorm(block);
  let moved = await changeOf(h, best, states, context);
  for (let fit = 1; fit < FITS && moved > allowed; fit++) {
    // Levels move about like the square of the residual, or faster.
    const factor = Math.min(LOWERED.most, Math.max(LOWERED.least, Math.sqrt(allowed / moved)));
    residualTarget *= factor;
    const next = await hypercontractedFactorisation(h, { ...options, residualTarget, start: block }, context);
    const found = fitOf(next)!;
    if (hypercontractedNorm(found) > heaviest) break;
    const change = await changeOf(h, next, states, context);
    if (change >= moved) break;
    [best, block, moved] = [next, found, change];
  }
  return best;
}

const fitOf = ({ blocks }: Factorisation): HypercontractedFactors | undefined =>
  blocks.find((block): block is HypercontractedFactors => block.kind === 'hypercontracted');

async function changeOf(
  h: SpatialHamiltonian,
  factorisation: Factorisation,
  states: LowStates,
  context: JobContext,
): Promise<number> {
  const left = await hamiltonianOfFactors(h, factorisation, context);
  return left ? (await states.change(h, left, context)).centred : 0;
}

import { type Factorisation, lightParts, type Thinned } from '../factor';
import { fromProductForm, type SpatialHamiltonian, zeroOperator } from '../hamiltonian';
import type { JobContext } from '../job';
import { formatSignificant, fromHartree } from '../units';
import { hamiltonianOfFactors } from './energy-estimate-hamiltonian';
import type { LowStates } from './low-states';

/** Sizes below this are no rows: vectors have unit norm. */
const ROW_ZERO = 1e-9;
/** Between two cuts that are tried, and how often the last interval is halved (on a logarithmic scale). */
const STEP = Math.sqrt(10);
const HALVINGS = 3;
/** Below this part of the heaviest factor everything is kept. */
const LEAST = 1e-9;

/** How the spin-dependent two-electron parts were thinned. */
export interface LightPartsChoice {
  readonly factorisation: Factorisation;
  /** What was done and on which evidence, one sentence. */
  readonly note: string;
}

/**
 * Takes light rows out of spin–orbit triples and spin–spin factors while the levels and couplings of low states
 * near the Fermi level change by no more than `tolerance`, their mean field kept. An estimate: the rigorous bound is in
 * the residual.
 *
 * @param whole - with every factor of these parts
 * @param statesOf - of the whole of h
 * @param tolerance - hartree, ≥ 0
 */
export async function thinLightParts(
  h: SpatialHamiltonian,
  whole: Factorisation,
  occupations: readonly number[],
  { statesOf, tolerance }: { readonly statesOf: () => Promise<LowStates>; readonly tolerance: number },
  context: JobContext,
): Promise<LightPartsChoice> {
  const parts = await lightParts(whole, h.orbitals, occupations, context);
  if (parts.heaviest === 0) {
    return { factorisation: whole, note: 'no two-electron spin-dependent part to thin' };
  }
  if (tolerance === 0) return { factorisation: whole, note: 'nothing may be dropped: no row was taken out' };
  const states = await statesOf();
  const { orbitals, electrons, terms } = h;
  // Only what can change: the difference of two large numbers would drown it.
  const given = fromProductForm({
    ...{ orbitals, electrons, terms, constant: 0 },
    k: zeroOperator('even', orbitals),
    g: { ...h.g, charge: null },
  });
  const attempt = async (cut: number) => {
    context.report('choosing rows of the spin-dependent parts', 0, null);
    await context.checkpoint();
    const thinned = await parts.at(cut, context);
    const { light, meanField } = thinned;
    const factors = { ...whole, blocks: light, foldedMeanField: meanField, foldedConstant: 0 };
    const left = await hamiltonianOfFactors(given, factors, context);
    return {
      thinned,
      change: left ? (await states.change(given, left, context)).norm : Number.POSITIVE_INFINITY,
    };
  };
  for (let cut = parts.heaviest; cut > LEAST * parts.heaviest; cut /= STEP) {
    let best = await attempt(cut);
    if (best.change > tolerance) continue;
    // Between this cut and the one before, which was too large.
    let [low, high] = [cut, cut * STEP];
    for (let i = 0; i < HALVINGS && cut < parts.heaviest; i++) {
      const middle = Math.sqrt(low * high);
      const next = await attempt(middle);
      if (next.change > tolerance) high = middle;
      else [low, best] = [middle, next];
    }
    return {
      factorisation: best.thinned.factorisation,
      note: noteOf(best.thinned, best.change, states.description),
    };
  }
  return { factorisation: whole, note: 'every row of the spin-dependent parts is needed' };
}

function noteOf({ light }: Thinned, change: number, states: string): string {
  const rows = light.reduce((sum, block) => sum + countRows(block), 0);
  const factors = light.reduce((sum, { count }) => sum + count, 0);
  const wavenumbers = formatSignificant(fromHartree(change, 'cm-1'), 2);
  return (
    `spin-dependent two-electron part: ${factors} factors with ${rows} rows left, the mean field of the rest kept; ` +
    `levels and couplings of the lowest states near the Fermi level (${states}) change by ${wavenumbers} cm⁻¹ at ` +
    'most, to first order'
  );
}

function countRows(block: Thinned['light'][number]): number {
  const values =
    block.kind === 'triples' ? [...block.antisymmetricNorms, ...block.symmetricValues] : [...block.spectra];
  return values.filter((x) => Math.abs(x) > ROW_ZERO).length;
}

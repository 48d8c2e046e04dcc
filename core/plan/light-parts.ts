import { type Factorisation, lightParts, type Thinned } from '../factor';
import {
  fromProductForm,
  normalOrder,
  type OrbitalWindow,
  restrictToWindow,
  type SpatialHamiltonian,
  zeroOperator,
} from '../hamiltonian';
import type { JobContext } from '../job';
import { formatSignificant, fromHartree } from '../units';
import { windowCouplings } from '../verify';
import { hamiltonianOfFactors } from './energy-estimate-hamiltonian';

/** Orbitals of the window: at most 252 determinants, diagonalised in a second. */
const WINDOW = 5;
/** States whose levels and couplings are watched. */
const STATES = 12;
/** Sizes below this are no rows: vectors have unit norm. */
const ROW_ZERO = 1e-9;
/** Between two cuts that are tried. */
const STEP = Math.sqrt(10);
/** Below this part of the heaviest factor everything is kept. */
const LEAST = 1e-9;

/** How the spin-dependent two-electron parts were thinned. */
export interface LightPartsChoice {
  readonly factorisation: Factorisation;
  /** What was done and on which evidence, one sentence. */
  readonly note: string;
}

/**
 * Takes light rows out of spin–orbit triples and spin–spin factors while the levels and couplings of the lowest states
 * in a window of orbitals about the Fermi level change by no more than `tolerance`, their mean field kept. An estimate:
 * the rigorous bound is in the residual.
 *
 * @param whole - with every factor of these parts
 * @param tolerance - hartree, ≥ 0
 */
export async function thinLightParts(
  h: SpatialHamiltonian,
  whole: Factorisation,
  occupations: readonly number[],
  tolerance: number,
  context: JobContext,
): Promise<LightPartsChoice> {
  const parts = await lightParts(whole, h.orbitals, occupations, context);
  if (parts.heaviest === 0) {
    return { factorisation: whole, note: 'no two-electron spin-dependent part to thin' };
  }
  if (tolerance === 0) return { factorisation: whole, note: 'nothing may be dropped: no row was taken out' };
  const window = windowAboutFermiLevel(h, occupations);
  const states = await windowCouplings(restrictToWindow(h, window), STATES, context);
  const { orbitals, electrons, terms } = h;
  const bare = fromProductForm({
    ...{ orbitals, electrons, terms, constant: 0 },
    k: zeroOperator('even', orbitals),
    g: { ...h.g, charge: null },
  });
  const given = restrictToWindow(bare, window);
  const change = async ({ light, meanField }: Thinned) => {
    const factors = { ...whole, blocks: light, foldedMeanField: meanField, foldedConstant: 0 };
    const left = await hamiltonianOfFactors(bare, factors, context);
    return left ? states.change([given, restrictToWindow(left, window)]) : Number.POSITIVE_INFINITY;
  };
  for (let cut = parts.heaviest; cut > LEAST * parts.heaviest; cut /= STEP) {
    context.report('choosing rows of the spin-dependent parts', 0, null);
    await context.checkpoint();
    const thinned = await parts.at(cut, context);
    const found = await change(thinned);
    if (found > tolerance) continue;
    return {
      factorisation: thinned.factorisation,
      note: noteOf(thinned, found, window, states.levels.length),
    };
  }
  return { factorisation: whole, note: 'every row of the spin-dependent parts is needed' };
}

/**
 * Partly filled orbitals, and with them the next ones below and above by the diagonal of the Fock operator. The others
 * are frozen with their occupations.
 */
function windowAboutFermiLevel(h: SpatialHamiltonian, occupations: readonly number[]): OrbitalWindow {
  const { orbitals: n } = h;
  const half = Float64Array.from(occupations, (x) => x / 2);
  const { even } = normalOrder({ ...h, g: { ...h.g, spinOrbit: null, spinSpin: null } }, half, half);
  const level = (p: number) => even.planes[p * n + p]!;
  const byEnergy = Array.from({ length: n }, (_, p) => p).sort((p, q) => level(p) - level(q) || p - q);
  const filled = byEnergy.filter((p) => occupations[p] === 2).reverse();
  const empty = byEnergy.filter((p) => occupations[p] === 0);
  const chosen = byEnergy.filter((p) => occupations[p] !== 0 && occupations[p] !== 2).slice(0, WINDOW);
  for (let below = true; chosen.length < Math.min(WINDOW, n); below = !below) {
    const next = (below ? filled : empty).shift() ?? (below ? empty : filled).shift();
    if (next !== undefined) chosen.push(next);
  }
  const frozen = occupations.reduce((sum, x, p) => (chosen.includes(p) ? sum : sum + x), 0);
  return {
    orbitals: chosen.sort((p, q) => p - q),
    electrons: Math.round(h.electrons - frozen),
    occupations,
  };
}

function noteOf({ light }: Thinned, change: number, { orbitals }: OrbitalWindow, states: number): string {
  const rows = light.reduce((sum, block) => sum + countRows(block), 0);
  const factors = light.reduce((sum, { count }) => sum + count, 0);
  const wavenumbers = formatSignificant(fromHartree(change, 'cm-1'), 2);
  return (
    `spin-dependent two-electron part: ${factors} factors with ${rows} rows left, the mean field of the rest kept; ` +
    `levels and couplings of the ${states} lowest states of ${orbitals.length} orbitals about the Fermi level ` +
    `change by ${wavenumbers} cm⁻¹ at most (an estimate)`
  );
}

function countRows(block: Thinned['light'][number]): number {
  const values =
    block.kind === 'triples' ? [...block.antisymmetricNorms, ...block.symmetricValues] : [...block.spectra];
  return values.filter((x) => Math.abs(x) > ROW_ZERO).length;
}

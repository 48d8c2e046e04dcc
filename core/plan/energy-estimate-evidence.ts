import { formatVariant, type VariantName } from '../encode';
import { restrictToWindow } from '../hamiltonian';
import type { IntegralSet } from '../integrals';
import type { JobContext } from '../job';
import { exactSpectrum, type Spectrum } from '../verify';
import { Encodings } from './encodings';
import { EnergyEstimates, randomDeterminants, type TruncationEnergy } from './energy-estimate';
import { type Check, check, type TruncationEvidence } from './evidence';
import { FramedEncodings } from './framed-encodings';
import { hamiltonianOf, occupationsOf, type SystemRequest } from './system';

const DIAGONAL = 'no expectation value moves by more than the one-norm of what was dropped';

/** The estimates of one variant and the checks that follow from the bound; null where nothing was dropped. */
export async function truncationEvidence(
  name: string,
  oneNormBound: number,
  energy: TruncationEnergy | string | null,
  rounding: number,
  context: JobContext,
): Promise<{ readonly evidence: TruncationEvidence; readonly checks: readonly Check[] } | null> {
  if (energy === null || typeof energy === 'string') return null;
  const random = await randomDeterminants(energy, context);
  const { firstOrder, secondOrder } = energy;
  const largest = Math.max(Math.abs(random.mean), random.spread, random.singles, random.doubles);
  const tolerance = oneNormBound + rounding;
  return {
    evidence: { oneNormBound, firstOrder, secondOrder, random },
    checks: [
      check(`${name}: truncation, first order of the reference`, firstOrder, 0, tolerance, DIAGONAL),
      check(`${name}: truncation, random determinants`, largest, 0, tolerance, DIAGONAL),
    ],
  };
}

/**
 * Encodings of the whole set, truncated, and seen in the window: what truncation does there, against the levels of the
 * window itself. Nothing where nothing may be dropped or there is no window.
 *
 * @param exact - levels of the window
 */
export async function windowChecks(
  set: IntegralSet,
  request: SystemRequest & { readonly threshold: number; readonly states: number },
  variants: readonly VariantName[],
  exact: Spectrum,
  rounding: number,
  context: JobContext,
): Promise<Check[]> {
  const { window, threshold, states } = request;
  if (!window || threshold === 0) return [];
  const whole = { ...request, window: null };
  const [hamiltonian, occupations] = [hamiltonianOf(set, whole), occupationsOf(set, whole)];
  if (hamiltonian.kind !== 'spatial' || occupations === null) return [];
  const orbitals = window.orbitals.map((orbital) => orbital - 1);
  const inside = Math.round(orbitals.reduce((sum, p) => sum + occupations[p]!, 0));
  const choice = { orbitals, electrons: window.electrons ?? inside, occupations };
  const encodings = new FramedEncodings(
    hamiltonian,
    (h) => new Encodings(h, threshold, occupations, threshold),
    request.frames,
  );
  const estimates = new EnergyEstimates(hamiltonian, occupations);
  const checks: Check[] = [];
  const seen = new Set<TruncationEnergy>();
  for (const variant of variants) {
    if (encodings.refusal(variant) !== null) continue;
    const encoding = await encodings.of(variant, context);
    const factorisation = await encodings.factorisationOf(variant, context);
    const frame = await encodings.frameOf(variant, context);
    const energy = await estimates.of(encoding, factorisation, context, frame);
    if (energy === null || typeof energy === 'string' || seen.has(energy) || energy.kept.kind !== 'spatial') {
      continue;
    }
    seen.add(energy);
    const { values, errorBound } = await exactSpectrum(
      restrictToWindow(energy.kept, choice),
      { states },
      context,
    );
    checks.push(
      check(
        `${formatVariant(variant)}: all orbitals truncated, seen in the window, largest difference of a level`,
        values.reduce((widest, value, i) => Math.max(widest, Math.abs(value - exact.values[i]!)), 0),
        0,
        encoding.residual.oneNormBound + rounding + errorBound + exact.errorBound,
        'the window with its frozen determinant is a part of the sector: the one-norm bounds its levels (Weyl)',
      ),
    );
  }
  return checks;
}

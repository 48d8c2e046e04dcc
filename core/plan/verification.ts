import { type Encoding, formatVariant, type VariantName } from '../encode';
import { heldTerms } from '../hamiltonian';
import type { IntegralSet, SelectableTerm } from '../integrals';
import type { JobContext } from '../job';
import { exactSpectrum, referenceEigenvalues, type Spectrum } from '../verify';
import { proveBlock } from './block-proof';
import { Encodings } from './encodings';
import { EnergyEstimates } from './energy-estimate';
import { truncationEvidence, windowChecks } from './energy-estimate-evidence';
import { type Check, check, type Evidence, type TruncationEvidence } from './evidence';
import type { Frame } from './frame';
import { frameChecks } from './frame-checks';
import { FramedEncodings } from './framed-encodings';
import { defaultVariants } from './run';
import { shiftChecks } from './shift-checks';
import { hamiltonianOf, occupationsOf, type SystemRequest } from './system';

export interface VerificationRequest extends SystemRequest {
  /** null: the default set of `compare`. */
  readonly variants: readonly VariantName[] | null;
  /** Sum of LCU norms that truncation may drop, hartree. */
  readonly threshold: number;
  /** How many of the lowest levels, counted with multiplicity. */
  readonly states: number;
}

/** Double-precision arithmetic over some thousand determinants, hartree. */
const ARITHMETIC = 1e-9;
/** What the data sets' own generator promises for its reference levels, hartree. */
const REFERENCE = 1e-8;
const ROUNDING_SOURCE =
  'operator norm of what truncation and the bits of the simulated tables may change (derived in the design)';
/** Levels of a doublet of Kramers agree to this, hartree. */
const DEGENERACY = 1e-9;

/**
 * Exact levels of H beside those of the Hamiltonian that each encoding stands for, rebuilt from its factors alone,
 * and the checks that follow.
 *
 * @param reference - parsed `reference.json` of the data set, if it has one: levels computed elsewhere
 * @throws InputError `sector-too-large` where exact diagonalisation is out of reach
 */
export async function runVerification(
  set: IntegralSet,
  request: VerificationRequest,
  context: JobContext,
  reference: unknown = null,
): Promise<Evidence> {
  const hamiltonian = hamiltonianOf(set, request);
  const terms = hamiltonian.kind === 'spatial' ? hamiltonian.terms : heldTerms(set);
  const states = { states: request.states };
  const exact = await exactSpectrum(hamiltonian, states, context);
  const stored = await exactSpectrum(hamiltonian, { ...states, form: 'stored' }, context);
  const checks: Check[] = [
    check(
      'product form against stored form, largest difference of a level',
      largestDifference(stored.values, exact.values),
      0,
      ARITHMETIC + exact.errorBound + stored.errorBound,
      'two assemblies of H, one without the reordering of operators',
    ),
    ...againstReference(reference, terms, request, exact),
    ...kramers(exact.values, hamiltonian.electrons, exact.dim),
  ];

  const occupations = occupationsOf(set, request);
  const encodings = new FramedEncodings(
    hamiltonian,
    (h) => new Encodings(h, request.threshold, occupations, request.threshold),
    request.frames,
  );
  const checkedFrames = new Set<Frame>();
  const estimates = new EnergyEstimates(hamiltonian, occupations);
  const truncation: Record<string, TruncationEvidence> = {};
  const spectra: Record<string, number[]> = {};
  const known = new Map<Encoding, Float64Array>();
  const blockEncoding: Record<string, Evidence['blockEncoding'][string]> = {};
  const variants = request.variants ?? defaultVariants(set);
  for (const variant of variants) {
    const name = formatVariant(variant);
    const encoding = await encodings.of(variant, context);
    const frame = await encodings.frameOf(variant, context);
    if (frame && !checkedFrames.has(frame)) {
      checkedFrames.add(frame);
      checks.push(...(await frameChecks(hamiltonian, frame, exact, request.states, ARITHMETIC, context)));
    }
    let levels = known.get(encoding);
    if (!levels) {
      const encoded = await exactSpectrum(encoding.rebuild(), states, context);
      levels = encoded.values;
      known.set(encoding, levels);
      checks.push(
        encodedCheck(
          name,
          encoding,
          largestDifference(levels, exact.values),
          exact.errorBound + encoded.errorBound,
        ),
        ...(await shiftChecks(
          name,
          frame?.hamiltonian ?? hamiltonian,
          encoding,
          request.states,
          ARITHMETIC,
          context,
        )),
      );
    }
    spectra[name] = Array.from(levels);
    const factorisation = await encodings.factorisationOf(variant, context);
    const energy = await estimates.of(encoding, factorisation, context, frame);
    const dropped = await truncationEvidence(
      name,
      encoding.residual.oneNormBound,
      energy,
      ARITHMETIC,
      context,
    );
    if (dropped) {
      truncation[name] = dropped.evidence;
      checks.push(...dropped.checks);
    }
    const proof = await proveBlock(frame?.hamiltonian ?? hamiltonian, encoding, variant, context);
    if (!proof) continue;
    const { maxError, bound, columns } = proof;
    blockEncoding[name] = { maxError, bound, columns };
    checks.push(
      proof.check,
      check(`${name}: emitted circuit against H, largest element`, maxError, 0, bound, ROUNDING_SOURCE),
    );
  }
  checks.push(...(await windowChecks(set, request, variants, exact, ARITHMETIC, context)));
  const frames = encodings.records();
  return {
    schema: 'spinwright-evidence/1',
    electrons: hamiltonian.electrons,
    terms,
    spectrum: { exact: Array.from(exact.values), variants: spectra },
    truncation,
    blockEncoding,
    ...(frames.length > 0 ? { frames } : {}),
    checks,
  };
}

function encodedCheck(name: string, encoding: Encoding, difference: number, errorBound: number): Check {
  const bound = encoding.residual.oneNormBound;
  return check(
    `${name}: encoded against exact, largest difference of a level`,
    difference,
    0,
    bound + ARITHMETIC + errorBound,
    bound === 0
      ? 'nothing was dropped'
      : 'no eigenvalue moves by more than the one-norm of what was dropped (Weyl)',
  );
}

function againstReference(
  document: unknown,
  terms: readonly SelectableTerm[],
  { electrons, window }: SystemRequest,
  { values: levels, errorBound }: Spectrum,
): Check[] {
  const listed = electrons === null && !window ? referenceEigenvalues(document, terms) : null;
  if (!listed) return [];
  return [
    check(
      'exact levels against reference.json, largest difference',
      largestDifference(levels, Float64Array.from(listed)),
      0,
      REFERENCE + errorBound,
      'configuration interaction of the program that made the integrals',
    ),
  ];
}

/** With an odd number of electrons every level of a field-free Hamiltonian is at least twofold (Kramers 1930). */
function kramers(levels: Float64Array, electrons: number, dim: number): Check[] {
  const whole = levels.length - (levels.length < dim ? levels.length % 2 : 0);
  if (electrons % 2 === 0 || whole < 2) return [];
  let widest = 0;
  for (let i = 0; i + 1 < whole; i += 2) widest = Math.max(widest, levels[i + 1]! - levels[i]!);
  return [
    check(
      'Kramers pairs, largest splitting',
      widest,
      0,
      DEGENERACY,
      'H. A. Kramers, Proc. Acad. Amsterdam 33, 959 (1930): time reversal, odd number of electrons',
    ),
  ];
}

function largestDifference(a: Float64Array, b: Float64Array): number {
  let widest = 0;
  for (let i = 0; i < Math.min(a.length, b.length); i++) widest = Math.max(widest, Math.abs(a[i]! - b[i]!));
  return widest;
}

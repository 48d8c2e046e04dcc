import { parseVariant } from '../../core/encode';
import { confidenceFactor, errorBudget, targetRequest } from '../../core/estimate';
import {
  type IntegralSet,
  loadIntegrals,
  type Recipe,
  resolveInputs,
  throwFirstError,
} from '../../core/integrals';
import type { JobContext } from '../../core/job';
import { inspectIntegrals, runComparison, runVerification } from '../../core/plan';
import { toHartree } from '../../core/units';
import { blobFileSet } from './files';
import { webReadPlatform } from './hdf5';
import { listParts } from './parts';
import type { Ask, JobName, Jobs, Source } from './protocol';

/** The set read last: the jobs of one window are nearly always about the same files. */
let held: { readonly id: number; readonly set: IntegralSet; readonly recipe: Recipe } | null = null;

async function integralsOf(source: Source, context: JobContext): Promise<NonNullable<typeof held>> {
  if (held?.id === source.id) return held;
  held = null; // two large sets at once might not fit
  const files = blobFileSet(source.name, source.files);
  const chosen = source.chosenOneByOne ? { chosen: source.files.map((f) => f.path) } : {};
  const {
    recipe,
    recipeName,
    files: resolved,
  } = await resolveInputs({ files, ...chosen }, webReadPlatform, context);
  const set = await loadIntegrals(recipe, resolved, webReadPlatform, context, {
    recipeName,
    onError: 'keep',
  });
  held = { id: source.id, set, recipe };
  return held;
}

async function read({ source }: Jobs['read']['input'], context: JobContext): Promise<Jobs['read']['output']> {
  const { set, recipe } = await integralsOf(source, context);
  const { title, kind, orbitals, electrons, constant, terms, findings, files } = await inspectIntegrals(
    set,
    context,
  );
  return {
    title,
    kind,
    orbitals,
    electrons,
    constant,
    terms,
    findings,
    parts: listParts(set, recipe),
    bytes: files.reduce((sum, f) => sum + f.bytes, 0),
    meanFieldCoversActive: set.kind === 'spatial' && set.meanFieldCoversActive,
  };
}

async function reckon(
  { source, ask, variants }: Jobs['reckon']['input'],
  context: JobContext,
  tell: (news: Jobs['reckon']['news']) => void,
): Promise<Jobs['reckon']['output']> {
  const { set } = await integralsOf(source, context);
  throwFirstError(set.findings);
  const request = { ...ask, variants: variants.map(parseVariant) };
  const { comparison } = await runComparison(set, request, context, {
    onStart: (name) => tell({ status: 'started', name }),
    onEncoded: (name, shape) => tell({ status: 'sized', name, shape }),
    onOutcome: tell,
  });
  return { hamiltonian: comparison.hamiltonian, recommendation: comparison.recommendation };
}

/** What truncation may drop: the same as in the reckoning, so that the same encodings are checked. */
function thresholdOf(ask: Ask): number {
  if (ask.threshold !== 'auto') return ask.threshold;
  const request = targetRequest(toHartree(ask.target.value, ask.target.unit), {
    meaning: ask.target.meaning,
  });
  return errorBudget(request, confidenceFactor(request.accuracy)).truncation;
}

const STATES = 8;

async function prove(
  { source, ask, variants }: Jobs['prove']['input'],
  context: JobContext,
): Promise<Jobs['prove']['output']> {
  const { set } = await integralsOf(source, context);
  throwFirstError(set.findings);
  const { terms, electrons, occupations, frames } = ask;
  const evidence = await runVerification(
    set,
    {
      terms,
      electrons,
      occupations,
      ...(frames ? { frames } : {}),
      variants: variants.map(parseVariant),
      threshold: thresholdOf(ask),
      states: STATES,
    },
    context,
  );
  const levels = evidence.spectrum.variants;
  return {
    electrons: evidence.electrons,
    terms: evidence.terms,
    exact: evidence.spectrum.exact,
    variants: Object.entries(levels).map(([name, values]) => ({ name, levels: values })),
    checks: [
      ...evidence.checks,
      ...Object.entries(evidence.blockEncoding).map(([name, { maxError, bound, columns }]) => ({
        name: `${name}: emitted block against H, ${columns} columns`,
        value: maxError,
        expected: 0,
        tolerance: bound,
        source: 'the emitted circuit, simulated column by column',
        ok: maxError <= bound,
      })),
    ],
    notRun: [
      ...variants
        .filter((name) => !levels[name])
        .map((name) => ({ name, reason: 'the variant is left out for this set' })),
      ...(Object.keys(evidence.blockEncoding).length === 0
        ? [
            {
              name: 'emitted circuits, simulated against H',
              reason: 'simulation is for systems of at most three orbitals; choose a smaller set or a window',
            },
          ]
        : []),
    ],
  };
}

/** Every job by its name. */
export const jobs: {
  readonly [K in JobName]: (
    input: Jobs[K]['input'],
    context: JobContext,
    tell: (news: Jobs[K]['news']) => void,
  ) => Promise<Jobs[K]['output']>;
} = { read, reckon, prove };

import { expandVariants } from '../../core/encode';
import type { ComparisonRequest, FrameChoice, FrameRequest, Meaning, OrbitalChoice } from '../../core/plan';
import type { CompareRequest, Manner } from './request';
import {
  parseBits,
  parseCount,
  parseFactors,
  parseOccupations,
  parseOrbitals,
  parseOverlaps,
  parseTarget,
  parseTerms,
  parseThreshold,
  usageError,
} from './values';

/** What commander hands over: the text of each flag, or true for one without a value. */
export type Flags = Record<string, string | boolean | undefined>;
const ANY = Number.MAX_SAFE_INTEGER;

export const textOf = (flag: string | boolean | undefined): string | null =>
  typeof flag === 'string' ? flag : null;

export function compareRequest(files: readonly string[], flags: Flags): CompareRequest {
  const comparison = { ...costing(flags), variants: variantsOf(flags) };
  return { command: 'compare', ...inputFiles(files, flags), comparison, mixingState: mixingStateOf(flags) };
}

/** Where mixing is kept; refused where no variant mixes anything. */
function mixingStateOf(flags: Flags): string | null {
  const path = textOf(flags.mixingState);
  if (path === null) return null;
  const mixing = variantsOf(flags)?.some(({ factorisation }) => MIXING.includes(factorisation));
  if (mixing) return path;
  throw usageError(
    '--mixing-state',
    'no variant with mixed factors',
    'a compressed or mixed variant',
    'Add e.g. --variants compressed/separate/swap-layers/optimised/clean.',
  );
}

const MIXING: readonly string[] = ['compressed', 'mixed'];

/** Everything that decides the costs of a variant. */
export function costing(flags: Flags): Omit<ComparisonRequest, 'variants'> {
  const meaning = String(flags.meaning) as Meaning;
  const overlaps = parseOverlaps(String(flags.overlap));
  if (overlaps.length === 2 && meaning !== 'splitting') {
    throw usageError(
      '--overlap',
      'two numbers',
      'one, as there is one level',
      'Add --meaning splitting or give one.',
    );
  }
  const cap = textOf(flags.qubitsMax);
  const factors = parseFactors(String(flags.factors));
  return {
    ...selection(flags),
    target: { ...parseTarget(String(flags.target)), meaning },
    threshold: parseThreshold(String(flags.threshold)),
    bits: parseBits(String(flags.bits)),
    ...(factors === 'auto' ? {} : { factors }),
    overlaps: meaning === 'splitting' && overlaps.length === 1 ? [overlaps[0]!, overlaps[0]!] : overlaps,
    qubitsMax: cap === null ? null : parseCount('--qubits-max', cap, 1, ANY),
  };
}

export function selection(flags: Flags) {
  const occupations = textOf(flags.occupations);
  return {
    terms: parseTerms(String(flags.terms)),
    electrons: electronsOf(flags),
    occupations: occupations === null ? null : parseOccupations(occupations),
    window: windowOf(flags),
    ...framesOf(flags),
  };
}

/** Nothing where both frames are as given, so that such a request is what it always was. */
function framesOf(flags: Flags): { readonly frames?: FrameRequest } {
  const [spin, orbital] = [flags.spinFrame, flags.orbitalFrame].map(
    (flag) => String(flag ?? 'given') as FrameChoice,
  );
  return spin === 'given' && orbital === 'given' ? {} : { frames: { spin: spin!, orbital: orbital! } };
}

function windowOf(flags: Flags): OrbitalChoice | null {
  const orbitals = textOf(flags.window);
  const electrons = textOf(flags.windowElectrons);
  if (orbitals !== null) {
    return {
      orbitals: parseOrbitals(orbitals),
      electrons: electrons === null ? null : parseCount('--window-electrons', electrons, 0, 800),
    };
  }
  if (electrons === null) return null;
  throw usageError(
    '--window-electrons',
    'no window',
    'the orbitals too',
    'Add --window, such as --window 3-6.',
  );
}

export function inputFiles(files: readonly string[], flags: Flags) {
  return { files, recipe: textOf(flags.recipe) };
}

export function electronsOf(flags: Flags): number | null {
  const given = textOf(flags.electrons);
  return given === null ? null : parseCount('--electrons', given, 0, 800);
}

export function variantsOf(flags: Flags) {
  const given = textOf(flags.variants);
  return given === null ? null : expandVariants(given);
}

export function readManner(flags: Flags): Manner {
  return {
    json: flags.json === true,
    quiet: flags.quiet === true,
    seed: parseCount('--seed', String(flags.seed), 0, 2 ** 32 - 1),
    workers: parseCount('--workers', String(flags.workers), 1, 64),
    trace: flags.trace === true,
  };
}

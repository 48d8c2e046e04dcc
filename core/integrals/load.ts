import { type Finding, InputError, type JobContext } from '../job';
import type { IntegralSet, OneElectronPart, SpatialIntegrals, TwoElectronPart } from './integral-set';
import type { SpinFreeContents } from './raw';
import { type BuiltPart, buildArray, buildList, buildSpinFree } from './recipe/build-part';
import { type ResolvedPart, resolvePart } from './recipe/part';
import { openFile, orbitalsFromArrays, type PartContents, provenanceOf, readPart } from './recipe/read-part';
import type { Recipe } from './recipe/recipe';
import { loadSpinors } from './recipe/spinors';
import { systemFacts } from './recipe/system';
import { unusedFiles } from './recipe/unused';
import type { FileSet, ReadPlatform } from './source';
import type { Term } from './terms';
import { checkComponents } from './validate/repeats';
import { validate } from './validate/validate';

export interface LoadOptions {
  /** Only parts of these terms are read; the spin-free file always is. @defaultValue all */
  readonly terms?: readonly Term[];
  /** `throw` stops at the first finding of severity error; `keep` returns it with the set, for showing. @defaultValue `throw` */
  readonly onError?: 'throw' | 'keep';
  /** Name of the recipe in messages. @defaultValue `recipe` */
  readonly recipeName?: string;
}

/**
 * Reads what a recipe names and brings it into the conventions of the core.
 *
 * Every stored number is used as A = scale × unit × (2 if half inside) × (½ per spin index if spin = s) × stored;
 * what A is the coefficient of, its role says. Arrays are filled in packed form; the packed two-electron
 * spin–orbit array is used as it was read.
 *
 * @returns a set in hartree with all findings; nothing is repaired.
 * @throws InputError for files that are missing or unreadable, contradictions between recipe and files, and, with
 *   `onError: "throw"`, for the first error among the findings.
 */
export async function loadIntegrals(
  recipe: Recipe,
  files: FileSet,
  platform: ReadPlatform,
  context: JobContext,
  options: LoadOptions = {},
): Promise<IntegralSet> {
  const name = options.recipeName ?? 'recipe';
  const all = recipe.parts.map((_, index) => resolvePart(recipe, index, name));
  const parts = all.filter(
    (part) => part.facts.numIndices === 0 || (options.terms?.includes(part.term) ?? true),
  );
  // Missing files are told before the first long read.
  for (const part of parts) openFile(files, part.file);
  const set =
    parts[0]?.role === 'spinor'
      ? await loadSpinors(recipe, name, parts, files, platform, context)
      : await loadSpatial(recipe, name, parts, files, platform, context);
  if ((options.onError ?? 'throw') === 'throw') throwFirstError(set.findings);
  return set;
}

/** @throws InputError made from the first finding of severity error, if there is one. */
export function throwFirstError(findings: readonly Finding[]): void {
  const errors = findings.filter((finding) => finding.severity === 'error');
  const [first] = errors;
  if (first === undefined) return;
  const more = errors.length - 1;
  const { code, where, found, expected } = first;
  const mend =
    more > 0
      ? `${first.mend} (${more} more problem${more > 1 ? 's' : ''}; "inspect" lists all.)`
      : first.mend;
  throw new InputError({ code, where, found, expected, mend });
}

async function loadSpatial(
  recipe: Recipe,
  name: string,
  parts: readonly ResolvedPart[],
  files: FileSet,
  platform: ReadPlatform,
  context: JobContext,
): Promise<SpatialIntegrals> {
  const progress = progressOver(parts, files, context);
  const contents = new Map<ResolvedPart, PartContents>();
  const wholes: SpinFreeContents[] = [];
  let fileConstant: number | null = null;
  for (const part of parts.filter(({ facts }) => facts.numIndices === 0)) {
    const read = await readPart(part, null, files, platform, context);
    if (read.kind !== 'spin-free') throw notSpinFree(part, read);
    contents.set(part, read);
    wholes.push(read);
    fileConstant = (fileConstant ?? 0) + part.factor * read.constant;
    progress(part);
  }
  const orbitals = await agreedOrbitals(recipe, name, parts, wholes, files, platform, context);
  const oneElectron: OneElectronPart[] = [];
  const twoElectron: TwoElectronPart[] = [];
  const findings: Finding[] = [];
  for (const part of parts) {
    const read = contents.get(part) ?? (await readPart(part, orbitals, files, platform, context));
    const built = await buildPart(part, read, orbitals, context);
    oneElectron.push(...built.oneElectron);
    twoElectron.push(...built.twoElectron);
    findings.push(...built.findings);
    contents.delete(part);
    if (part.facts.numIndices > 0) progress(part);
    await context.checkpoint();
  }
  const set = {
    kind: 'spatial' as const,
    orbitals,
    ...systemFacts(recipe, name, orbitals, wholes, fileConstant),
    oneElectron,
    twoElectron,
    meanFieldCoversActive: parts.some((part) => part.coversActive),
    provenance: provenanceOf(recipe, files, parts),
  };
  findings.push(...checkComponents(parts.map((part) => ({ ...part, origin: part.file }))));
  findings.push(...(await validate(set, context)), ...unusedFiles(recipe, files));
  return { ...set, findings };
}

async function buildPart(
  part: ResolvedPart,
  read: PartContents,
  orbitals: number,
  context: JobContext,
): Promise<BuiltPart> {
  switch (read.kind) {
    case 'spin-free':
      return buildSpinFree(part, read);
    case 'list':
      return buildList(part, read.list, orbitals, context);
    case 'array':
      return buildArray(part, read.raw, orbitals, context);
    case 'spinor':
      throw notSpinFree(part, read);
  }
}

/** Reports bytes read of all files of the parts. */
function progressOver(parts: readonly ResolvedPart[], files: FileSet, context: JobContext) {
  const sizes = new Map(parts.map((part) => [part.file, openFile(files, part.file).size]));
  const total = [...sizes.values()].reduce((a, b) => a + b, 0);
  let done = 0;
  return (part: ResolvedPart) => {
    done += sizes.get(part.file) ?? 0;
    sizes.delete(part.file);
    context.report('load integrals', done, total);
  };
}

async function agreedOrbitals(
  recipe: Recipe,
  name: string,
  parts: readonly ResolvedPart[],
  wholes: readonly SpinFreeContents[],
  files: FileSet,
  platform: ReadPlatform,
  context: JobContext,
): Promise<number> {
  if (recipe.spinors !== undefined) {
    throw new InputError({
      code: 'orbitals',
      where: `${name}: /spinors`,
      found: `${recipe.spinors} spinors, but no part over spinors`,
      expected: '"orbitals", the number of spatial orbitals',
      mend: 'Use "orbitals" instead.',
    });
  }
  let orbitals = recipe.orbitals ?? null;
  let source = `${name}: /orbitals`;
  for (const whole of wholes) {
    if (orbitals !== null && whole.orbitals !== orbitals) {
      throw new InputError({
        code: 'orbitals',
        where: whole.origin,
        found: `${whole.orbitals} orbitals`,
        expected: `${orbitals}, as ${source} says`,
        mend: 'Correct one of the two, or remove the file that belongs to another orbital space.',
      });
    }
    if (orbitals === null) source = whole.origin;
    orbitals = whole.orbitals;
  }
  orbitals ??= await orbitalsFromArrays(parts, files, platform, context);
  if (orbitals !== null) return orbitals;
  throw new InputError({
    code: 'orbitals',
    where: `${name}: /orbitals`,
    found: 'no number of orbitals in recipe or files',
    expected: 'one',
    mend: 'Add "orbitals" to the recipe.',
  });
}

function notSpinFree(part: ResolvedPart, read: PartContents): InputError {
  return new InputError({
    code: 'not-spin-free',
    where: part.file,
    found: read.kind === 'spinor' ? 'integrals over complex spinors' : 'an array',
    expected: `a spin-free file, because part "${part.id}" has the role "spin-free"`,
    mend: read.kind === 'spinor' ? 'Set the role to "spinor".' : 'Choose the role of an array.',
  });
}

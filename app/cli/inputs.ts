import { stat } from 'node:fs/promises';
import { basename, dirname } from 'node:path';
import {
  type ByteSource,
  type IntegralSet,
  loadIntegrals,
  parseJson,
  parseRecipe,
  type ResolvedInputs,
  resolveInputs,
  type SelectableTerm,
  TERMS,
  type Term,
} from '../../core/integrals';
import { InputError, type JobContext } from '../../core/job';
import { folderFiles, namedFiles } from './files';
import { nodeReadPlatform } from './hdf5';
import type { InputFiles } from './request';

/** Recipes and references are written by hand or hold some hundred numbers. */
const MOST_JSON = 2 ** 20;

/** Finds out what the named files are and how they are to be read. */
export async function openInputs(
  { files, recipe }: InputFiles,
  context: JobContext,
): Promise<ResolvedInputs> {
  const [only] = files;
  const folder = files.length === 1 && (await isFolder(only!)) ? only! : null;
  if (recipe !== null) {
    const set = folder === null ? await namedFiles(files) : await folderFiles(folder);
    return { recipe: await readRecipe(recipe), files: set, origin: 'recipe', recipeName: recipe };
  }
  if (folder !== null) return resolveInputs({ files: await folderFiles(folder) }, nodeReadPlatform, context);
  if (files.length === 1 && only!.endsWith('.recipe.json')) {
    await namedFiles(files); // says so where it is missing
    const set = await folderFiles(dirname(only!));
    return resolveInputs({ files: set, chosen: [basename(only!)] }, nodeReadPlatform, context);
  }
  const set = await namedFiles(files);
  return resolveInputs(
    { files: set, chosen: files.map((file) => basename(file)) },
    nodeReadPlatform,
    context,
  );
}

/**
 * Reads the integrals, only what the terms need.
 * @param onError - `keep` returns findings of severity error with the set instead of throwing the first
 */
export function loadInputs(
  { recipe, files, recipeName }: ResolvedInputs,
  terms: readonly SelectableTerm[] | 'all',
  onError: 'throw' | 'keep',
  context: JobContext,
): Promise<IntegralSet> {
  const options = { recipeName, onError, ...(terms === 'all' ? {} : { terms: neededTerms(terms) }) };
  return loadIntegrals(recipe, files, nodeReadPlatform, context, options);
}

/** The computed mean field is made from the two-electron part. */
function neededTerms(terms: readonly SelectableTerm[]): readonly Term[] {
  return TERMS.filter((term) => terms.includes(term) || (term === 'so2' && terms.includes('so2mf')));
}

async function isFolder(path: string): Promise<boolean> {
  try {
    return (await stat(path)).isDirectory();
  } catch {
    return false; // what is missing is said where it is opened
  }
}

async function readRecipe(path: string) {
  const [source] = (await namedFiles([path])).list();
  return parseRecipe(await readText(source!), path);
}

/** The data set's levels from elsewhere, if it brings any; null where there are none. */
export async function readReference({ files }: ResolvedInputs): Promise<unknown> {
  const source = files.open('reference.json');
  return source ? parseJson(await readText(source), source.path) : null;
}

/** @throws InputError `too-large`, `not-utf8` */
async function readText(source: ByteSource): Promise<string> {
  const refuse = (code: string, found: string, expected: string): InputError =>
    new InputError({ code, where: source.path, found, expected, mend: 'Is it the right file?' });
  if (source.size > MOST_JSON) {
    throw refuse('too-large', `${source.size} bytes`, `a JSON file of at most ${MOST_JSON} bytes`);
  }
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(await source.read(0, source.size));
  } catch {
    throw refuse('not-utf8', 'bytes that are no UTF-8', 'JSON in UTF-8');
  }
}

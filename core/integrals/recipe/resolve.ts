import { InputError, type JobContext } from '../../job';
import type { ByteSource, FileSet, ReadPlatform } from '../source';
import { parseJson } from './json';
import { parseRecipe } from './parse';
import type { Recipe } from './recipe';
import { suggestRecipe } from './suggest';
import { isTemplateName, templateParts, templateRecipe } from './template';
import { isFcidumpName, wholeRole } from './whole';

/** What the user pointed at. */
export interface InputChoice {
  readonly files: FileSet;
  /** Paths in `files` that were named one by one; absent where a whole folder (or one drop) was. */
  readonly chosen?: readonly string[];
}

interface WholeFile {
  readonly path: string;
  readonly role: 'spin-free' | 'spinor';
}

export interface ResolvedInputs {
  readonly recipe: Recipe;
  readonly files: FileSet;
  /** What the recipe was made from. */
  readonly origin: 'recipe' | 'template' | 'spin-free file' | 'array names';
  /** Name of the recipe in messages: the recipe file, `meta.json`, or the file it was made for. */
  readonly recipeName: string;
}

/**
 * Finds the recipe that FILES stand for: one recipe; a folder's only `*.recipe.json`; the built-in template where
 * `meta.json` has `arrays`; a lone FCIDUMP or TREXIO file; one such file plus arrays with template names.
 *
 * @throws InputError `no-recipe` with the candidates, or with the recipe that could be written for the files.
 */
export async function resolveInputs(
  choice: InputChoice,
  platform: ReadPlatform,
  context: JobContext,
): Promise<ResolvedInputs> {
  const { files, chosen } = choice;
  const listed = (
    chosen ??
    files
      .list()
      .map((file) => file.path)
      .filter((path) => !path.includes('/'))
  ).map((path) => {
    const source = files.open(path);
    if (source === undefined) throw noSuchFile(path, files);
    return source;
  });
  const recipes = listed.filter((file) => /\.recipe\.json$/i.test(file.path));
  if (recipes.length > 1) throw tooMany(files, recipes, 'recipe');
  if (recipes.length === 1) {
    const recipeName = recipes[0]!.path;
    return {
      recipe: parseRecipe(await readText(recipes[0]!), recipeName),
      files,
      origin: 'recipe',
      recipeName,
    };
  }
  const named = listed.filter((file) => isFcidumpName(file.path));
  const template = await fromMeta(listed, named, files);
  if (template !== null) return template;
  const wholes = await wholeFiles(listed, platform, context);
  if (wholes.length > 1) throw tooMany(files, wholes, 'FCIDUMP or TREXIO file');
  const [whole] = wholes;
  if (chosen !== undefined && listed.length > 1) {
    return fromNames(listed, whole, files) ?? (await refuseWithSuggestion(listed, files, platform, context));
  }
  if (whole !== undefined) return lone(whole, files);
  throw nothing(files, listed);
}

/** Files that say themselves what they hold. A file with an FCIDUMP's name counts, whatever is in it. */
async function wholeFiles(
  listed: readonly ByteSource[],
  platform: ReadPlatform,
  context: JobContext,
): Promise<WholeFile[]> {
  const found: WholeFile[] = [];
  for (const file of listed) {
    await context.checkpoint();
    const role = (await wholeRole(file, platform)) ?? (isFcidumpName(file.path) ? 'spin-free' : null);
    if (role !== null) found.push({ path: file.path, role });
  }
  return found;
}

async function fromMeta(
  listed: readonly ByteSource[],
  spinFree: readonly ByteSource[],
  files: FileSet,
): Promise<ResolvedInputs | null> {
  const meta = listed.find((file) => file.path === 'meta.json');
  if (meta === undefined) return null;
  const document = parseJson(await readText(meta), meta.path);
  const hasArrays =
    typeof document === 'object' &&
    document !== null &&
    !Array.isArray(document) &&
    isObject(document.arrays);
  if (!hasArrays) return null;
  if (spinFree.length > 1) throw tooMany(files, spinFree, 'FCIDUMP or TREXIO file');
  const recipe = templateRecipe(document, spinFree[0]?.path ?? null, files, meta.path);
  return { recipe, files, origin: 'template', recipeName: meta.path };
}

const isObject = (value: unknown): boolean =>
  typeof value === 'object' && value !== null && !Array.isArray(value);

function lone(whole: WholeFile, files: FileSet): ResolvedInputs {
  const recipe: Recipe = {
    schema: 'spinwright-recipe/1',
    parts: [{ id: whole.role, role: whole.role, file: whole.path }],
  };
  return { recipe, files, origin: 'spin-free file', recipeName: whole.path };
}

/** One file that says itself what it holds, and arrays with template names; null where the files are others. */
function fromNames(
  listed: readonly ByteSource[],
  whole: WholeFile | undefined,
  files: FileSet,
): ResolvedInputs | null {
  if (whole === undefined || whole.role === 'spinor') return null;
  const arrays = new Map<string, string>();
  for (const file of listed) {
    if (file.path === whole.path) continue;
    const name = /([^/]+)\.npy$/.exec(file.path)?.[1];
    if (name === undefined || !isTemplateName(name)) return null;
    arrays.set(name, file.path);
  }
  const parts = templateParts(whole.path, (name) => {
    const file = arrays.get(name);
    return file === undefined ? null : { file };
  });
  const unused = [...arrays.values()].filter((path) => parts.every((part) => part.file !== path));
  const recipe: Recipe = {
    schema: 'spinwright-recipe/1',
    ...(unused.length > 0 ? { ignore: unused } : {}),
    parts,
  };
  return { recipe, files, origin: 'array names', recipeName: 'these files' };
}

async function refuseWithSuggestion(
  listed: readonly ByteSource[],
  files: FileSet,
  platform: ReadPlatform,
  context: JobContext,
): Promise<never> {
  const named: FileSet = { name: files.name, list: () => listed, open: (path) => files.open(path) };
  const { recipe } = await suggestRecipe(named, platform, context);
  throw new InputError({
    code: 'no-recipe',
    where: files.name,
    found: `${listed.map((file) => file.path).join(', ')} without a recipe`,
    expected: 'one FCIDUMP or TREXIO file and arrays with template names, or a recipe',
    mend:
      recipe === null
        ? 'Write a recipe that names the role of each array.'
        : `Check this draft and save it beside them as NAME.recipe.json: ${JSON.stringify(recipe)}`,
  });
}

/** The text of a small file. @throws InputError `not-utf8`, `too-large`. */
async function readText(source: ByteSource): Promise<string> {
  const limit = 2 ** 20;
  if (source.size > limit) {
    const found = `${source.size} bytes`;
    throw new InputError({
      code: 'too-large',
      where: source.path,
      found,
      expected: `at most ${limit}`,
      mend: 'Is it a recipe?',
    });
  }
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(await source.read(0, source.size));
  } catch {
    throw new InputError({
      code: 'not-utf8',
      where: source.path,
      found: 'bytes that are no UTF-8',
      expected: 'JSON in UTF-8',
      mend: 'Save the file as UTF-8.',
    });
  }
}

function tooMany(files: FileSet, found: readonly { readonly path: string }[], what: string): InputError {
  return new InputError({
    code: 'no-recipe',
    where: files.name,
    found: `${found.length} candidates: ${found.map((file) => file.path).join(', ')}`,
    expected: `one ${what}`,
    mend: 'Give the file you mean instead of the folder.',
  });
}

function nothing(files: FileSet, listed: readonly ByteSource[]): InputError {
  const names = listed.map((file) => file.path);
  const some = names.length > 8 ? `${names.slice(0, 8).join(', ')}, …` : names.join(', ');
  return new InputError({
    code: 'no-recipe',
    where: files.name,
    found:
      names.length === 0 ? 'no files' : some === files.name ? 'a file that does not say what it holds' : some,
    expected: 'a *.recipe.json, a meta.json with "arrays", or one FCIDUMP or TREXIO file',
    mend:
      names.length === 0
        ? 'Give a folder with integral files.'
        : 'Write a recipe that names the role of each array.',
  });
}

function noSuchFile(path: string, files: FileSet): InputError {
  return new InputError({
    code: 'missing-file',
    where: path,
    found: `no such file in ${files.name}`,
    expected: 'a file to read',
    mend: 'Correct the path.',
  });
}

import { InputError } from '../../job';
import schema from '../recipe.schema.json';
import { parseJson } from './json';
import { resolvePart } from './part';
import type { Recipe } from './recipe';
import { checkSchema } from './schema-check';

/**
 * Reads an import recipe and checks it: JSON, schema, and what a schema cannot say (unique ids, occupations
 * that fit, keys that fit the role).
 *
 * @param text - the whole document.
 * @param file - name for messages, which read `file: JSON pointer: found; expected …`.
 * @throws InputError `not-json`, `schema`, `recipe`, `recipe-part`.
 */
export function parseRecipe(text: string, file: string): Recipe {
  const document = parseJson(text, file);
  checkVersion(document, file);
  checkSchema(document, schema, file);
  const recipe = document as unknown as Recipe;
  checkWhole(recipe, file);
  return recipe;
}

/** The checks of {@link parseRecipe} on a recipe that is already an object, e.g. one inside a plan. */
export function checkRecipe(recipe: Recipe, file: string): void {
  checkSchema(recipe as never, schema, file);
  checkWhole(recipe, file);
}

function checkVersion(document: unknown, file: string): void {
  const version = (document as { schema?: unknown } | null)?.schema;
  if (
    typeof version === 'string' &&
    /^spinwright-recipe\/\d+$/.test(version) &&
    version !== 'spinwright-recipe/1'
  ) {
    throw new InputError({
      code: 'recipe-version',
      where: `${file}: /schema`,
      found: `"${version}"`,
      expected: '"spinwright-recipe/1", the newest version known here',
      mend: 'Open it with a newer Spinwright or write a version 1 recipe.',
    });
  }
}

function checkWhole(recipe: Recipe, file: string): void {
  function refuse(pointer: string, found: string, expected: string, mend: string): never {
    throw new InputError({ code: 'recipe', where: `${file}: ${pointer}`, found, expected, mend });
  }
  const { orbitals, electrons, occupations, parts } = recipe;
  const modes = orbitals !== undefined ? 2 * orbitals : recipe.spinors;
  if (electrons !== undefined && modes !== undefined && electrons > modes) {
    refuse(
      '/electrons',
      String(electrons),
      `at most ${modes} for ${modes / 2} orbitals`,
      'Correct one of the two.',
    );
  }
  if (occupations !== undefined) {
    const sum = occupations.reduce((total, value) => total + value, 0);
    if (orbitals !== undefined && occupations.length !== orbitals) {
      refuse(
        '/occupations',
        `${occupations.length} numbers`,
        `${orbitals}, one per orbital`,
        'Correct the list.',
      );
    }
    if (electrons !== undefined && Math.abs(sum - electrons) > 1e-8) {
      refuse('/occupations', `a sum of ${sum}`, `${electrons}, the number of electrons`, 'Correct the list.');
    }
  }
  const seen = new Map<string, number>();
  for (const [index, part] of parts.entries()) {
    const first = seen.get(part.id);
    if (first !== undefined) {
      refuse(
        `/parts/${index}/id`,
        `"${part.id}" as in part ${first}`,
        'an id of its own',
        'Rename one of the parts.',
      );
    }
    seen.set(part.id, index);
    resolvePart(recipe, index, file);
  }
  const spinor = parts.findIndex((part) => part.role === 'spinor');
  const other = parts.findIndex((part) => part.role !== 'spinor');
  if (spinor >= 0 && other >= 0) {
    const found = `"${parts[other]!.role}" beside "spinor"`;
    refuse(
      `/parts/${other}/role`,
      found,
      'spinor parts alone',
      'Spinors have no spin–orbital split: remove one kind.',
    );
  }
  checkTransposedComponents(recipe, refuse);
}

/** One file each for xy and yx would count the element twice, because xy alone already stands for both. */
function checkTransposedComponents(
  { parts }: Recipe,
  refuse: (pointer: string, found: string, expected: string, mend: string) => never,
): void {
  const tensors = parts
    .map((part, index) => ({ part, index }))
    .filter(({ part }) => part.role === 'spin-spin');
  for (const { part, index } of tensors) {
    for (const name of part.components ?? []) {
      const transposed = name[1]! + name[0]!;
      if (name <= transposed || part.components!.some((other) => other === transposed)) continue;
      const partner = tensors.find(({ part: other }) => other.components?.some((c) => c === transposed));
      if (partner === undefined) continue;
      refuse(
        `/parts/${index}/components`,
        `"${name}" beside "${transposed}" in part ${partner.index}`,
        `one of them, because ${transposed} stands for ${name} too`,
        'Remove one, or put all nine components in one part.',
      );
    }
  }
}

import { InputError } from '../../job';
import type { FileSet } from '../source';
import type { Json } from './json';
import { checkRecipe } from './parse';
import type { Recipe, RecipeConstant, RecipePart } from './recipe';

type Convention = Omit<RecipePart, 'file' | 'dataset' | 'id'>;

const XYZ = ['x', 'y', 'z'] as const;
const SIX = ['xx', 'xy', 'xz', 'yy', 'yz', 'zz'] as const;

/** Names of arrays that the built-in template knows, with the parts each of them makes. */
const TEMPLATE: Readonly<Record<string, readonly (Convention & { readonly id: string })[]>> = {
  h1: [{ id: 'core-hamiltonian', role: 'one-electron' }],
  eri_packed: [{ id: 'coulomb', role: 'two-electron', layout: 'pairs-triangle' }],
  hso_nuc_imag: [{ id: 'so-nuclear', role: 'one-electron spin-orbit', components: XYZ }],
  hso_core_imag: [{ id: 'so-core', role: 'mean-field spin-orbit', covers: 'core', components: XYZ }],
  w2so_packed: [
    {
      id: 'so-two',
      role: 'two-electron spin-orbit',
      layout: 'antisymmetric-by-symmetric-pairs',
      components: XYZ,
    },
  ],
  gss_packed: [{ id: 'ss', role: 'spin-spin', layout: 'pairs-triangle', components: SIX }],
  h_mv: [{ id: 'mv', role: 'mass-velocity' }],
  h_d1: [{ id: 'd1', role: 'one-electron Darwin' }],
  h_d2_core: [{ id: 'd2-core', role: 'one-electron', term: 'scalar' }],
  h_ssc_core: [{ id: 'ssc-core', role: 'one-electron', term: 'ssc' }],
  contact_packed: [
    { id: 'd2', role: 'two-electron Darwin', value: 'contact', layout: 'pairs-triangle' },
    { id: 'ssc', role: 'spin-spin contact', value: 'contact', layout: 'pairs-triangle' },
  ],
};

/** What an FCIDUMP or TREXIO file stands for where it is present. */
const SPIN_FREE_ARRAYS = ['h1', 'eri_packed'];

export const isTemplateName = (name: string): boolean => Object.hasOwn(TEMPLATE, name);

/** Parts for the arrays of a set, in the order of the template. `locate` says where an array lies, or null. */
export function templateParts(
  spinFree: string | null,
  locate: (array: string) => Pick<RecipePart, 'file' | 'dataset'> | null,
): RecipePart[] {
  const parts: RecipePart[] =
    spinFree === null ? [] : [{ id: 'spin-free', role: 'spin-free', file: spinFree }];
  for (const [name, conventions] of Object.entries(TEMPLATE)) {
    if (spinFree !== null && SPIN_FREE_ARRAYS.includes(name)) continue;
    const place = locate(name);
    if (place === null) continue;
    for (const { id, role, ...rest } of conventions) parts.push({ id, role, ...place, ...rest });
  }
  return parts;
}

/** Array names that only repeat what an FCIDUMP or a packed array of the set holds, or that are never used. */
export const isSecondCopy = (name: string): boolean => /^(h1|eri_packed|mo_energies|.*_full)$/.test(name);

/** Files that hold arrays of the set a second time, or what is never used. */
function ignored(files: FileSet, parts: readonly RecipePart[], hdf5: string): Pick<Recipe, 'ignore'> {
  const used = new Set(parts.map((part) => part.file));
  const ignore = files
    .list()
    .map((file) => file.path)
    .filter((path) => !used.has(path))
    .filter((path) => path === hdf5 || isSecondCopy(path.replace(/\.npy$/, '')));
  return ignore.length > 0 ? { ignore } : {};
}

/**
 * The recipe that a `meta.json` with `arrays` stands for.
 *
 * @param meta - parsed `meta.json`.
 * @param spinFree - path of the FCIDUMP of the set, or null.
 * @throws InputError `meta` where an array that it lists is neither an `.npy` nor in the `.h5`.
 */
export function templateRecipe(meta: Json, spinFree: string | null, files: FileSet, where: string): Recipe {
  const record = meta as Record<string, Json>;
  const arrays = record.arrays as Record<string, Json>;
  const hdf5 = `${String(record.name ?? files.name)}.h5`;
  const locate = (name: string) => {
    if (!Object.hasOwn(arrays, name)) return null;
    if (files.open(`${name}.npy`) !== undefined) return { file: `${name}.npy` };
    if (files.open(hdf5) !== undefined) return { file: hdf5, dataset: `/${name}` };
    throw new InputError({
      code: 'meta',
      where: `${where}: /arrays/${name}`,
      found: `neither ${name}.npy nor ${hdf5}`,
      expected: 'the array in one of the two',
      mend: 'Put the file back, or remove the entry.',
    });
  };
  const electrons = record.electrons as Record<string, Json> | undefined;
  const orbitals = (record.orbitals as Record<string, Json> | undefined)?.n_active;
  const constants = constantsOf((record.scalars ?? {}) as Record<string, Json>);
  const parts = templateParts(spinFree, locate);
  const recipe = {
    schema: 'spinwright-recipe/1',
    ...(typeof record.title === 'string' ? { title: record.title } : {}),
    ...(orbitals !== undefined ? { orbitals } : {}),
    ...(electrons?.active !== undefined ? { electrons: electrons.active } : {}),
    ...(electrons?.ms2 !== undefined ? { ms2: electrons.ms2 } : {}),
    ...(constants.length > 0 ? { constants } : {}),
    ...ignored(files, parts, hdf5),
    parts,
  } as unknown as Recipe;
  // Numbers in meta.json may be of any type: the recipe made from them is checked like one from a file.
  checkRecipe(recipe, where);
  return recipe;
}

function constantsOf(scalars: Record<string, Json>): RecipeConstant[] {
  const terms = [
    ['e_core', 'sf'],
    ['e_core_mv', 'scalar'],
    ['e_core_d1', 'scalar'],
    ['e_core_d2', 'scalar'],
    ['e_core_ssc', 'ssc'],
  ] as const;
  return terms
    .filter(([name]) => scalars[name] !== undefined)
    .map(([name, term]) => ({ term, value: scalars[name] as number }));
}

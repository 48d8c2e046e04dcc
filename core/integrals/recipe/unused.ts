import type { Finding } from '../../job';
import type { FileSet } from '../source';
import type { Recipe } from './recipe';

const ARRAY_FILE = /\.(npy|npz|h5|hdf5|trexio)$|(^|\/)fcidump$|\.fcidump$/i;

/** A note for every array file of the folder that the recipe neither uses nor ignores on purpose. */
export function unusedFiles(recipe: Recipe, files: FileSet): Finding[] {
  const known = new Set([...recipe.parts.map((part) => part.file), ...(recipe.ignore ?? [])]);
  return files
    .list()
    .map((file) => file.path)
    .filter((path) => ARRAY_FILE.test(path) && !known.has(path))
    .map((path) => ({
      severity: 'note',
      code: 'unused-array',
      where: path,
      found: 'an array file that no part uses',
      expected: 'a part, or an entry under "ignore"',
      mend: 'Add a part if it belongs to the Hamiltonian, else put it under "ignore".',
    }));
}

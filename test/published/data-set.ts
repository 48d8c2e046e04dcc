import { existsSync, readdirSync, readFileSync, statSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import {
  fileSetFromMemory,
  type IntegralSet,
  loadIntegrals,
  type ReadPlatform,
  resolveInputs,
} from '../../core/integrals';
import { inlineContext } from '../../core/job';

const root = fileURLToPath(new URL('../..', import.meta.url));

/** Folder of a data set: the copy in the repository, else the one beside it; null where there is neither. */
export function findSet(name: string): string | null {
  for (const folder of [join(root, 'test/fixtures/sets', name), join(root, '../shared/data', name)]) {
    if (existsSync(folder)) return folder;
  }
  console.warn(`skipped: data set ${name} is neither in test/fixtures/sets nor in ../shared/data`);
  return null;
}

/** None of the small sets needs its HDF5 copy: the same arrays lie beside it as .npy. */
const platform: ReadPlatform = {
  openHdf5: (source) =>
    Promise.reject(new Error(`these tests read no HDF5, and ${source.path} was asked for`)),
};

/** Reads a folder, or some files of it, the way the command line does. */
export async function loadSet(folder: string, chosen?: readonly string[]): Promise<IntegralSet> {
  const names = readdirSync(folder).filter(
    (file) =>
      !file.endsWith('.h5') &&
      statSync(join(folder, file)).isFile() &&
      (chosen === undefined || chosen.includes(file)),
  );
  const contents = new Map(names.map((file) => [file, new Uint8Array(readFileSync(join(folder, file)))]));
  const files = fileSetFromMemory(folder, contents);
  const context = inlineContext();
  const inputs = await resolveInputs(chosen ? { files, chosen } : { files }, platform, context);
  const { recipeName } = inputs;
  return loadIntegrals(inputs.recipe, inputs.files, platform, context, { recipeName });
}

export function readJson(folder: string, file: string): unknown {
  return JSON.parse(readFileSync(join(folder, file), 'utf8'));
}

import { InputError, type JobContext } from '../../job';
import type { Provenance } from '../integral-set';
import type { RawArray, SpinFreeContents, SpinorContents } from '../raw';
import {
  type Format,
  type IndexList,
  readFcidump,
  readHdf5Dataset,
  readIndexList,
  readNpy,
  readNpz,
  readTrexio,
  sniffFormat,
} from '../readers';
import { refuseEmpty } from '../readers/chunks';
import type { ByteSource, FileSet, ReadPlatform } from '../source';
import { nearest } from './nearest';
import type { ResolvedPart } from './part';
import type { Recipe } from './recipe';
import { orbitalsOfShape } from './stored';

/** What the file of a part holds. */
export type PartContents =
  | SpinFreeContents
  | SpinorContents
  | { readonly kind: 'array'; readonly raw: RawArray }
  | { readonly kind: 'list'; readonly list: IndexList };

/** @throws InputError `missing-file`, with the nearest name in the folder. */
export function openFile(files: FileSet, path: string): ByteSource {
  const source = files.open(path);
  if (source !== undefined) return source;
  const near = nearest(
    path,
    files.list().map((file) => file.path),
  );
  throw new InputError({
    code: 'missing-file',
    where: path,
    found: `no such file in ${files.name}`,
    expected: 'the file the recipe names',
    mend:
      near === null
        ? 'Put it beside the recipe or correct the path.'
        : `The nearest name there is "${near}".`,
  });
}

/**
 * Reads the file of one part with the reader its contents call for.
 *
 * @param orbitals - needed for lists, whose indices must lie in range; null before it is known.
 */
export async function readPart(
  part: ResolvedPart,
  orbitals: number | null,
  files: FileSet,
  platform: ReadPlatform,
  context: JobContext,
): Promise<PartContents> {
  const source = openFile(files, part.file);
  refuseEmpty(source);
  const format = await sniffFormat(source);
  if (part.facts.numIndices === 0) {
    if (part.physicists && format !== 'hdf5') throw chemistsOnly(part);
    // Of other text its reader says which line is no header.
    if (format === 'fcidump' || format === 'text') return readFcidump(source, context);
    if (format === 'hdf5') return readTrexio(source, platform, context);
    throw wrongFormat(part, format, 'an FCIDUMP or a TREXIO file');
  }
  if (part.layout === 'index-list') {
    if (format !== 'text') throw wrongFormat(part, format, 'an index–value list');
    const { columns, base } = part.list;
    const list = await readIndexList(
      source,
      { columns, base, components: part.components, orbitals },
      context,
    );
    return { kind: 'list', list };
  }
  if (format === 'npy') return { kind: 'array', raw: await readNpy(source, context) };
  if (format === 'npz') {
    return { kind: 'array', raw: await readNpz(source, part.dataset ?? undefined, context) };
  }
  if (format === 'hdf5') {
    const dataset = requiredDataset(part);
    return { kind: 'array', raw: await readHdf5Dataset(source, dataset, platform, context) };
  }
  throw wrongFormat(part, format, 'a NumPy or HDF5 array');
}

/** Title and files in part order, each file once. */
export function provenanceOf(recipe: Recipe, files: FileSet, parts: readonly ResolvedPart[]): Provenance {
  const paths = [...new Set(parts.map((part) => part.file))];
  return {
    title: recipe.title ?? files.name,
    files: paths.map((path) => ({ path, bytes: openFile(files, path).size })),
  };
}

/** Number of orbitals as the first array tells it by its shape, or null where there are only lists. */
export async function orbitalsFromArrays(
  parts: readonly ResolvedPart[],
  files: FileSet,
  platform: ReadPlatform,
  context: JobContext,
): Promise<number | null> {
  for (const part of parts) {
    if (part.layout === 'index-list') continue;
    const read = await readPart(part, null, files, platform, context);
    if (read.kind === 'array') return orbitalsOfShape(read.raw, part);
  }
  return null;
}

/** A FCIDUMP lists each integral once, under any of its permutations: read in another order it loses some. */
function chemistsOnly(part: ResolvedPart): InputError {
  return new InputError({
    code: 'index-order',
    where: part.file,
    found: `"order": "physicists" in part "${part.id}"`,
    expected: 'chemists’ order, (pq|rs), which the FCIDUMP format fixes',
    mend: 'Give ⟨pq|rs⟩ as an index-list with the role "two-electron", or write the FCIDUMP again.',
  });
}

function requiredDataset(part: ResolvedPart): string {
  if (part.dataset !== null) return part.dataset;
  throw new InputError({
    code: 'no-dataset',
    where: part.file,
    found: `no "dataset" in part "${part.id}"`,
    expected: 'the path of a dataset, such as /group/name',
    mend: 'Add "dataset" to the part.',
  });
}

const FORMATS: Readonly<Record<Format, string>> = {
  fcidump: 'an FCIDUMP',
  npy: 'a NumPy array (.npy)',
  npz: 'a NumPy archive (.npz)',
  hdf5: 'an HDF5 file',
  json: 'a JSON file',
  text: 'plain text',
  compressed: 'a compressed file',
  'utf-16': 'text in UTF-16',
  unknown: 'no format known here',
};

const MENDS: Readonly<Partial<Record<Format, string>>> = {
  text: 'For a text list set "layout": "index-list"; an array comes from numpy.save.',
  compressed: 'Unpack it first.',
  'utf-16': 'Save it as plain text or UTF-8.',
};

function wrongFormat(part: ResolvedPart, format: Format, expected: string): InputError {
  return new InputError({
    code: 'wrong-format',
    where: part.file,
    found: FORMATS[format],
    expected: `${expected} for part "${part.id}" (role "${part.role}")`,
    mend: MENDS[format] ?? 'Correct role or file in the recipe, or write the file again.',
  });
}

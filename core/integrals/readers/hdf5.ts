import { InputError, type JobContext } from '../../job';
import type { RawArray } from '../raw';
import type { ByteSource, Hdf5Dataset, Hdf5File, ReadPlatform } from '../source';
import { refuseEmpty } from './chunks';
import { clipped, requireFinite } from './limits';
import { hasHdf5Signature } from './sniff';

/**
 * Reads one dataset of an HDF5 file; `path` such as `/group/name`.
 * Compounds of two floats named r, i (or re, im) are complex numbers, as h5py writes them.
 * @throws InputError naming `file:/dataset`.
 */
export async function readHdf5Dataset(
  source: ByteSource,
  path: string,
  platform: ReadPlatform,
  context: JobContext,
): Promise<RawArray> {
  const file = await openHdf5(source, platform);
  try {
    const dataset = file.dataset(path);
    if (dataset === undefined) throw noSuchDataset(file, source.path, path);
    const complex = dataset.kind === 'complex';
    const data = await readNumbers(dataset, source.path, context);
    const origin = `${source.path}:${dataset.path}`;
    requireFinite(origin, data, dataset.shape, complex);
    return { origin, shape: dataset.shape, complex, data };
  } finally {
    file.close();
  }
}

/** Opens a file after a look at its signature, so that the library need not load for what is no HDF5. */
export async function openHdf5(source: ByteSource, platform: ReadPlatform): Promise<Hdf5File> {
  refuseEmpty(source);
  if (await hasHdf5Signature(source)) return platform.openHdf5(source);
  throw new InputError({
    code: 'not-hdf5',
    where: source.path,
    found: 'no HDF5 signature',
    expected: 'an HDF5 file',
    mend: 'Check that the file is the one the recipe means.',
  });
}

/** All elements, with progress. */
export async function readNumbers(
  dataset: Hdf5Dataset,
  file: string,
  context: JobContext,
): Promise<Float64Array> {
  const total = dataset.shape.reduce((product, extent) => product * extent, 1);
  return dataset.readAll(async (done) => {
    context.report(`reading ${file}:${dataset.path}`, done, total);
    await context.checkpoint();
  });
}

export function noSuchDataset(
  file: Hdf5File,
  origin: string,
  path: string,
  mend = 'Correct the dataset in the recipe, or name another file.',
): InputError {
  const known = file.datasets().map(clipped);
  const shown = known.length > 12 ? `${known.slice(0, 12).join(', ')}, …` : known.join(', ');
  return new InputError({
    code: 'no-such-dataset',
    where: `${origin}:${path}`,
    found: 'no such dataset',
    expected: known.length === 0 ? 'a file with datasets' : `one of ${shown}`,
    mend,
  });
}

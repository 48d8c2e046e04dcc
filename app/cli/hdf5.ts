import { rmSync } from 'node:fs';
import { mkdtemp, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import {
  type ByteSource,
  type H5Module,
  type Hdf5File,
  openWithModule,
  type ReadPlatform,
} from '../../core/integrals';
import { NodeSource } from './files';

/** The library takes some 50 ms to start: only a job that meets an HDF5 file loads it. */
let loading: Promise<H5Module> | null = null;

async function loadModule(): Promise<H5Module> {
  // While it is evaluated the library takes hold of console.error, to which it would later tell in its own words
  // what the error for the user says.
  const { error } = console;
  console.error = () => {};
  try {
    const library = await import('h5wasm/node');
    return (await library.ready) as unknown as H5Module;
  } finally {
    console.error = error;
  }
}

/** HDF5 over the real file system; other sources are copied to a temporary file until they are closed. */
export const nodeReadPlatform: ReadPlatform = {
  async openHdf5(source: ByteSource): Promise<Hdf5File> {
    loading ??= loadModule();
    const module = await loading;
    if (source instanceof NodeSource)
      return openWithModule(module, source.realPath, source.path, source.size);
    const folder = await mkdtemp(join(tmpdir(), 'spinwright-'));
    const discard = (): void => rmSync(folder, { recursive: true, force: true });
    const path = join(folder, 'copy.h5');
    try {
      await writeFile(path, await source.read(0, source.size));
    } catch (error) {
      discard();
      throw error;
    }
    return openWithModule(module, path, source.path, source.size, discard);
  },
};

import { type H5Module, openWithModule } from '../../core/integrals/readers';
import type { ByteSource, Hdf5File, ReadPlatform } from '../../core/integrals/source';
import { BlobSource } from './files';

/** The part of Emscripten's file system that mounting a Blob takes; the library's types leave it out. */
interface WorkerFileSystem {
  readonly filesystems: { readonly WORKERFS: unknown };
  mkdir(path: string): void;
  rmdir(path: string): void;
  mount(type: unknown, options: { blobs: readonly { name: string; data: Blob }[] }, path: string): void;
  unmount(path: string): void;
}

/** 4.8 MB with its WebAssembly inside: only a worker that meets an HDF5 file loads it. */
let loading: Promise<H5Module> | null = null;

async function loadModule(): Promise<H5Module> {
  // While it is evaluated the library takes hold of console.error, to which it would later tell in its own words
  // what the error for the user says.
  const { error } = console;
  console.error = () => {};
  try {
    const library = await import('h5wasm');
    return (await library.ready) as unknown as H5Module;
  } finally {
    console.error = error;
  }
}

let numMounts = 0;

/**
 * HDF5 in a Web Worker. The Blob is mounted, not copied, so a file of any size takes no memory; this works in
 * workers only, since it reads synchronously.
 */
export const webReadPlatform: ReadPlatform = {
  async openHdf5(source: ByteSource): Promise<Hdf5File> {
    loading ??= loadModule();
    const module = await loading;
    const blob =
      source instanceof BlobSource
        ? source.blob
        : new Blob([(await source.read(0, source.size)) as Uint8Array<ArrayBuffer>]);
    const fs = module.FS as WorkerFileSystem;
    const folder = `/input-${numMounts++}`;
    fs.mkdir(folder);
    fs.mount(fs.filesystems.WORKERFS, { blobs: [{ name: 'data.h5', data: blob }] }, folder);
    return openWithModule(module, `${folder}/data.h5`, source.path, source.size, () => {
      fs.unmount(folder);
      fs.rmdir(folder);
    });
  },
};

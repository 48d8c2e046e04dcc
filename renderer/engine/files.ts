import type { ByteSource, FileSet } from '../../core/integrals/source';

/** A file that the page handed over; its bytes stay with the browser until they are read. */
export class BlobSource implements ByteSource {
  constructor(
    readonly path: string,
    readonly blob: Blob,
  ) {}

  get size(): number {
    return this.blob.size;
  }

  async read(offset: number, length: number): Promise<Uint8Array> {
    return new Uint8Array(await this.blob.slice(offset, offset + length).arrayBuffer());
  }
}

/** Files of one data set, in the order given; paths relative to its folder. */
export function blobFileSet(
  name: string,
  files: readonly { readonly path: string; readonly blob: Blob }[],
): FileSet {
  const sources = new Map(files.map(({ path, blob }) => [path, new BlobSource(path, blob)]));
  return { name, list: () => [...sources.values()], open: (path) => sources.get(path) };
}

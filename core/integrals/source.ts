/**
 * Where bytes come from. The same readers run in a browser worker (over `Blob`), in Node (over a file handle)
 * and in tests (over memory), so core never sees a path of the file system.
 */
export interface ByteSource {
  /** Path relative to the data set's folder, "/" separated; used in messages and by recipes. */
  readonly path: string;
  readonly size: number;
  /** Bytes [offset, offset + length), clipped to the end of the source. */
  read(offset: number, length: number): Promise<Uint8Array>;
  /**
   * Fills `target` from `offset` on and returns the number of bytes, fewer only at the end of the source.
   * Only where it saves a copy; whoever reads must do without.
   */
  readInto?(offset: number, target: Uint8Array): Promise<number>;
}

/** The files of one data set. */
export interface FileSet {
  /** Display name of the folder or the list. */
  readonly name: string;
  list(): readonly ByteSource[];
  open(path: string): ByteSource | undefined;
}

/** One dataset of an HDF5 file. */
export interface Hdf5Dataset {
  readonly path: string;
  readonly shape: readonly number[];
  /** Element type as the file has it. Strings and compounds are not numeric and are refused by readers. */
  readonly kind: 'float' | 'integer' | 'complex' | 'other';
  /**
   * All elements as doubles, row-major; complex ones interleaved re, im. Reads in slices and awaits `step`
   * with the number of elements read so far after each of them.
   * @throws InputError `hdf5-unreadable` where a chunk is damaged, `too-large` beyond the reader's limits.
   */
  readAll(step?: (done: number) => Promise<void>): Promise<Float64Array>;
}

export interface Hdf5File {
  /** Paths of all datasets, "/group/name". Links that leave the file are not followed. */
  datasets(): readonly string[];
  /** undefined where there is no such dataset. */
  dataset(path: string): Hdf5Dataset | undefined;
  /** Numeric scalar attribute of a group (the root group unless named), or undefined. */
  attribute(name: string, group?: string): number | undefined;
  close(): void;
}

/** What the platform lends to readers: the HDF5 library needs a file system of its own kind on each side. */
export interface ReadPlatform {
  /** @throws InputError `not-hdf5` or `hdf5-truncated` where the bytes are no complete HDF5 file. */
  openHdf5(source: ByteSource): Promise<Hdf5File>;
}

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
  /** All elements as doubles; complex ones interleaved re, im. Reads in slices and yields between them. */
  readAll(): Promise<Float64Array>;
}

export interface Hdf5File {
  /** Paths of all datasets, "/group/name". */
  datasets(): readonly string[];
  /** undefined where there is no such dataset. */
  dataset(path: string): Hdf5Dataset | undefined;
  /** Numeric attribute of the root group, or undefined. */
  attribute(name: string): number | undefined;
  close(): void;
}

/** What the platform lends to readers: the HDF5 library needs a file system of its own kind on each side. */
export interface ReadPlatform {
  /** @throws InputError `not-hdf5` where the bytes are no HDF5 file. */
  openHdf5(source: ByteSource): Promise<Hdf5File>;
}

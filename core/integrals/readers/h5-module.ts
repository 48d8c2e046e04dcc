/**
 * The part of the h5wasm module (0.10.x) that is used, by shape: core does not import the library, each
 * platform lends its own build. The library's classes are not used because they drop the status of a read, so
 * that a damaged chunk would pass as numbers.
 */
export interface H5Module {
  readonly HEAPU8: Uint8Array;
  readonly FS: unknown;
  _malloc(bytes: number): number;
  _free(pointer: number): void;
  open(path: string, mode?: number, trackOrder?: boolean, low?: number, high?: number): bigint;
  close_file(file: bigint): number;
  get_names(file: bigint, path: string, recursive: boolean): string[];
  get_type(file: bigint, path: string): number;
  get_dataset_metadata(file: bigint, path: string): H5Metadata;
  get_dataset_data(
    file: bigint,
    path: string,
    count: bigint[] | null,
    offset: bigint[] | null,
    strides: bigint[] | null,
    pointer: bigint,
  ): number;
  get_attribute_names(file: bigint, path: string): string[];
  get_attribute_metadata(file: bigint, path: string, name: string): H5Metadata;
  get_attribute_data(file: bigint, path: string, name: string, pointer: bigint): number;
  readonly H5G_DATASET: number;
}

export interface H5Metadata {
  readonly shape: number[] | null;
  readonly chunks: number[] | null;
  readonly size: number;
  readonly total_size: number;
  readonly type: number;
  readonly signed: boolean;
  readonly littleEndian: boolean;
  readonly vlen: boolean;
  readonly virtual_sources?: unknown[];
  readonly compound_type?: { readonly members: readonly (H5Metadata & { name: string; offset: number })[] };
}

/** H5T_class_t of the HDF5 library. */
export const H5_CLASS = { integer: 0, float: 1, compound: 6 } as const;

interface ErrorStream {
  stream_ops?: unknown;
  node?: unknown;
  flags?: number;
  seekable?: boolean;
}

/**
 * Keeps the library's error reports, which it prints line by line, off the terminal and for the messages.
 * They go to stream 2 of its own file system, whose write operation is replaced.
 */
export class Diagnostics {
  private text = '';

  constructor(module: H5Module) {
    const stream = (module.FS as { streams: (ErrorStream | undefined)[] }).streams[2];
    if (stream === undefined) return;
    stream.stream_ops = {
      write: (_stream: unknown, bytes: Uint8Array, offset: number, length: number): number => {
        // An Int8Array in fact; only ASCII is of interest.
        for (let i = 0; i < length; i++) this.text += String.fromCharCode(bytes[offset + i] & 127);
        return length;
      },
    };
    stream.node ??= { mode: 0o020666 };
    stream.flags = 1;
    stream.seekable = false;
  }

  clear(): void {
    this.text = '';
  }

  /** The innermost cause of the last failure, or an empty text. */
  cause(): string {
    const reports = [...this.text.matchAll(/ in H5\w+\(\): (.*)/g)];
    return reports.at(-1)?.[1] ?? '';
  }

  /** Bytes that the file has and should have, where it was found to be cut short. */
  truncation(): { found: number; expected: number } | null {
    const match = /eof = (\d+), .*stored_eof = (\d+)/.exec(this.text);
    return match ? { found: Number(match[1]), expected: Number(match[2]) } : null;
  }
}

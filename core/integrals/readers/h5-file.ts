import { InputError } from '../../job';
import type { Hdf5Dataset, Hdf5File } from '../source';
import { truncated } from './chunks';
import { doublesEach, type ElementType, ElementWriter, isReadable } from './elements';
import { Diagnostics, H5_CLASS, type H5Metadata, type H5Module } from './h5-module';
import { slices } from './h5-slices';
import { countElements, refuseTraps } from './limits';

const diagnostics = new WeakMap<H5Module, Diagnostics>();

/**
 * Opens an HDF5 file that stands at `path` in the file system of the module.
 *
 * @param origin - what messages call the file.
 * @param bytes - its size.
 * @param release - called once it is closed, or could not be opened.
 * @throws InputError `not-hdf5` or `hdf5-truncated`.
 */
export function openWithModule(
  module: H5Module,
  path: string,
  origin: string,
  bytes: number,
  release: () => void = () => {},
): Hdf5File {
  const log = diagnostics.get(module) ?? new Diagnostics(module);
  diagnostics.set(module, log);
  log.clear();
  try {
    const file = guarded(log, origin, () => module.open(path, 0, false, -1, -1));
    if (file < 0n) throw unopened(origin, log);
    return new OpenFile(module, file, origin, bytes, log, release);
  } catch (error) {
    release();
    throw error;
  }
}

function unopened(origin: string, log: Diagnostics): InputError {
  const cut = log.truncation();
  if (cut !== null) return truncated(origin, cut.expected, cut.found);
  return new InputError({
    code: 'not-hdf5',
    where: origin,
    found: `no readable HDF5 file${log.cause() ? ` (${log.cause()})` : ''}`,
    expected: 'an HDF5 file',
    mend: 'Check that the file was copied as a whole and is the one the recipe means.',
  });
}

/** Runs a call into the library, which throws errors of its own kind where damaged bytes lead it astray. */
function guarded<T>(log: Diagnostics, where: string, call: () => T): T {
  try {
    return call();
  } catch (error) {
    if (error instanceof InputError) throw error;
    throw unreadable(where, log);
  }
}

const unreadable = (where: string, log: Diagnostics): InputError =>
  new InputError({
    code: 'hdf5-unreadable',
    where,
    found: `data that cannot be read${log.cause() ? ` (${log.cause()})` : ''}`,
    expected: 'an undamaged HDF5 file with no filter but gzip, shuffle and checksum',
    mend: 'Write or copy the file again.',
  });

class OpenFile implements Hdf5File {
  private readonly paths: readonly string[];
  private open = true;

  constructor(
    readonly module: H5Module,
    readonly file: bigint,
    readonly origin: string,
    readonly bytes: number,
    readonly log: Diagnostics,
    private readonly release: () => void,
  ) {
    // Visits only what the file itself holds, so no link can lead out of it.
    this.paths = guarded(log, origin, () =>
      module
        .get_names(file, '/', true)
        .map((name) => (name.startsWith('/') ? name : `/${name}`))
        .filter((name) => module.get_type(file, name) === module.H5G_DATASET),
    );
  }

  datasets(): readonly string[] {
    return this.paths;
  }

  dataset(path: string): Hdf5Dataset | undefined {
    const full = path.startsWith('/') ? path : `/${path}`;
    if (!this.paths.includes(full)) return undefined;
    const { module, file, log, origin } = this;
    return new OpenDataset(
      this,
      full,
      guarded(log, `${origin}:${full}`, () => module.get_dataset_metadata(file, full)),
    );
  }

  attribute(name: string, group = '/'): number | undefined {
    return guarded(this.log, `${this.origin}:${group}`, () => this.readAttribute(name, group));
  }

  private readAttribute(name: string, group: string): number | undefined {
    const { module, file } = this;
    if (group !== '/' && module.get_type(file, group) < 0) return undefined;
    if (!module.get_attribute_names(file, group).includes(name)) return undefined;
    const metadata = module.get_attribute_metadata(file, group, name);
    const type = elementType(metadata);
    if (type === null || type.kind === 'complex' || metadata.total_size !== 1) return undefined;
    const value = new Float64Array(1);
    this.withMemory(metadata.size, (pointer) => {
      if (module.get_attribute_data(file, group, name, BigInt(pointer)) < 0) value[0] = Number.NaN;
      else this.copy(pointer, metadata.size, new ElementWriter(`${this.origin}:${name}`, type, value));
    });
    return value[0];
  }

  close(): void {
    if (!this.open) return;
    this.open = false;
    this.module.close_file(this.file);
    this.release();
  }

  withMemory(bytes: number, use: (pointer: number) => void): void {
    const pointer = this.module._malloc(bytes);
    try {
      use(pointer);
    } finally {
      this.module._free(pointer);
    }
  }

  copy(pointer: number, bytes: number, writer: ElementWriter): void {
    // The heap may have moved during the read, so it is looked up only now.
    writer.push(this.module.HEAPU8.subarray(pointer, pointer + bytes));
  }
}

class OpenDataset implements Hdf5Dataset {
  readonly shape: readonly number[];
  readonly kind: Hdf5Dataset['kind'];
  private readonly type: ElementType | null;
  private readonly where: string;

  constructor(
    private readonly owner: OpenFile,
    readonly path: string,
    private readonly metadata: H5Metadata,
  ) {
    this.shape = metadata.shape ?? [];
    this.where = `${owner.origin}:${path}`;
    const readable = metadata.shape !== null && !metadata.vlen && !metadata.virtual_sources?.length;
    this.type = readable ? elementType(metadata) : null;
    if (this.type === null) this.kind = 'other';
    else if (this.type.kind === 'float' || this.type.kind === 'complex') this.kind = this.type.kind;
    else this.kind = 'integer';
  }

  async readAll(step: (done: number) => Promise<void> = async () => {}): Promise<Float64Array> {
    const { type, where, shape, owner } = this;
    if (type === null) {
      throw new InputError({
        code: 'bad-element-type',
        where,
        found: 'elements that are no numbers',
        expected: 'real or complex floating-point numbers, or integers',
        mend: 'Name another dataset, or write this one as float64.',
      });
    }
    const count = countElements(where, shape, 8 * doublesEach(type));
    refuseTraps(where, owner.bytes, count * type.bytes);
    const data = new Float64Array(count * doublesEach(type));
    const writer = new ElementWriter(where, type, data);
    let done = 0;
    for (const { offset, extent } of slices(shape, this.metadata.chunks, type.bytes)) {
      const elements = extent.reduce((product, n) => product * n, 1);
      this.readSlice(offset, extent, elements * type.bytes, writer);
      done += elements;
      await step(done);
    }
    return data;
  }

  private readSlice(offset: number[], extent: number[], bytes: number, writer: ElementWriter): void {
    const { owner, path, where } = this;
    const { module, file, log } = owner;
    const scalar = extent.length === 0;
    owner.withMemory(bytes, (pointer) => {
      log.clear();
      const status = guarded(log, where, () =>
        module.get_dataset_data(
          file,
          path,
          scalar ? null : extent.map(BigInt),
          scalar ? null : offset.map(BigInt),
          scalar ? null : extent.map(() => 1n),
          BigInt(pointer),
        ),
      );
      if (status < 0) throw unreadable(where, log);
      owner.copy(pointer, bytes, writer);
    });
  }
}

/** How the library hands the elements over, or null for what is no number. */
function elementType(metadata: H5Metadata): ElementType | null {
  const { type, size, signed, compound_type: compound } = metadata;
  let element: ElementType | null = null;
  // Plain numbers are handed over in little-endian order whatever the file has.
  if (type === H5_CLASS.float) element = { kind: 'float', bytes: size, littleEndian: true };
  if (type === H5_CLASS.integer)
    element = { kind: signed ? 'signed' : 'unsigned', bytes: size, littleEndian: true };
  if (type === H5_CLASS.compound && compound?.members.length === 2) {
    const [re, im] = compound.members;
    const parts = compound.members.every(
      (part) => part.type === H5_CLASS.float && part.size * 2 === size && part.littleEndian,
    );
    if (parts && /^re?/i.test(re.name) && /^im?/i.test(im.name) && re.offset === 0 && im.offset === re.size) {
      element = { kind: 'complex', bytes: size, littleEndian: true };
    }
  }
  return element !== null && isReadable(element) ? element : null;
}

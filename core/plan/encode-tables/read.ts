import { type ByteSource, Crc32, type FileSet, type Json, parseJson, readNpy } from '../../integrals';
import { InputError, type JobContext } from '../../job';
import { type ArrayLayout, ELEMENTS, type Numbers, type Sizes, shapeOf } from './arrays';
import { documentChecksum, TABLES_FILE, TABLES_SCHEMA, type TablesDocument } from './document';
import type { FormProgram, StoredTables } from './form';
import { FORMS } from './forms';
import { FRAME_ARRAY, type StoredFrame } from './frame';

/** Conventions and a few dozen arrays take some ten thousand characters. */
const MOST_JSON = 2 ** 20;

/**
 * The program that exported tables stand for, from the tables alone: probabilities from keep values and alternates,
 * vectors from angle numbers, the rest from flags.
 *
 * @throws InputError `no-tables-found`, `foreign-tables` for a folder of something else, `bad-tables` where document and
 * arrays do not fit each other; what the readers of JSON and `.npy` throw for files that cannot be read
 */
export async function readTables(files: FileSet, context: JobContext): Promise<FormProgram> {
  return (await openTables(files, context)).tables;
}

/** The same with the document that came with them. */
export async function openTables(
  files: FileSet,
  context: JobContext,
): Promise<{ readonly document: TablesDocument; readonly tables: FormProgram }> {
  context.report(`reading ${TABLES_FILE}`, 0, null);
  await context.checkpoint();
  const document = await readDocument(files);
  const { schema, form: name } = document;
  const form = FORMS.find((known) => known.form === name);
  if (schema !== TABLES_SCHEMA || !form) {
    throw new InputError({
      code: 'foreign-tables',
      where: TABLES_FILE,
      found: `schema ${JSON.stringify(schema)}, form ${JSON.stringify(name)}`.slice(0, 200),
      expected: `schema "${TABLES_SCHEMA}", form ${FORMS.map((known) => `"${known.form}"`).join(' or ')}`,
      mend: 'Name a folder that "encode" of this version wrote, or write it again.',
    });
  }
  const checksum = documentChecksum(document);
  if (checksum !== document.crc32) {
    throw badTables(
      TABLES_FILE,
      `checksum ${checksum} of the document`,
      `${JSON.stringify(document.crc32)}, as written down`,
    );
  }
  const stored = new Stored(document, form.arrays, files, context);
  // One form's name goes with its own program: the list of forms is typed so.
  const tables = { form: form.form, program: await form.read(stored) } as FormProgram;
  return { document: document as unknown as TablesDocument, tables };
}

/**
 * The basis that exported tables are over, or null where it is the given one. Its transpose turns a Hamiltonian made from
 * the program of {@link readTables} back.
 *
 * @throws InputError as {@link readTables}
 */
export async function readFrame(files: FileSet, context: JobContext): Promise<StoredFrame | null> {
  const document = await readDocument(files);
  const { frame } = document;
  if (frame === undefined) return null;
  const kind = isObject(frame) ? frame.kind : undefined;
  if (kind !== 'spin' && kind !== 'orbital') {
    throw badTables(`${TABLES_FILE}: frame`, JSON.stringify(frame).slice(0, 200), 'kind "spin" or "orbital"');
  }
  const stored = new Stored(document, [FRAME_ARRAY], files, context);
  const rotation = Float64Array.from(await stored.array('frame'));
  return { kind, size: stored.size('frame'), rotation };
}

type JsonObject = { readonly [key: string]: Json };

async function readDocument(files: FileSet): Promise<JsonObject> {
  const source = files.open(TABLES_FILE);
  if (!source) {
    throw new InputError({
      code: 'no-tables-found',
      where: files.name,
      found: `no ${TABLES_FILE}`,
      expected: 'a folder that "encode" wrote, whole',
      mend: 'Name the folder itself; write the tables again where it was not finished.',
    });
  }
  if (source.size > MOST_JSON) {
    throw badTables(TABLES_FILE, `${source.size} bytes`, `at most ${MOST_JSON}`);
  }
  const text = new TextDecoder().decode(await source.read(0, source.size));
  const document = parseJson(text, TABLES_FILE);
  if (!isObject(document)) throw badTables(TABLES_FILE, 'no JSON object', 'the document of exported tables');
  return document;
}

class Stored implements StoredTables {
  readonly orbitals: number;
  readonly constant: number;
  readonly #bits: Sizes;
  readonly #sizes: Sizes;
  readonly #listed: readonly JsonObject[];

  constructor(
    document: JsonObject,
    private readonly layouts: readonly ArrayLayout[],
    private readonly files: FileSet,
    private readonly context: JobContext,
  ) {
    this.orbitals = wholeNumber(document.orbitals, 'orbitals', 1);
    if (typeof document.constant !== 'number') {
      throw badTables(`${TABLES_FILE}: constant`, JSON.stringify(document.constant), 'a number of hartree');
    }
    this.constant = document.constant;
    this.#bits = numbersOf(document.bits, 'bits');
    this.#sizes = numbersOf(document.sizes, 'sizes');
    const { arrays } = document;
    this.#listed = Array.isArray(arrays) ? arrays.filter(isObject) : [];
  }

  size(name: string): number {
    return this.#sizes[name] ?? this.refuse('sizes', `no "${name}"`, 'a number of that name');
  }

  bits(name: string): number {
    const bits = this.#bits[name];
    if (bits === undefined || !Number.isInteger(bits) || bits < 0 || bits > 32) {
      this.refuse('bits', `"${name}" ${bits ?? 'missing'}`, 'a whole number from 0 to 32');
    }
    return bits;
  }

  async array(name: string, from = 0, below = Number.POSITIVE_INFINITY): Promise<Numbers> {
    const layout = this.layouts.find((known) => known.name === name)!;
    const listed = this.#listed.find((array) => array.name === name);
    const expected = shapeOf(layout, this.#sizes);
    if (expected?.includes(0)) return new ELEMENTS[layout.type](0);
    if (!listed || !expected || JSON.stringify(listed.shape) !== JSON.stringify(expected)) {
      this.refuse(
        name,
        listed ? `shape ${JSON.stringify(listed.shape)}` : `no array "${name}" in the list`,
        `shape ${JSON.stringify(expected ?? layout.shape)}, by sizes`,
      );
    }
    const data = await this.#load(layout, expected);
    if (layout.type !== '<f8') {
      const at = data.findIndex((x: number) => x < from || x >= below);
      if (at >= 0) this.refuse(name, `${data[at]} at position ${at}`, `numbers from ${from} to ${below - 1}`);
    }
    const crc = new Crc32();
    crc.push(new Uint8Array(data.buffer, data.byteOffset, data.byteLength));
    if (crc.value !== listed.crc32) {
      this.refuse(
        name,
        `checksum ${crc.value} of the numbers`,
        `${JSON.stringify(listed.crc32)}, as written down`,
      );
    }
    return data;
  }

  async #load({ name, type }: ArrayLayout, expected: readonly number[]): Promise<Numbers> {
    const path = `${name}.npy`;
    const source: ByteSource = this.files.open(path) ?? this.refuse(name, 'no such file', path);
    const { shape, complex, data } = await readNpy(source, this.context);
    if (complex || JSON.stringify(shape) !== JSON.stringify(expected)) {
      this.refuse(
        name,
        `${complex ? 'complex numbers, ' : ''}shape ${JSON.stringify(shape)}`,
        `shape ${JSON.stringify(expected)}, as the document says`,
      );
    }
    if (type === '<f8') return data;
    const numbers = ELEMENTS[type].from(data);
    const at = data.findIndex((x, i) => x !== numbers[i]);
    if (at >= 0) this.refuse(name, `${data[at]} at position ${at}`, `a number of type ${type}`);
    return numbers;
  }

  refuse(name: string, found: string, expected: string): never {
    throw badTables(
      name === 'sizes' || name === 'bits' ? `${TABLES_FILE}: ${name}` : `${name}.npy`,
      found,
      expected,
    );
  }
}

const isObject = (value: Json | undefined): value is { [key: string]: Json } =>
  typeof value === 'object' && value !== null && !Array.isArray(value);

function wholeNumber(value: Json | undefined, name: string, least: number): number {
  if (typeof value === 'number' && Number.isSafeInteger(value) && value >= least) return value;
  throw badTables(`${TABLES_FILE}: ${name}`, JSON.stringify(value), `a whole number of at least ${least}`);
}

function numbersOf(value: Json | undefined, name: string): Sizes {
  if (isObject(value) && Object.values(value).every((x) => typeof x === 'number')) return value as Sizes;
  throw badTables(`${TABLES_FILE}: ${name}`, 'no list of numbers by their names', 'one');
}

function badTables(where: string, found: string, expected: string): InputError {
  return new InputError({
    code: 'bad-tables',
    where,
    found,
    expected,
    mend: 'The tables are damaged or changed: write them again with "encode".',
  });
}

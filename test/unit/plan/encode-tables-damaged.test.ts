import { beforeAll, describe, expect, it } from 'vitest';
import type { InputError } from '../../../core/job';
import { documentChecksum } from '../../../core/plan/encode-tables/document';
import { load, readFiles, request, roundTrip } from './encode-tables-support';

type Files = ReadonlyMap<string, Uint8Array | string>;

let spinor: Map<string, Uint8Array>;
let triplet: Map<string, Uint8Array>;
let sparse: Map<string, Uint8Array>;
beforeAll(async () => {
  const atom = await load('test/fixtures/sets/f_sto3g_2p');
  spinor = (await roundTrip(atom, request('spinor/separate/index/median/clean', { bits: 10 }))).files;
  triplet = (await roundTrip(atom, request('triplet/separate/index/median/clean', { bits: 10 }))).files;
  sparse = (await roundTrip(atom, request('sparse/-/index/none/clean', { bits: 10 }))).files;
});

const problemOf = (files: Files) =>
  readFiles(files).then(
    () => null,
    (error: InputError) => error.toProblem(),
  );

const text = (files: Files) => new TextDecoder().decode(files.get('tables.json') as Uint8Array);

/** The document with something else in a place. */
function edited(files: Files, change: (document: Record<string, never>) => void): Files {
  const document = JSON.parse(text(files));
  change(document);
  // As a program would that edits it on purpose.
  document.crc32 = documentChecksum(document);
  return new Map(files).set('tables.json', JSON.stringify(document));
}

/** A byte of the numbers changed. */
function flipped(files: Files, name: string, at: number, by = 1): Files {
  const bytes = (files.get(name) as Uint8Array).slice();
  const from = 10 + bytes[8]! + 256 * bytes[9]!;
  bytes[from + at]! ^= by;
  return new Map(files).set(name, bytes);
}

const without = (files: Files, name: string) => new Map([...files].filter(([key]) => key !== name));

describe('folders that are no tables', () => {
  it('are named as such', async () => {
    expect(await problemOf(new Map())).toMatchObject({ code: 'no-tables-found', found: 'no tables.json' });
    expect(await problemOf(new Map([['tables.json', '{"schema": "else/1"}']]))).toMatchObject({
      code: 'foreign-tables',
      where: 'tables.json',
      found: 'schema "else/1", form undefined',
    });
    expect(await problemOf(new Map([['tables.json', '[1, 2']]))).toMatchObject({ code: 'not-json' });
    expect(await problemOf(new Map([['tables.json', '[]']]))).toMatchObject({ code: 'bad-tables' });
    const earlier = edited(spinor, (document: Record<string, unknown>) => {
      document.schema = 'spinwright-tables/1';
    });
    expect(await problemOf(earlier)).toMatchObject({ code: 'foreign-tables' });
    const form = edited(spinor, (document: Record<string, unknown>) => {
      document.form = 'triplet';
    });
    expect(await problemOf(form)).toMatchObject({ code: 'bad-tables' });
  });
});

describe('damaged tables', () => {
  it('are found wherever a byte changed', async () => {
    for (const files of [spinor, triplet, sparse]) {
      for (const [name, bytes] of files) {
        if (!name.endsWith('.npy')) continue;
        const header = 10 + bytes[8]! + 256 * bytes[9]!;
        if (bytes.length === header) continue;
        // row_angles keep their meaning with another low bit, so only the checksum can tell.
        const problem = await problemOf(flipped(files, name, 0));
        expect(problem, name).toMatchObject({
          code: 'bad-tables',
          mend: 'The tables are damaged or changed: write them again with "encode".',
        });
        expect(problem!.where, name).toMatch(/\.npy$/);
      }
    }
  });

  it('are found where the document changed', async () => {
    for (const [from, to] of [
      ['"constant": -', '"constant": '],
      ['"orbitals": 3', '"orbitals": 2'],
      ['hartree', 'Hartree'],
    ] as const) {
      const changed = text(spinor).replace(from, to);
      expect(changed).not.toBe(text(spinor));
      expect(
        await problemOf(new Map<string, Uint8Array | string>(spinor).set('tables.json', changed)),
      ).toMatchObject({
        code: 'bad-tables',
        where: 'tables.json',
      });
    }
  });

  it('are found where a file is missing, cut, of another shape or another one', async () => {
    expect(await problemOf(without(spinor, 'row_sign.npy'))).toMatchObject({
      code: 'bad-tables',
      where: 'row_sign.npy',
      found: 'no such file',
    });
    const whole = spinor.get('row_angles.npy')!;
    expect(await problemOf(new Map(spinor).set('row_angles.npy', whole.slice(0, -4)))).toMatchObject({
      code: 'truncated',
      where: 'row_angles.npy',
    });
    const other = new Map(spinor).set('row_angles.npy', triplet.get('row_angles.npy')!);
    expect(await problemOf(other)).toMatchObject({ code: 'bad-tables', where: 'row_angles.npy' });
    expect(await problemOf(new Map(spinor).set('outer_keep.npy', new Uint8Array(0)))).toMatchObject({
      code: 'empty-file',
    });
  });

  it.each([
    ['a size missing', (d: Any) => delete d.sizes.outerLambda, 'tables.json: sizes'],
    ['a size changed', (d: Any) => d.sizes.rows++, /row/],
    ['more one-body items than items', (d: Any) => (d.sizes.oneBodyItems = 1e6), 'tables.json: sizes'],
    ['bits changed', (d: Any) => (d.bits.keep = 5), 'outer_keep.npy'],
    ['bits missing', (d: Any) => delete d.bits.innerKeep, 'tables.json: bits'],
    ['bits of no sense', (d: Any) => (d.bits.rotation = 0.5), 'tables.json: bits'],
    ['no orbitals', (d: Any) => (d.orbitals = 0), 'tables.json: orbitals'],
    ['other orbitals', (d: Any) => (d.orbitals = 4), 'tables.json: sizes'],
    ['no constant', (d: Any) => delete d.constant, 'tables.json: constant'],
    ['no arrays', (d: Any) => delete d.arrays, 'item_paired.npy'],
    ['sizes as words', (d: Any) => (d.sizes.items = '3'), 'tables.json: sizes'],
  ])('are found where the document has %s', async (_, change, where) => {
    const problem = await problemOf(edited(spinor, change as never));
    expect(problem).toMatchObject({ code: 'bad-tables' });
    expect(problem!.where).toMatch(where);
  });
});

describe('damaged tables of the sparse form', () => {
  it.each([
    ['another factor', (d: Any) => (d.sizes.factor += 2), 'tables.json: sizes'],
    ['fewer uniform bits than keep bits', (d: Any) => (d.sizes.uniformBits = 3), 'tables.json: sizes'],
    ['fewer rows', (d: Any) => d.sizes.rows--, /row_/],
    ['fewer orbitals', (d: Any) => (d.orbitals = 2), 'row_orbitals.npy'],
  ])('are found where the document has %s', async (_, change, where) => {
    const problem = await problemOf(edited(sparse, change as never));
    expect(problem).toMatchObject({ code: 'bad-tables' });
    expect(problem!.where).toMatch(where);
  });
});

// biome-ignore lint/suspicious/noExplicitAny: documents are changed against their type here.
type Any = any;

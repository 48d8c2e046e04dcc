import { describe, expect, it, vi } from 'vitest';
import { nodeReadPlatform } from '../../../../app/cli/hdf5';
import { type Hdf5File, memorySource, readHdf5Dataset, readTrexio } from '../../../../core/integrals';
import { Cancelled, InputError, inlineContext } from '../../../../core/job';
import { expected, fixture } from './shared-data';

const context = inlineContext();
const read = async (dataset: string) =>
  readHdf5Dataset(await fixture('arrays.h5'), dataset, nodeReadPlatform, context);
const problemOf = async (work: Promise<unknown>): Promise<InputError> => {
  const error = await work.catch((e: unknown) => e);
  expect(error).toBeInstanceOf(InputError);
  return error as InputError;
};
const bytesOf = async (name: string): Promise<Uint8Array> => {
  const source = await fixture(name);
  return source.read(0, source.size);
};

describe('readHdf5Dataset', () => {
  it.each<[string, number[], 'f' | 'c' | 'i' | 'u']>([
    ['/plain', [2, 3, 4], 'f'],
    ['plain', [2, 3, 4], 'f'],
    ['/single', [4, 3], 'f'],
    ['/big_endian', [4, 3], 'f'],
    ['/complex', [3, 2], 'c'],
    ['/complex_single', [3, 2], 'c'],
    ['/integers', [2, 3], 'i'],
    ['/bytes', [6], 'u'],
    ['/scalar', [], 'f'],
    ['/no_elements', [0, 3], 'f'],
    ['/chunked', [3, 50, 40], 'f'],
    ['/rows', [2, 600000], 'f'],
    ['/deep/er/array', [3], 'f'],
  ])('reads %s as h5py wrote it', async (dataset, shape, kind) => {
    const raw = await read(dataset);
    const count = shape.reduce((product, extent) => product * extent, 1);
    expect(raw.shape).toEqual(shape);
    expect(raw.complex).toBe(kind === 'c');
    expect(raw.origin).toBe(`arrays.h5:/${dataset.replace(/^\//, '')}`);
    const values = expected(count, kind);
    expect(raw.data.length).toBe(values.length);
    expect(raw.data.every((value, i) => value === values[i])).toBe(true);
  });

  it('tells how many elements are read, and stops between slices', async () => {
    const source = await fixture('arrays.h5');
    const told: [string, number, number | null][] = [];
    await readHdf5Dataset(source, '/rows', nodeReadPlatform, {
      ...context,
      report: (...news) => told.push(news),
    });
    expect(told.length).toBeGreaterThanOrEqual(2);
    expect(told.at(-1)).toEqual(['reading arrays.h5:/rows', 1200000, 1200000]);
    let turns = 0;
    const stopping = readHdf5Dataset(source, '/rows', nodeReadPlatform, {
      ...context,
      checkpoint: async () => {
        if (++turns === 1) throw new Cancelled();
      },
    });
    await expect(stopping).rejects.toBeInstanceOf(Cancelled);
    expect((await read('/scalar')).data[0]).toBe(0); // the file was closed, the library still works
  });

  it('lists its own datasets only, without following links, and reads attributes of groups', async () => {
    const file: Hdf5File = await nodeReadPlatform.openHdf5(await fixture('arrays.h5'));
    expect(file.datasets()).toContain('/deep/er/array');
    expect(file.datasets()).not.toContain('/outside');
    expect(file.datasets()).not.toContain('/deep');
    expect(file.attribute('norb')).toBe(5);
    expect(file.attribute('e_core')).toBe(-1.25);
    expect(file.attribute('title')).toBeUndefined();
    expect(file.attribute('none')).toBeUndefined();
    expect(file.attribute('count', '/deep')).toBe(7);
    expect(file.attribute('count', '/none')).toBeUndefined();
    file.close();
    file.close();
  });

  it.each([
    ['/none', 'no-such-dataset', '/chunked'],
    ['/deep', 'no-such-dataset', 'arrays.h5:/deep'],
    ['/outside', 'no-such-dataset', '/outside'],
    ['/half', 'bad-element-type', 'float64'],
    ['/words', 'bad-element-type', 'arrays.h5:/words'],
    ['/text', 'bad-element-type', ''],
    ['/pairs', 'bad-element-type', ''],
    ['/nothing', 'bad-element-type', ''],
    ['/complex_big_endian', 'bad-element-type', ''],
    ['/nan', 'not-finite', '/nan[1, 0]'],
    ['/unallocated', 'implausible-size', '1526 MiB'],
  ])('refuses %s', async (dataset, code, part) => {
    const error = await problemOf(read(dataset));
    expect(error.code, error.message).toBe(code);
    expect(error.message).toContain(part);
  });

  it('refuses what is no HDF5 file, and says how much of a cut one is there, all without a word on stderr', async () => {
    const spy = vi.spyOn(console, 'error').mockImplementation(() => {});
    const bytes = await bytesOf('arrays.h5');
    const open = (content: Uint8Array | string) =>
      problemOf(readHdf5Dataset(memorySource('x.h5', content), '/plain', nodeReadPlatform, context));
    expect((await open('')).code).toBe('empty-file');
    expect((await open('no HDF5')).code).toBe('not-hdf5');
    expect((await open(bytes.slice(0, 8))).code).toBe('not-hdf5');
    const cut = await open(bytes.slice(0, bytes.length - 1000));
    expect(cut.code).toBe('truncated');
    expect(cut.message).toContain(`${bytes.length - 1000} bytes`);
    expect(cut.message).toContain(`${bytes.length} bytes`);
    expect(spy).not.toHaveBeenCalled();
    spy.mockRestore();
  });

  it('refuses a damaged chunk instead of returning what was in memory before', async () => {
    const bytes = await bytesOf('arrays.h5');
    const good = await readHdf5Dataset(memorySource('x.h5', bytes), '/rows', nodeReadPlatform, context);
    expect(good.data[1]).toBe(1 / 8);
    // The gzip streams of /rows begin with 78 DA, level 9, and come later than those of /chunked.
    let damaged = 0;
    for (let at = 20; at < bytes.length; at++) {
      if (bytes[at] === 0x78 && bytes[at + 1] === 0xda) {
        bytes[at + 40] ^= 0xff;
        damaged++;
      }
    }
    expect(damaged).toBeGreaterThan(3);
    const error = await problemOf(
      readHdf5Dataset(memorySource('x.h5', bytes), '/rows', nodeReadPlatform, context),
    );
    expect(error.code).toBe('hdf5-unreadable');
    expect(error.where).toBe('x.h5:/rows');
  });
});

describe('readTrexio', () => {
  /** The invented integrals of test/fixtures/formats/make.py. */
  const eri = (p: number, q: number, r: number, s: number) =>
    1 / ((1 + p + q) * (1 + r + s)) + ((p + q) * (r + s)) / 64;

  it.each(['trexio_int64.h5', 'trexio_uint16.h5'])('reads %s, written with h5py', async (name) => {
    const n = 5;
    const contents = await readTrexio(await fixture(name), nodeReadPlatform, context);
    expect([contents.orbitals, contents.electrons, contents.ms2]).toEqual([5, 5, 1]);
    // Charges 8, 1, 1 at distances 2, 3 and √13.
    expect(Math.abs(contents.constant - (8 / 2 + 8 / 3 + 1 / Math.sqrt(13)))).toBeLessThan(1e-14);
    expect(contents.notes.join(' ')).toContain('computed from charges and coordinates');
    expect(contents.notes.join(' ')).toContain('kinetic and potential_n_e');
    const pair = (p: number, q: number) => (p >= q ? (p * (p + 1)) / 2 + q : (q * (q + 1)) / 2 + p);
    for (let p = 0; p < n; p++) {
      for (let q = 0; q < n; q++) {
        const h = (p === q ? 1.5 : 0) - 1 / (1 + p + q);
        expect(Math.abs(contents.oneElectron[p * n + q] - h)).toBeLessThan(1e-15);
        for (let r = 0; r < n; r++) {
          for (let s = 0; s < n; s++) {
            const value = contents.twoElectron[pair(pair(p, q), pair(r, s))];
            expect(Math.abs(value - eri(p, q, r, s))).toBeLessThan(1e-15);
          }
        }
      }
    }
  });

  it('refuses an HDF5 file without the groups of TREXIO', async () => {
    const error = await problemOf(readTrexio(await fixture('arrays.h5'), nodeReadPlatform, context));
    expect(error.code).toBe('bad-header');
    expect(error.message).toContain('arrays.h5:/mo');
  });

  // A file that differs from a good one in one place.
  const changed = (change: Partial<Record<string, number | Float64Array | null>>) => ({
    async openHdf5() {
      const file = await nodeReadPlatform.openHdf5(await fixture('trexio_int64.h5'));
      const wrapped: Hdf5File = {
        datasets: () => file.datasets(),
        dataset: (path) => {
          const dataset = file.dataset(path);
          const other = change[path];
          if (other === undefined || dataset === undefined) return dataset;
          if (other === null) return undefined;
          const data = other as Float64Array;
          return { path, shape: [data.length], kind: 'float', readAll: async () => data };
        },
        attribute: (name, group) =>
          name in change ? ((change[name] as number | null) ?? undefined) : file.attribute(name, group),
        close: () => file.close(),
      };
      return wrapped;
    },
  });

  it.each<[string, Partial<Record<string, number | Float64Array | null>>, string, string]>([
    ['too many electrons', { electron_up_num: 6 }, 'electron-count', '6 + 2'],
    ['no integrals', { '/mo_2e_int/mo_2e_int_eri_values': null }, 'no-such-dataset', 'eri_values'],
    [
      'indices that do not count',
      { '/mo_2e_int/mo_2e_int_eri_values': new Float64Array(3) },
      'wrong-shape',
      '3 values',
    ],
    [
      'an index too large',
      { '/mo_2e_int/mo_2e_int_eri_indices': new Float64Array(480).fill(5) },
      'index-out-of-range',
      'index 5',
    ],
    [
      'two values for one integral',
      { '/mo_2e_int/mo_2e_int_eri_indices': new Float64Array(480) },
      'duplicate-entry',
      'entry',
    ],
    [
      'an asymmetric h',
      { '/mo_1e_int/mo_1e_int_kinetic': Float64Array.from({ length: 25 }, (_, i) => i) },
      'asymmetric',
      'differ',
    ],
    ['a wrong shape', { '/mo_1e_int/mo_1e_int_kinetic': new Float64Array(24) }, 'wrong-shape', '25'],
    ['nuclei in one place', { '/nucleus/nucleus_coord': new Float64Array(9) }, 'not-finite', 'same place'],
    ['too many orbitals', { mo_num: 5000 }, 'bad-header', '5000'],
    ['no orbitals', { mo_num: null }, 'bad-header', 'mo_num'],
  ])('refuses %s', async (_name, change, code, part) => {
    const error = await problemOf(readTrexio(await fixture('trexio_int64.h5'), changed(change), context));
    expect(error.code, error.message).toBe(code);
    expect(error.message).toContain(part);
  });
});

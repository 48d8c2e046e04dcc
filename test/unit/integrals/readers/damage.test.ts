import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { nodeReadPlatform } from '../../../../app/cli/hdf5';
import {
  type ByteSource,
  memorySource,
  readFcidump,
  readHdf5Dataset,
  readIndexList,
  readNpy,
  readNpz,
  readTrexio,
} from '../../../../core/integrals';
import { InputError, inlineContext } from '../../../../core/job';
import { fixture } from './shared-data';

const context = inlineContext();
const FCIDUMP = `&FCI NORB=2,NELEC=2,MS2=0,\n ORBSYM=1,1,\n ISYM=1,\n&END
0.7 1 1 1 1\n0.1 2 1 1 1\n0.6 2 2 1 1\n0.2 2 1 2 1\n-1.2 1 1 0 0\n0.3 2 1 0 0\n0.9 0 0 0 0\n`;
const SPINOR = `&FCI NORB=2,TREL=.TRUE. &END\n(0.5,0.25) 2 1 1 1\n(0.3,0.4) 2 1 0 0\n(2.5,0.0) 0 0 0 0\n`;
const LIST = { columns: ['p', 'q', 'value'], base: 1 as const, components: [], orbitals: 3 };

const fixtureBytes = async (name: string): Promise<Uint8Array> => {
  const source = await fixture(name);
  return source.read(0, source.size);
};
const textBytes = async (text: string): Promise<Uint8Array> => new TextEncoder().encode(text);

/** What is read, and how many damaged copies of it are tried. */
const READERS: [string, () => Promise<Uint8Array>, (source: ByteSource) => Promise<unknown>, number][] = [
  ['FCIDUMP', () => textBytes(FCIDUMP), (source) => readFcidump(source, context), 400],
  ['spinor FCIDUMP', () => textBytes(SPINOR), (source) => readFcidump(source, context), 400],
  ['list', () => textBytes('1 1 0.5\n2 1 0.25\n'), (source) => readIndexList(source, LIST, context), 200],
  ['npy', () => fixtureBytes('c16_fortran.npy'), (source) => readNpy(source, context), 400],
  ['npz', () => fixtureBytes('stored.npz'), (source) => readNpz(source, 'small', context), 400],
  ['deflated npz', () => fixtureBytes('deflated.npz'), (source) => readNpz(source, 'long', context), 40],
  [
    'HDF5',
    () => fixtureBytes('arrays.h5'),
    (source) => readHdf5Dataset(source, '/chunked', nodeReadPlatform, context),
    40,
  ],
  [
    'TREXIO',
    () => fixtureBytes('trexio_int64.h5'),
    (source) => readTrexio(source, nodeReadPlatform, context),
    40,
  ],
];

// What comes out may be numbers, where the damage hits one; but an error is always for people.
describe('damaged files', () => {
  it.each(READERS)(
    '%s: cut, overwritten or scrambled bytes give an InputError or numbers',
    async (...reader) => {
      const [, load, read, numRuns] = reader;
      const good = await load();
      await expect(read(memorySource('F', good))).resolves.toBeDefined();
      const place = fc.integer({ min: 0, max: good.length - 1 });
      const damage = fc.oneof(
        place.map((length) => good.slice(0, length)),
        fc.array(fc.tuple(place, fc.nat(255)), { minLength: 1, maxLength: 4 }).map((changes) => {
          const bytes = good.slice();
          for (const [at, value] of changes) bytes[at] = value;
          return bytes;
        }),
        fc.tuple(place, place, fc.nat(64)).map(([from, to, length]) => {
          const bytes = good.slice();
          bytes.copyWithin(to, from, from + length);
          return bytes;
        }),
      );
      await fc.assert(
        fc.asyncProperty(damage, async (bytes) => {
          const error = await read(memorySource('F', bytes)).then(
            () => null,
            (e: unknown) => e,
          );
          if (error === null) return;
          expect(error, String(error)).toBeInstanceOf(InputError);
          expect((error as InputError).message).toMatch(/^F[:\s]?/);
          expect((error as InputError).message).not.toContain('\n');
        }),
        { numRuns },
      );
    },
  );
});

import fc from 'fast-check';
import { beforeAll, expect, it } from 'vitest';
import { InputError } from '../../core/job';
import type { FormProgram } from '../../core/plan';
import { documentChecksum } from '../../core/plan/encode-tables/document';
import { load, readFiles, request, roundTrip } from '../unit/plan/encode-tables-support';

let folders: { readonly files: ReadonlyMap<string, Uint8Array>; readonly program: FormProgram }[];
beforeAll(async () => {
  const atom = await load('test/fixtures/sets/f_sto3g_2p');
  folders = [];
  for (const name of [
    'triplet/separate/index/median/clean',
    'spinor/joint/index/median/clean',
    'spinor/separate/index/median/clean',
    'sparse/-/index/none/clean',
  ]) {
    const { files, stored } = await roundTrip(atom, request(name, { bits: 10 }));
    folders.push({ files, program: stored });
  }
});

/** Damaged in any way, tables are refused with an InputError, or the damage is where it does not matter. */
async function refusedOrUnharmed(
  files: ReadonlyMap<string, Uint8Array | string>,
  program: FormProgram,
): Promise<void> {
  const found = await readFiles(files).catch((error: unknown) => error);
  if (found instanceof InputError) {
    for (const part of Object.values(found.toProblem())) expect(part).not.toBe('');
  } else expect(found).toEqual(program);
}

const place = fc.double({ min: 0, max: 1, maxExcluded: true, noNaN: true });

it('tables with other bytes anywhere', async () => {
  await fc.assert(
    fc.asyncProperty(
      fc.nat(3),
      place,
      place,
      fc.integer({ min: 1, max: 255 }),
      async (which, file, at, by) => {
        const { files, program } = folders[which]!;
        const names = [...files.keys()];
        const name = names[Math.floor(file * names.length)]!;
        const bytes = files.get(name)!.slice();
        bytes[Math.floor(at * bytes.length)]! ^= by;
        await refusedOrUnharmed(new Map(files).set(name, bytes), program);
      },
    ),
    { numRuns: 600 },
  );
});

it('tables cut short, or with bytes behind them', async () => {
  await fc.assert(
    fc.asyncProperty(fc.nat(3), place, place, async (which, file, at) => {
      const { files, program } = folders[which]!;
      const names = [...files.keys()];
      const name = names[Math.floor(file * names.length)]!;
      const bytes = files.get(name)!;
      const length = Math.floor(at * (bytes.length + 20));
      const cut = new Uint8Array(length);
      cut.set(bytes.subarray(0, Math.min(length, bytes.length)));
      await refusedOrUnharmed(new Map(files).set(name, cut), program);
    }),
    { numRuns: 200 },
  );
});

const value = fc.oneof(
  fc.constantFrom<unknown>(null, '', 'x', true, [], {}, -1, 0, 1, 2, 0.5, 1e9, 1e300, -1e300),
  fc.integer({ min: -5, max: 100 }),
);

it('documents with another value in any place', async () => {
  await fc.assert(
    fc.asyncProperty(fc.nat(3), place, place, value, async (which, key, inner, other) => {
      const { files, program } = folders[which]!;
      const document = JSON.parse(new TextDecoder().decode(files.get('tables.json')!));
      const keys = ['schema', 'form', 'orbitals', 'constant', 'bits', 'sizes', 'sizes', 'sizes', 'arrays'];
      const chosen = keys[Math.floor(key * keys.length)]!;
      const own = document[chosen];
      if (typeof own === 'object') {
        const names = Object.keys(own);
        own[names[Math.floor(inner * names.length)]!] = other;
      } else document[chosen] = other;
      // With its own checksum as written, and with one that fits.
      const changed = new Map<string, Uint8Array | string>(files).set(
        'tables.json',
        JSON.stringify(document),
      );
      await refusedOrUnharmed(changed, program);
      document.crc32 = documentChecksum(document);
      const found = await readFiles(changed.set('tables.json', JSON.stringify(document))).catch(
        (error: unknown) => error,
      );
      if (!(found instanceof InputError)) expect(found).toMatchObject({ form: program.form });
    }),
    { numRuns: 600 },
  );
});

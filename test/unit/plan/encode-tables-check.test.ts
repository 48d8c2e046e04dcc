import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { answer } from '../../../app/cli/jobs';
import { printResult } from '../../../app/cli/print';
import { parseCall } from '../../../app/cli/program';
import { fileSetFromMemory, type IntegralSet } from '../../../core/integrals';
import { checkTables } from '../../../core/plan';
import { documentChecksum } from '../../../core/plan/encode-tables/document';
import { findSet, loadSet } from '../../published/data-set';
import { ctx, load, request, roundTrip } from './encode-tables-support';

const ATOM = 'test/fixtures/sets/f_sto3g_2p';
const ORBIT = ['sf', 'so1', 'somf', 'so2'];
let atom: IntegralSet;
beforeAll(async () => {
  atom = await load(ATOM);
});

const filesFrom = async (set: IntegralSet, variant: string, change: object = {}) =>
  (await roundTrip(set, request(variant, change))).files;

const checked = (files: ReadonlyMap<string, Uint8Array | string>, set: IntegralSet | null) =>
  checkTables(fileSetFromMemory('tables', files), set, ctx);

/** The document with a number changed on purpose, its checksum with it. */
function edited(files: ReadonlyMap<string, Uint8Array>, change: (document: { constant: number }) => void) {
  const document = JSON.parse(new TextDecoder().decode(files.get('tables.json')!));
  change(document);
  document.crc32 = documentChecksum(document);
  return new Map<string, Uint8Array | string>(files).set('tables.json', JSON.stringify(document));
}

describe('tables held against the files they were made from', () => {
  it.each([
    'triplet/separate/index/median/clean',
    'hypercontracted/separate/index/optimised/clean',
    'spinor/separate/index/median/clean',
    'sparse/-/index/optimised/clean',
  ])('%s: levels agree within rounding and truncation', async (variant) => {
    const files = await filesFrom(atom, variant, { terms: ORBIT });
    const { levels, checks, document } = await checked(files, atom);
    expect(levels!.orbitals).toEqual([1, 2, 3]);
    expect(levels!.files).toHaveLength(6);
    expect(checks.map(({ ok }) => ok)).toEqual([true, true]);
    expect(checks[1]!.value).toBeGreaterThan(0);
    // The same levels as at writing, by another route: there from the program before it was written.
    levels!.files.forEach((x, i) => {
      expect(x).toBeCloseTo(document.window!.exact[i]!, 10);
    });
    const alone = await checked(files, null);
    expect(alone.levels).toBeNull();
    expect(alone.checks).toHaveLength(1);
  });

  it('fail where the tables are of something a little different', async () => {
    const files = await filesFrom(atom, 'spinor/separate/index/median/clean', { terms: ORBIT });
    const moved = edited(files, (document) => {
      document.constant += 1e-4;
    });
    const { checks } = await checked(moved, atom);
    expect(checks.map(({ ok }) => ok)).toEqual([true, false]);
    expect(checks[1]!.value).toBeCloseTo(1e-4, 6);
  });

  it('are refused beside the files of another system', async () => {
    const files = await filesFrom(atom, 'sparse/-/index/none/clean', { terms: ORBIT });
    const other = await load('test/fixtures/sets/oh_sto3g');
    await expect(checked(files, other)).rejects.toMatchObject({ code: 'other-system' });
  });

  it('take the window and the frame they were made with', async () => {
    const set = await load('test/fixtures/sets/ch2o_sto3g_8o');
    const how = { window: { orbitals: [3, 4, 5], electrons: null }, terms: ORBIT };
    for (const frames of [
      { spin: 'optimised', orbital: 'given' },
      { spin: 'given', orbital: 'optimised' },
    ]) {
      for (const variant of ['triplet/separate/index/median/clean', 'sparse/-/index/none/clean']) {
        const { levels, checks, document } = await checked(
          await filesFrom(set, variant, { ...how, frames }),
          set,
        );
        expect(document.orbitals).toBe(3);
        expect(levels!.orbitals).toEqual([1, 2, 3]);
        expect(checks.every(({ ok }) => ok)).toBe(true);
      }
    }
  });
});

const spinors = findSet('spinor_fcidump');
it.skipIf(spinors === null)('tables of a spinor file against the file', async () => {
  const set = await loadSet(spinors!, ['oh_sto3g_4c_breit.FCIDUMP']);
  const { levels, checks } = await checked(await filesFrom(set, 'spinor/joint/index/median/clean'), set);
  expect(checks.map(({ ok }) => ok)).toEqual([true, true]);
  // reference.json of the folder: Dirac–Coulomb–Breit levels by an independent configuration interaction.
  expect(levels!.files[0]).toBeCloseTo(-74.42350709, 7);
});

describe('the command', () => {
  const folder = mkdtempSync(join(tmpdir(), 'spinwright-tables-'));
  afterAll(() => rmSync(folder, { recursive: true }));

  const run = async (...args: string[]) => {
    const { request: asked, manner } = parseCall(['tables', ...args, '--quiet'], 'demo', () => {});
    let text = '';
    const write = (chunk: string): boolean => {
      text += chunk;
      return true;
    };
    const stream = { write, isTTY: false } as never;
    const status = printResult(await answer(asked, ctx), manner, stream, stream);
    return { status, text };
  };

  const put = (name: string, files: ReadonlyMap<string, Uint8Array | string>): string => {
    const path = join(folder, name);
    mkdirSync(path);
    for (const [file, bytes] of files) writeFileSync(join(path, file), bytes);
    return path;
  };

  it('says what a folder holds, and ends with 4 where a check fails', async () => {
    const files = await filesFrom(atom, 'spinor/separate/index/median/clean', { terms: ORBIT });
    const path = put('good', files);
    const alone = await run(path);
    expect(alone.status).toBe(0);
    expect(alone.text).toContain('tables of the spinor form');
    expect(alone.text).toContain('1 hold, 0 failed');
    const both = await run(path, ATOM);
    expect(both.status).toBe(0);
    expect(both.text).toContain('2 hold, 0 failed');
    expect(both.text).toMatch(/levels of the tables against the files/);
    const wrong = edited(files, (document) => {
      document.constant -= 1;
    });
    const bad = await run(put('wrong', wrong), ATOM);
    expect(bad.status).toBe(4);
    expect(bad.text).toContain('FAILED levels of the tables against the files');
    const document = JSON.parse((await run(path, ATOM, '--json')).text);
    expect(document.schema).toBe('spinwright-tables-check/1');
    expect(document.checks).toHaveLength(2);
  });

  it('refuses folders of anything else', async () => {
    await expect(run(ATOM)).rejects.toMatchObject({ code: 'no-tables-found' });
    await expect(run(join(folder, 'nowhere'))).rejects.toMatchObject({ code: 'missing-file' });
  });
});

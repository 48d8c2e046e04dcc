import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { InputError } from '../../../core/job';
import { spinwright } from './call';
import { manifest } from './manifest';

/** Too large for the corpus folder, so they are made here: what is meant to make a reader slow or fat. */
const CASES: readonly [string, string, () => string, string][] = [
  ['a blank line of 60 kB in the header', 'a.fcidump', () => header(' '.repeat(60_000)), 'no-entries'],
  ['a word of 60 kB in the header', 'a.fcidump', () => header('x'.repeat(60_000)), 'bad-header'],
  ['open brackets all over the header', 'a.fcidump', () => header('x ('.repeat(15_000)), 'bad-header'],
  ['ten thousand keys in the header', 'a.fcidump', () => header('K=1\n'.repeat(10_000)), 'no-entries'],
  ['a header of 1 MB', 'a.fcidump', () => header('K=1,\n'.repeat(200_000)), 'unclosed-header'],
  ['repeat counts that stand for 5e8 labels', 'a.fcidump', () => header(`ORBSYM=${stars}`), 'bad-header'],
  ['a hundred thousand blank lines', 'a.fcidump', () => '\n'.repeat(100_000), 'bad-header'],
  ['no line end in 200 kB', 'a.fcidump', () => `${header('')}${'1'.repeat(200_000)}`, 'line-too-long'],
  ['NORB=127 in five lines', 'a.fcidump', () => large(127, '', '-0.5 1 1 1 1'), 'coulomb-not-positive'],
  ['64 spinors in five lines', 'a.fcidump', () => large(64, 'TREL=.TRUE.,', '(0.5,0.1) 1 1 1 1'), 'symmetry'],
  ['a recipe of 2 MB', 'a.recipe.json', () => ' '.repeat(2_000_000), 'too-large'],
  [
    '140 000 bad paths',
    'a.recipe.json',
    () => recipe(`"ignore":[${'"../b",'.repeat(140_000)}"b"]`),
    'schema',
  ],
  ['a key of 1 MB', 'a.recipe.json', () => recipe(`"${'k'.repeat(1_000_000)}":1`), 'schema'],
  ['a title of 1 MB', 'a.recipe.json', () => recipe(`"title":"${'k'.repeat(1_000_000)}"`), 'schema'],
  ['80 000 unknown keys', 'a.recipe.json', () => recipe(unknownKeys()), 'schema'],
  [
    'half a million occupations',
    'a.recipe.json',
    () => recipe(`"occupations":[${'2,'.repeat(5e5)}9]`),
    'schema',
  ],
];

const stars = '9999*1,'.repeat(9_000);
const header = (text: string) => ` &FCI NORB=2,NELEC=2,MS2=0,\n${text}\n &END\n`;
const large = (n: number, keys: string, entry: string) =>
  ` &FCI NORB=${n},NELEC=2,${keys}\n &END\n${entry}\n-1.0 1 1 0 0\n0.7 0 0 0 0\n`;
const recipe = (keys: string) =>
  `{"schema":"spinwright-recipe/1",${keys},"parts":[{"id":"a","role":"spin-free","file":"a.fcidump"}]}`;
const unknownKeys = () => Array.from({ length: 80_000 }, (_, i) => `"k${i}":0`).join(',');

describe('malformed files too large to keep', () => {
  let folder: string;
  beforeAll(() => {
    folder = mkdtempSync(join(tmpdir(), 'corpus-'));
  });
  afterAll(() => rmSync(folder, { recursive: true }));

  it.each(CASES)(
    '%s',
    async (_name, file, content, code) => {
      const path = join(folder, file);
      writeFileSync(path, content());
      const { status, stdout, stderr, error } = await spinwright(['compare', path, '--target', '5cm-1']);
      expect(error, stderr.slice(0, 500)).toBeInstanceOf(InputError);
      expect({ status, stdout, code: (error as InputError).code }).toEqual({ status: 2, stdout: '', code });
      // A line that people can read, however long the names in the file are.
      expect(stderr.trimEnd()).not.toContain('\n');
      expect(stderr.length).toBeLessThan(700);
    },
    4 * 1000 * manifest.limits.seconds,
  );
});

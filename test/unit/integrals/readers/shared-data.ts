import { existsSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { folderFiles, namedFiles } from '../../../../app/cli/files';
import type { ByteSource, FileSet } from '../../../../core/integrals';

const SHARED = fileURLToPath(new URL('../../../../../shared/data', import.meta.url));
const FIXTURES = fileURLToPath(new URL('../../../fixtures/formats', import.meta.url));

export const haveShared = existsSync(SHARED);
if (!haveShared) console.warn('../shared/data is absent: the tests against real files are skipped.');

export const sharedFolder = (name: string): Promise<FileSet> => folderFiles(`${SHARED}/${name}`);

export async function fixture(name: string): Promise<ByteSource> {
  return (await namedFiles([`${FIXTURES}/${name}`])).list()[0];
}

/** Real part of element m of every fixture, as test/fixtures/formats/make.py defines it. */
export const fixtureValue = (m: number): number => (m % 251) / 8;
export const fixtureImaginary = (m: number): number => 0 - (m % 7) / 4;
export const fixtureInteger = (m: number): number => m % 100;

export function expected(count: number, kind: 'f' | 'c' | 'i' | 'u'): number[] {
  const numbers: number[] = [];
  for (let m = 0; m < count; m++) {
    if (kind === 'i' || kind === 'u') numbers.push(fixtureInteger(m));
    else numbers.push(fixtureValue(m));
    if (kind === 'c') numbers.push(fixtureImaginary(m));
  }
  return numbers;
}

import { existsSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, expect, it } from 'vitest';
import { answer } from '../../../app/cli/jobs';
import { removePending } from '../../../app/cli/output';
import { printResult } from '../../../app/cli/print';
import { parseCall } from '../../../app/cli/program';
import { parseNpyHeader } from '../../../core/integrals/readers/npy-header';
import { InputError, inlineContext } from '../../../core/job';
import { readTables, type TablesDocument } from '../../../core/plan';

const folder = mkdtempSync(join(tmpdir(), 'spinwright-encode-'));
afterAll(() => rmSync(folder, { recursive: true }));

const call = (out: string) =>
  parseCall(
    [
      ...[
        'encode',
        'test/fixtures/sets/f_sto3g_2p',
        '--terms',
        'sf,so1,somf,so2',
        '--target',
        '5cm-1',
        '--quiet',
      ],
      ...['--variant', 'triplet/separate/swap-layers/median/clean', '--threshold', '1e-4', '--out', out],
    ],
    'demo',
    () => {},
  );

/** The values of a little-endian .npy file, without the reader of the core. */
function values(path: string): ArrayLike<number> {
  const bytes = readFileSync(path);
  const start = 10 + bytes.readUInt16LE(8);
  expect(start % 64).toBe(0);
  parseNpyHeader(path, bytes.subarray(10, start).toString('latin1'));
  const descr = /'descr': '(...)'/.exec(bytes.subarray(10, start).toString('latin1'))![1]!;
  const data = bytes.buffer.slice(bytes.byteOffset + start, bytes.byteOffset + bytes.length) as ArrayBuffer;
  if (descr === '<f8') return new Float64Array(data);
  if (descr === '<u4') return new Uint32Array(data);
  return descr === '|i1' ? new Int8Array(data) : new Uint8Array(data);
}

it('encode writes a folder, whole, that stands for the program', async () => {
  const out = join(folder, 'tables');
  const { request, manner } = call(out);
  const result = await answer(request, inlineContext());
  expect(existsSync(out)).toBe(false);
  let text = '';
  const write = (chunk: string): boolean => {
    text += chunk;
    return true;
  };
  const stream = { write, isTTY: false } as never;
  expect(printResult(result, manner, stream, stream)).toBe(0);
  expect(text).toMatch(/realised bound +\S+ +rigorous/);

  const document = JSON.parse(readFileSync(join(out, 'tables.json'), 'utf8')) as TablesDocument;
  expect(readdirSync(out).sort()).toEqual(['tables.json', ...document.arrays.map(({ file }) => file)].sort());
  expect(readdirSync(folder)).toEqual(['tables']);
  const arrays = new Map(document.arrays.map(({ name, file }) => [name, values(join(out, file))]));
  const program = readTables(document, arrays);
  expect(program.items.length + 1).toBe(document.sizes.items);
  const lambda = program.items.flatMap((item) => item.lambda).reduce((sum, x) => sum + x, 0);
  // Rounded to multiples of 2^−(n + ℵ) of λ.
  expect(Math.abs(lambda - document.lambda.twoBody)).toBeLessThan(1e-5);
});

it('encode leaves a folder with files alone', async () => {
  const out = join(folder, 'used');
  const { request } = call(join(out, 'deeper'));
  await answer(request, inlineContext());
  removePending();
  writeFileSync(join(folder, 'mine'), 'x');
  const again = call(folder);
  const error = await answer(again.request, inlineContext()).catch((e: unknown) => e as InputError);
  expect(error).toBeInstanceOf(InputError);
  expect((error as InputError).toProblem().code).toBe('folder-in-use');
  expect(readFileSync(join(folder, 'mine'), 'utf8')).toBe('x');
  const onFile = await answer(call(join(folder, 'mine')).request, inlineContext()).catch((e: unknown) => e);
  expect((onFile as InputError).toProblem().code).toBe('folder-in-use');
});

import {
  existsSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  rmSync,
  truncateSync,
  writeFileSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { folderFiles } from '../../../app/cli/files';
import { answer } from '../../../app/cli/jobs';
import { removePending, writeFolder } from '../../../app/cli/output';
import { printResult } from '../../../app/cli/print';
import { parseCall } from '../../../app/cli/program';
import { InputError, inlineContext, type JobContext } from '../../../core/job';
import { readTables, type TablesDocument } from '../../../core/plan';

const folder = mkdtempSync(join(tmpdir(), 'spinwright-encode-'));
afterAll(() => rmSync(folder, { recursive: true }));

const TRIPLET = 'triplet/separate/swap-layers/median/clean';

const call = (out: string, variant = TRIPLET) =>
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
      ...['--variant', variant, '--threshold', '1e-4', '--out', out],
    ],
    'demo',
    () => {},
  );

it.each([
  [TRIPLET, 'triplet'],
  ['spinor/separate/index/median/clean', 'spinor'],
  ['sparse/-/index/none/clean', 'sparse'],
])('encode writes a folder, whole, that stands for the program: %s', async (variant, form) => {
  const out = join(folder, form);
  const { request, manner } = call(out, variant);
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
  expect(text).toContain(`tables of the ${form} form`);

  const document = JSON.parse(readFileSync(join(out, 'tables.json'), 'utf8')) as TablesDocument;
  expect(readdirSync(out).sort()).toEqual(['tables.json', ...document.arrays.map(({ file }) => file)].sort());
  expect(readdirSync(folder).filter((name) => name.startsWith('.'))).toEqual([]);
  expect(text).toContain(`${document.arrays.length} arrays`);
  const stored = await readTables(await folderFiles(out), inlineContext());
  expect(stored.form).toBe(form);
  // Weights are multiples of a unit, which sum to lambda exactly.
  expect(lambdaOf(stored)).toBeCloseTo(document.lambda.total, 9);
});

function lambdaOf({ program }: Awaited<ReturnType<typeof readTables>>): number {
  if ('kindOf' in program) return program.weights.reduce((sum, x) => sum + x, 0);
  const sum = (numbers: readonly number[]) => numbers.reduce((total, x) => total + x, 0);
  const weights = (rows: readonly { readonly faces: readonly { readonly weight: number }[] }[]) =>
    sum(rows.map((row) => row.faces[0]!.weight));
  if ('spared' in program) {
    return (
      sum(program.items.flatMap((item) => item.faces.map((face) => face.lambda))) +
      sum(program.oneBody.map((item) => weights(item.rows)))
    );
  }
  return sum(program.items.flatMap((item) => item.lambda)) + weights(program.oneBody);
}

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

/** A context that stops the job, or does something, once a stage is reached. */
function atStage(stage: RegExp, act: () => void): JobContext {
  const context: JobContext = {
    ...inlineContext(),
    report: (name) => {
      if (stage.test(name)) act();
    },
  };
  return context;
}

describe('encode leaves nothing half-written', () => {
  it('where it is stopped in the middle', async () => {
    const out = join(folder, 'stopped');
    const { request } = call(out);
    const stop = atStage(/^writing inner_keep/, () => {
      throw new Error('stopped');
    });
    await expect(answer(request, stop)).rejects.toThrow('stopped');
    expect(existsSync(out)).toBe(false);
    removePending();
    expect(readdirSync(folder).filter((name) => name.includes('stopped'))).toEqual([]);
  });

  it('where the disk loses some of it before it is put in place', async () => {
    const out = join(folder, 'lost');
    const { request } = call(out);
    if (request.command !== 'encode') throw new Error('another command');
    const { temporary } = request.out;
    const lose = atStage(/^reading tables.json/, () => truncateSync(join(temporary, 'row_angles.npy'), 100));
    await expect(answer(request, lose)).rejects.toBeInstanceOf(InputError);
    expect(existsSync(out)).toBe(false);
    removePending();
  });

  it('where a file cannot be written', async () => {
    const temporary = join(folder, 'taken');
    mkdirSync(temporary);
    writeFileSync(join(temporary, 'a'), '');
    const produce = async (append: (name: string, bytes: Uint8Array) => void) =>
      append('a', new Uint8Array(1));
    await expect(writeFolder({ path: join(folder, 'shown'), temporary }, produce)).rejects.toMatchObject({
      code: 'cannot-write',
      where: join(folder, 'shown'),
    });
  });
});

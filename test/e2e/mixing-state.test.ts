import { spawn, spawnSync } from 'node:child_process';
import { existsSync, mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { ensureBuilt, ensureKernels } from '../../build/setup.mjs';
import { findSet } from '../published/data-set';

const CLI = fileURLToPath(new URL('../../dist/node/cli.js', import.meta.url));
const set = findSet('ch2o_631g_20o');
const folder = mkdtempSync(join(tmpdir(), 'mixing-state-'));
beforeAll(async () => {
  await ensureKernels();
  await ensureBuilt(['node']);
}, 300_000);
afterAll(() => rmSync(folder, { recursive: true }));

describe.skipIf(set === null)('compare --mixing-state', () => {
  const path = join(folder, 'mixing.json');
  const args = (threshold: string) => [
    ...[CLI, 'compare', set!, '--target', '1mEh', '--terms', 'sf', '--threshold', threshold],
    ...['--variants', 'compressed/separate/swap-layers/optimised/clean', '--mixing-state', path, '--json'],
  ];
  const coulomb = () => JSON.parse(readFileSync(path, 'utf8')).runs[0].parts.coulomb;
  const lambdaOf = (stdout: string) => JSON.parse(stdout).variants[0].lambda.total;

  it('keeps the best on Ctrl-C, goes on from it, and takes a finished one as it is', async () => {
    const child = spawn(process.execPath, args('1e-6'));
    let stdout = '';
    let stderr = '';
    child.stdout.on('data', (chunk) => {
      stdout += chunk;
    });
    child.stderr.on('data', (chunk) => {
      stderr += chunk;
    });
    // Well inside the mixing, which takes some seconds.
    await new Promise((resolve) => setTimeout(resolve, 3000));
    expect(child.exitCode).toBeNull();
    child.kill('SIGINT');
    const status = await new Promise((resolve) => child.once('exit', resolve));
    expect({ status, stdout }).toEqual({ status: 130, stdout: '' });
    expect(stderr).toContain('the best mixing so far is kept');
    expect(readdirSync(folder)).toEqual(['mixing.json']);
    const left = coulomb();
    expect(left.done).toBe(false);

    const resumed = spawnSync(process.execPath, args('1e-6'), { encoding: 'utf8' });
    expect(resumed.status).toBe(0);
    const done = coulomb();
    expect(done.done).toBe(true);
    expect(done.lambda).toBeLessThan(left.lambda);

    const again = spawnSync(process.execPath, args('1e-6'), { encoding: 'utf8' });
    expect(again.status).toBe(0);
    expect(lambdaOf(again.stdout)).toBe(lambdaOf(resumed.stdout));
    expect(coulomb()).toEqual(done);
  });

  it('refuses the file for another threshold', () => {
    expect(existsSync(path)).toBe(true);
    const { status, stdout, stderr } = spawnSync(process.execPath, args('1e-3'), { encoding: 'utf8' });
    expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
    expect(stderr).toContain('threshold 0.000001');
  });
});

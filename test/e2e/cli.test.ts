import { spawn, spawnSync } from 'node:child_process';
import { existsSync, mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { ensureBuilt, ensureKernels } from '../../build/setup.mjs';

const DEMO = 'app/demo/carbonyl';
const CLI = 'dist/node/cli.js';

interface Answer {
  readonly status: number | null;
  readonly stdout: string;
  readonly stderr: string;
}

function spinwright(...args: string[]): Answer {
  return spawnSync(process.execPath, [CLI, ...args], { encoding: 'utf8', maxBuffer: 2 ** 26 });
}

beforeAll(async () => {
  await ensureKernels();
  await ensureBuilt(['node']);
}, 300_000);

describe('spinwright compare', () => {
  const variants = [
    'triplet/separate/index/median/clean',
    'triplet/separate/swap-layers/median/clean',
    'spinor/separate/index/median/clean',
    'sparse/-/index/none/clean',
  ];
  const args = [
    'compare',
    DEMO,
    '--target',
    '5cm-1',
    '--terms',
    'sf,so1,somf,so2',
    '--window',
    '2-7', // the exact spectral floor of all eight orbitals takes seconds
    '--variants',
    variants.join(','),
  ];
  let one: Answer;
  beforeAll(() => {
    one = spinwright(...args, '--json');
  });

  it('prints one JSON document and nothing on stderr', () => {
    expect(one).toMatchObject({ status: 0, stderr: '' });
    const document = JSON.parse(one.stdout);
    expect(document.schema).toBe('spinwright-comparison/1');
    expect(document.hamiltonian).toMatchObject({ orbitals: 6, electrons: 6 });
    expect(document.hamiltonian.terms.map((term: { name: string }) => term.name)).toEqual([
      'sf',
      'so1',
      'somf',
      'so2',
    ]);
    expect(document.variants.map((v: { name: string }) => v.name)).toEqual(variants);
    for (const v of document.variants) {
      const parts = Object.values(v.step.parts as Record<string, number>);
      expect(parts.reduce((a, b) => a + b)).toBe(v.step.toffoli);
      expect(v.totalToffoli).toBe(v.walkSteps * v.step.toffoli);
      // ⌈πλ/2ε⌉ with 0.9 of the target: Babbush et al., Phys. Rev. X 8, 041015 (2018).
      const deviation = (0.9 * 5) / 219474.6313632;
      expect(v.walkSteps).toBe(Math.ceil((Math.PI * v.lambda.total) / (2 * deviation)));
    }
  });

  it('gives the same document with two workers', () => {
    const two = spinwright(...args, '--json', '--workers', '2');
    expect(two.status).toBe(0);
    expect(two.stdout).toBe(one.stdout);
  });

  it('prints the table without progress where stderr is no terminal', () => {
    const { status, stdout, stderr } = spinwright(...args);
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    expect(stdout).toMatch(/^Toffoli a step .+ −\d+\.\d % /m);
    expect(stdout).toContain('Recommended: ');
  });

  it('drops what the budget allows with --threshold auto, within the bound', () => {
    const { stdout } = spinwright(...args, '--json', '--threshold', 'auto');
    const [first] = JSON.parse(stdout).variants;
    expect(first.residual.oneNormBound).toBeGreaterThan(0);
    expect(first.factors).toBeLessThan(JSON.parse(one.stdout).variants[0].factors);
  });
});

describe('spinwright inspect, demo and whatif', () => {
  let folder: string;
  beforeAll(() => {
    folder = mkdtempSync(join(tmpdir(), 'cli-test-'));
  });
  afterAll(() => rmSync(folder, { recursive: true }));

  it('inspect says what the files hold', () => {
    const { status, stdout } = spinwright('inspect', DEMO, '--json');
    expect(status).toBe(0);
    const document = JSON.parse(stdout);
    expect(Object.keys(document)).toEqual([
      ...['schema', 'title', 'kind', 'orbitals', 'electrons', 'constant', 'terms', 'files', 'findings'],
    ]);
    expect(document).toMatchObject({ kind: 'spatial', orbitals: 8, electrons: 8 });
    expect(document.constant).toBeCloseTo(-94.64744862419013 + 0.008771267017660065, 12);
  });

  it('the written recipe reads the same files the same way', () => {
    const copy = join(folder, 'copy');
    expect(spinwright('demo', '--out', copy)).toMatchObject({ status: 0, stderr: '' });
    expect(readdirSync(copy).sort()).toEqual(readdirSync(DEMO).sort());
    const recipe = join(copy, 'own.json');
    expect(spinwright('inspect', copy, '--write-recipe', recipe, '--quiet').status).toBe(0);
    expect(readdirSync(copy).filter((name) => name.startsWith('.'))).toEqual([]);
    const direct = spinwright('inspect', copy, '--json').stdout;
    expect(spinwright('inspect', copy, '--recipe', recipe, '--json').stdout).toBe(direct);
  });

  it('demo compares the bundled integrals', () => {
    const { status, stdout } = spinwright('demo');
    expect(status).toBe(0);
    expect(stdout).toContain('8 orbitals, 8 electrons, sf + so1 + somf + so2 + ss + ssc');
  });

  it('whatif meets the published step within 0.1 %', () => {
    // Lee et al., PRX Quantum 2, 030305 (2021), double factorisation of the smaller benchmark; from memory.
    const sizes =
      '--spin-orbitals 108 --lambda 294.8 --factors 360 --rows 13031 --keep-bits 10 --rotation-bits 16';
    const answer = spinwright(
      'whatif',
      '--method',
      'double-factorised',
      ...sizes.split(' '),
      '--target',
      '1mEh',
      '--json',
    );
    const { step, walkSteps, totalToffoli, logicalQubits } = JSON.parse(answer.stdout);
    expect(Math.abs(step.toffoli / 21753 - 1)).toBeLessThan(1e-3);
    expect(walkSteps).toBe(10_073_183_463 / 21753);
    expect(totalToffoli).toBe(walkSteps * step.toffoli);
    expect(Math.abs(logicalQubits / 3725 - 1)).toBeLessThan(0.02);
  });
});

describe('spinwright verify', () => {
  const data = '../shared/data/oh_sto3g';

  it.skipIf(!existsSync(data))('prints exact and encoded spectra that meet the reference', () => {
    const { status, stdout } = spinwright(
      'verify',
      data,
      '--terms',
      'sf,so1,somf,so2',
      '--states',
      '8',
      '--json',
    );
    expect(status).toBe(0);
    const { schema, spectrum, checks } = JSON.parse(stdout);
    expect(schema).toBe('spinwright-evidence/1');
    const reference = JSON.parse(readFileSync(join(data, 'reference.json'), 'utf8'));
    const levels: number[] = reference.levels.so1_so2.eigenvalues;
    for (const values of [spectrum.exact, ...Object.values(spectrum.variants)] as number[][]) {
      expect(values).toHaveLength(8);
      for (const [i, value] of values.entries()) expect(Math.abs(value - levels[i]!)).toBeLessThan(1e-8);
    }
    expect(checks.map(({ name }: { name: string }) => name)).toContainEqual(
      expect.stringContaining('reference.json'),
    );
    expect(checks.every((check: { ok: boolean }) => check.ok)).toBe(true);
  });
});

describe('exit statuses and errors', () => {
  it.each([
    [
      'a missing folder',
      ['compare', 'no/such/folder', '--target', '5cm-1'],
      'no/such/folder: no such file or folder',
    ],
    ['an unknown flag', ['inspect', DEMO, '--frobnicate'], '--frobnicate'],
    [
      'a term the files do not hold',
      ['compare', DEMO, '--target', '5cm-1', '--terms', 'sf,scalar'],
      'scalar',
    ],
    ['too many electrons', ['compare', DEMO, '--target', '5cm-1', '--electrons', '17'], '17'],
    [
      'an unsound variant',
      ['compare', DEMO, '--target', '5cm-1', '--variants', 'spinor/joint/swap-layers/none/clean'],
      'swap layers',
    ],
  ])('2 and one line for %s, stdout empty', (_what, args, found) => {
    const { status, stdout, stderr } = spinwright(...args, '--json');
    expect(stderr).toContain(found);
    expect(stderr.trimEnd()).not.toContain('\n');
    expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
  });

  it('130 soon after Ctrl-C, with nothing on stdout', async () => {
    const child = spawn(process.execPath, [CLI, 'verify', DEMO, '--terms', 'sf,so1,somf,so2', '--json']);
    let stdout = '';
    child.stdout.on('data', (chunk) => {
      stdout += chunk;
    });
    // Well inside the work: diagonalising 12 870 determinants for each variant takes many seconds.
    await new Promise((resolve) => setTimeout(resolve, 1500));
    expect(child.exitCode).toBeNull();
    child.kill('SIGINT');
    const status = await new Promise((resolve) => child.once('exit', resolve));
    expect({ status, stdout }).toEqual({ status: 130, stdout: '' });
  });
});

import { spawn, spawnSync } from 'node:child_process';
import { existsSync, mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { ensureBuilt, ensureKernels } from '../../build/setup.mjs';
import { parse, type Tree } from '../unit/circuit/qasm/parse';

const CLI = 'dist/node/cli.js';
const FLUORINE = 'test/fixtures/sets/f_sto3g_2p';
const FORMALDEHYDE = 'test/fixtures/sets/ch2o_sto3g_8o';
const SWAP = 'triplet/separate/swap-layers/median/clean';
const SPARSE = 'sparse/-/index/none/clean';

function spinwright(...args: string[]) {
  const { status, stdout, stderr } = spawnSync(process.execPath, [CLI, ...args], {
    encoding: 'utf8',
    maxBuffer: 2 ** 26,
  });
  return { status, stdout, stderr };
}

let folder = '';
beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), 'circuit-'));
  await ensureKernels();
  await ensureBuilt(['node']);
}, 300_000);
afterAll(() => rmSync(folder, { recursive: true, force: true }));

describe('circuit --count-only', () => {
  it.each([
    [
      FLUORINE,
      [SWAP, 'triplet/joint/index/none/plain', 'spinor/separate/index/none/dirty', SPARSE],
      ['--terms', 'sf,so1,somf,so2,ss'],
    ],
    [FORMALDEHYDE, [SWAP, SPARSE], ['--terms', 'sf,so1,somf,so2', '--threshold', '1e-4', '--bits', '14']],
    [FORMALDEHYDE, [SWAP], ['--terms', 'sf', '--qubits-max', '700', '--threshold', 'auto']],
  ])('counts on %s what compare estimates', (set, variants, options) => {
    const target = ['--target', '5cm-1', ...options, '--json'];
    const compared = spinwright('compare', set, '--variants', variants.join(','), ...target);
    const document = JSON.parse(compared.stdout);
    expect(document.variants).toHaveLength(variants.length);
    for (const estimate of document.variants) {
      const counted = spinwright('circuit', set, '--variant', estimate.name, '--count-only', ...target);
      expect(counted).toMatchObject({ status: 0, stderr: '' });
      const circuit = JSON.parse(counted.stdout);
      expect(circuit.schema).toBe('spinwright-circuit/1');
      expect(circuit.step).toEqual(estimate.step);
      expect(circuit.wires).toBe(estimate.logicalQubits);
    }
  });

  it('prints a table for people', () => {
    const { status, stdout } = spinwright(
      ...['circuit', FLUORINE, '--target', '5cm-1', '--variant', SWAP, '--count-only'],
    );
    expect(status).toBe(0);
    expect(stdout).toMatch(/^Toffoli +\d/m);
    expect(stdout).toMatch(/^ {2}rotations +\d+ +\d+\.\d %$/m);
  });
});

/** Gates by name, counted in the tree of the grammar. */
function gatesOf(text: string): Map<string, number> {
  const found = new Map<string, number>();
  const visit = (tree: Tree) => {
    if (tree.rule === 'gate_call') {
      const name = tree.children
        .filter(({ rule }) => ['modifier', 'NAME'].includes(rule))
        .map(({ text }) => text);
      found.set(name.join(' '), (found.get(name.join(' ')) ?? 0) + 1);
    }
    for (const child of tree.children) visit(child);
  };
  for (const tree of parse(text)) visit(tree);
  return found;
}

describe('circuit --out', () => {
  const args = [
    'circuit',
    FLUORINE,
    '--target',
    '5cm-1',
    '--variant',
    SWAP,
    '--terms',
    'sf,so1,somf',
    '--bits',
    '5',
  ];

  it('writes a walk step in OpenQASM 3 with the Toffoli gates that were counted, the same each time', () => {
    const [first, second] = ['one.qasm', 'deep/two.qasm'].map((name) => join(folder, name)) as [
      string,
      string,
    ];
    const { status, stdout, stderr } = spinwright(...args, '--out', first, '--json');
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    const document = JSON.parse(stdout);
    const text = readFileSync(first, 'utf8');
    expect(document).toMatchObject({ schema: 'spinwright-circuit-text/1', file: first, part: 'walk-step' });
    expect(text.split('\n')).toHaveLength(document.lines + 1);
    expect(text).toContain(`lambda ${document.lambda} Eh`);
    for (const { name, qubits } of document.registers) {
      expect(text).toContain(`\nqubit[${qubits}] ${name.replace(/ /g, '_')};\n`);
    }
    const gates = gatesOf(text);
    const counted = JSON.parse(spinwright(...args, '--count-only', '--json').stdout);
    // The phase register's own step is not part of the text, and its control is one more operand of a reflection.
    expect((gates.get('ccx') ?? 0) + (gates.get('ctrl ( 2 ) @ z') ?? 0)).toBe(counted.step.toffoli - 1);
    expect((gates.get('t') ?? 0) + (gates.get('tdg') ?? 0)).toBe(counted.step.t);

    expect(spinwright(...args, '--out', second).stdout).toMatch(/^system +6$/m);
    expect(readFileSync(second, 'utf8')).toBe(text);
    expect(readdirSync(folder).sort()).toEqual(['deep', 'one.qasm']);
    expect(readdirSync(join(folder, 'deep'))).toEqual(['two.qasm']);
  });

  it.each(['prepare', 'block-encoding'])('writes --part %s', (part) => {
    const file = join(folder, `${part}.qasm`);
    expect(spinwright(...args, '--part', part, '--out', file).status).toBe(0);
    const text = readFileSync(file, 'utf8');
    expect([...parse(text)].length).toBeGreaterThan(50);
    expect(/\nqubit\[\d+\] system;/.test(text)).toBe(part !== 'prepare');
    expect(text).not.toContain('] control;');
    const sparse = args.map((arg) => (arg === SWAP ? SPARSE : arg));
    expect(spinwright(...sparse, '--part', part, '--out', file).status).toBe(0);
    expect([...parse(readFileSync(file, 'utf8'))].length).toBeGreaterThan(50);
  });

  it('writes no text that is too long, and leaves nothing behind', () => {
    const file = join(folder, 'long.qasm');
    const { status, stderr } = spinwright(
      ...['circuit', FORMALDEHYDE, '--target', '5cm-1', '--variant', SWAP, '--out', file],
    );
    expect(status).toBe(2);
    expect(stderr).toMatch(/about \d\.\de\+\d+ gates; expected at most 5000000/);
    expect(readdirSync(folder).filter((name) => name.includes('long'))).toEqual([]);
  });

  it('leaves nothing behind when it is interrupted', async () => {
    const file = join(folder, 'stopped.qasm');
    const child = spawn(process.execPath, [CLI, ...args.slice(0, -1), '16', '--out', file]);
    const left = () => readdirSync(folder).filter((name) => name.includes('stopped'));
    while (left().length === 0 && child.exitCode === null) await new Promise((r) => setTimeout(r, 5));
    child.kill('SIGINT');
    await new Promise((resolve) => child.once('exit', resolve));
    expect(left().filter((name) => name !== 'stopped.qasm')).toEqual([]);
  });

  it.each([
    ['neither --out nor --count-only', []],
    ['both --count-only and --out', ['--count-only', '--out', 'x.qasm']],
    ['block-encoding', ['--count-only', '--part', 'block-encoding']],
    ['half', ['--count-only', '--part', 'half']],
  ])('refuses %s', (found, more) => {
    const { status, stderr } = spinwright(
      'circuit',
      FLUORINE,
      '--target',
      '5cm-1',
      '--variant',
      SWAP,
      ...more,
    );
    expect(status).toBe(2);
    expect(stderr).toContain(found);
    expect(existsSync('x.qasm')).toBe(false);
  });

  it('refuses a variant that does not exist, and says where it cannot write', () => {
    const unknown = args.map((arg) => (arg === SWAP ? 'triplet/separate/index/median/unknown' : arg));
    expect(spinwright(...unknown, '--count-only')).toMatchObject({ status: 2 });
    const { status, stderr } = spinwright(...args, '--out', join(FLUORINE, 'FCIDUMP', 'x.qasm'));
    expect(status).toBe(2);
    expect(stderr).toContain('cannot be written');
  });
});

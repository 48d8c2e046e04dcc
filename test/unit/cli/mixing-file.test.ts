import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { MixingFile } from '../../../app/cli/mixing-file';
import type { MixingState } from '../../../core/factor';
import { InputError } from '../../../core/job';
import { mixingOwner } from '../../../core/plan/mixing-states';
import { ALL_KINDS, randomHamiltonian } from '../hamiltonian/random-hamiltonian';

const h = randomHamiltonian(3, 4, ALL_KINDS);
const choices = { variant: 'compressed/separate', threshold: 1e-3, factors: 'auto' } as const;
const owner = mixingOwner(h, choices, [2, 1, 0]);
const state: MixingState = {
  stage: 2,
  done: false,
  lambda: 1.25,
  count: 2,
  arrays: { columns: Float64Array.of(0.1, -1e-300, Math.PI), shifts: new Float64Array(2) },
};

describe('a file of mixing runs', () => {
  let folder: string;
  let path: string;
  beforeEach(() => {
    folder = mkdtempSync(join(tmpdir(), 'mixing-test-'));
    path = join(folder, 'mixing.json');
  });
  afterEach(() => rmSync(folder, { recursive: true }));

  const write = () => {
    const file = new MixingFile(path);
    file.states.of(owner).save('coulomb', state);
    file.flush();
  };
  const problem = (action: () => unknown) => {
    try {
      action();
    } catch (error) {
      if (error instanceof InputError) return error.toProblem();
      throw error;
    }
    throw new Error('nothing was refused');
  };

  it('gives back every digit, and nothing else lies beside it', () => {
    write();
    expect(readdirSync(folder)).toEqual(['mixing.json']);
    const again = new MixingFile(path).states.of(owner);
    expect(again.load('coulomb')).toEqual(state);
    expect(again.load('spin-spin')).toBe(null);
  });

  it('is not written where nothing changed', () => {
    new MixingFile(path).flush();
    expect(readdirSync(folder)).toEqual([]);
  });

  it.each([
    ['variant', { ...owner, variant: 'compressed/joint' }],
    ['threshold', mixingOwner(h, { ...choices, threshold: 1e-4 }, [2, 1, 0])],
    ['factors', mixingOwner(h, { ...choices, factors: 18 }, [2, 1, 0])],
    ['integrals', mixingOwner(h, choices, [2, 0, 1])],
    ['integrals', mixingOwner(randomHamiltonian(3, 5, ALL_KINDS), choices, [2, 1, 0])],
  ])('is refused where the %s differs, and says so', (word, other) => {
    write();
    const { code, found, where } = problem(() => new MixingFile(path).states.of(other));
    expect({ code, where }).toEqual({ code: 'other-mixing-state', where: path });
    expect(found).toContain(word);
  });

  it('is refused at once where its folder is missing', () => {
    const found = problem(() => new MixingFile(join(folder, 'missing', 'mixing.json')));
    expect(found).toMatchObject({
      code: 'cannot-write',
      expected: expect.stringContaining('existing folder'),
    });
  });

  it('takes a second run once the first is known', () => {
    write();
    const file = new MixingFile(path);
    file.states.of(owner);
    file.states.of({ ...owner, variant: 'compressed/joint' }).save('even', state);
    file.flush();
    const runs = new MixingFile(path).states.runs();
    expect(runs.map((run) => [run.owner.variant, Object.keys(run.parts)])).toEqual([
      ['compressed/separate', ['coulomb']],
      ['compressed/joint', ['even']],
    ]);
  });

  it('tells one changed bit of the integrals', () => {
    const planes = h.k.planes.slice();
    planes[5] = planes[5]! * (1 + 2 ** -52);
    const other = { ...h, k: { ...h.k, planes } };
    expect(mixingOwner(other, choices, [2, 1, 0]).integrals).not.toBe(owner.integrals);
    expect(mixingOwner({ ...h }, choices, [2, 1, 0])).toEqual(owner);
  });

  it.each([
    ['no JSON', (text: string) => text.slice(0, -20)],
    ['another schema', (text: string) => text.replace('mixing/1', 'mixing/9')],
    ['a word for a number', (text: string) => text.replace('"count":2', '"count":"2"')],
    ['half a number', (text: string) => text.replace(/"columns":"..../, '"columns":"')],
    ['no list of runs', () => '{"schema":"spinwright-mixing/1","runs":{}}'],
    ['null', () => 'null'],
  ])('is refused with %s', (_, damage) => {
    write();
    writeFileSync(path, damage(readFileSync(path, 'utf8')));
    expect(problem(() => new MixingFile(path)).code).toBe('bad-mixing-state');
  });
});

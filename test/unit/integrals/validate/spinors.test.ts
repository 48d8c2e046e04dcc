import { expect, test } from 'vitest';
import { describe, fileSetFromMemory, loadIntegrals, type SpinorIntegrals } from '../../../../core/integrals';
import { validateSpinors } from '../../../../core/integrals/validate/spinors';
import { inlineContext } from '../../../../core/job';
import { doublePlatform } from '../../../fixtures/conventions/file-writers';
import { codes } from '../../../fixtures/conventions/load-parts';

const header = ' &FCI NORB=2,NELEC=1,TREL=.TRUE.\n &END\n';
const energies = '(-1.0,0.0) 1 1 0 0\n(-1.0,0.0) 2 2 0 0\n';
const repulsion = '(0.5,0.0) 1 1 1 1\n(0.5,0.0) 2 2 2 2\n(0.5,0.0) 1 1 2 2\n(0.5,0.0) 2 2 1 1\n';

async function load(text: string, recipe: object = {}): Promise<SpinorIntegrals> {
  const files = fileSetFromMemory('spinors', new Map([['FCIDUMP', header + text]]));
  const parts = [{ id: 'a', role: 'spinor', file: 'FCIDUMP', ...recipe }] as const;
  const set = await loadIntegrals(
    { schema: 'spinwright-recipe/1', parts: parts as never },
    files,
    doublePlatform(new Map()),
    inlineContext(),
    { onError: 'keep' },
  );
  return set as SpinorIntegrals;
}

test('a Hermitian, time-reversal symmetric file has no findings', async () => {
  const set = await load(`${energies}${repulsion}(2.0,0.0) 0 0 0 0\n`);
  expect(codes(set)).toEqual([]);
  expect(describe(set)).toMatchObject({ kind: 'spinor', orbitals: 1, electrons: 1, constant: 2 });
});

test('unit and scale act on h, (PQ|RS) and the constant; an extra ½ on (PQ|RS) alone', async () => {
  const set = await load(`${energies}${repulsion}(2.0,0.0) 0 0 0 0\n`, { scale: 3, half: 'inside' });
  expect([set.h.re[0], set.g.re[0], set.constant]).toEqual([-3, 3, 6]);
});

test('h that is not Hermitian', async () => {
  const set = await load(`${energies}(0.1,0.2) 1 2 0 0\n(0.1,0.2) 2 1 0 0\n${repulsion}(0.0,0.0) 0 0 0 0\n`);
  expect(codes(set)).toEqual(['error symmetry']);
  expect(set.findings.find(({ severity }) => severity === 'error')!.expected).toContain('Hermitian matrix h');
});

// The FCIDUMP reader fills in partners, so a broken array can only come from elsewhere.
test.each<[string, number, string]>([
  ['its conjugate', 0b1000, '(PQ|RS) = (QP|SR)*'],
  ['its exchange partner', 0b0001, '(PQ|RS) = (RS|PQ)'],
])('(PQ|RS) without %s', async (_, at, expected) => {
  const set = await load(`${energies}${repulsion}(0.0,0.0) 0 0 0 0\n`);
  const im = Float64Array.from(set.g.im);
  im[at] = 0.1;
  const findings = await validateSpinors({ ...set, g: { re: set.g.re, im } }, 'FCIDUMP', inlineContext());
  expect(findings.map((finding) => finding.expected).join()).toContain(expected);
});

test('spinors that are not in Kramers pairs', async () => {
  const set = await load(`(-1.0,0.0) 1 1 0 0\n(-0.5,0.0) 2 2 0 0\n${repulsion}(0.0,0.0) 0 0 0 0\n`);
  expect(codes(set)).toEqual(['warning kramers-pairs']);
});

test('a real file under the role spinor, a complex one under spin-free', async () => {
  const real = header.replace('NELEC=1,TREL=.TRUE.', 'NELEC=2');
  const files = fileSetFromMemory(
    'real',
    new Map([['FCIDUMP', `${real}-1.0 1 1 0 0\n0.5 1 1 1 1\n0.0 0 0 0 0\n`]]),
  );
  const recipe = {
    schema: 'spinwright-recipe/1',
    parts: [{ id: 'a', role: 'spinor', file: 'FCIDUMP' }],
  } as const;
  const platform = doublePlatform(new Map());
  await expect(loadIntegrals(recipe, files, platform, inlineContext())).rejects.toMatchObject({
    code: 'not-spinors',
  });
  await expect(
    load(`${energies}${repulsion}(2.0,0.0) 0 0 0 0\n`, { role: 'spin-free' }),
  ).rejects.toMatchObject({
    code: 'not-spin-free',
  });
});

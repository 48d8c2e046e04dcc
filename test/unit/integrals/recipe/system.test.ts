import { expect, test } from 'vitest';
import type { Recipe } from '../../../../core/integrals';
import { loadParts, npy } from '../../../fixtures/conventions/load-parts';

const dump = (header: string, constant = '3.5 0 0 0 0') =>
  ` &FCI NORB=3,${header}\n &END\n 0.5 1 1 1 1\n 0.5 2 2 2 2\n 0.5 3 3 3 3\n -1.0 1 1 0 0\n ${constant}\n`;
const part = { id: 'a', role: 'spin-free', file: 'FCIDUMP' } as const;
const load = (text: string, recipe: Partial<Recipe> = {}) =>
  loadParts([part], recipe, { FCIDUMP: text }, null);

test('lowest orbitals doubly filled, then MS2 singly', async () => {
  const occupations = async (header: string) => [...(await load(dump(header))).occupations];
  expect(await occupations('NELEC=3,MS2=1')).toEqual([2, 1, 0]);
  expect(await occupations('NELEC=3,MS2=3')).toEqual([1, 1, 1]);
  expect(await occupations('NELEC=2,MS2=-2')).toEqual([1, 1, 0]);
  expect(await occupations('NELEC=0,MS2=0')).toEqual([0, 0, 0]);
  const given = await load(dump('NELEC=5,MS2=1'), { occupations: [5 / 3, 5 / 3, 5 / 3] });
  expect([...given.occupations]).toEqual([5 / 3, 5 / 3, 5 / 3]);
});

test('the constant of the file belongs to sf and is not added to the recipe’s', async () => {
  expect((await load(dump('NELEC=2'))).constants).toEqual({ sf: 3.5 });
  const constants = [
    { term: 'sf', value: 3.5 + 5e-9 },
    { term: 'scalar', value: 1, unit: 'eV' },
    { term: 'scalar', value: 2, unit: 'eV' },
  ] as const;
  const set = await load(dump('NELEC=2'), { constants });
  expect(set.constants.sf).toBe(3.5);
  expect(set.constants.scalar).toBeCloseTo(3 / 27.211386245988, 14);
  const arrays = [{ id: 'h', role: 'one-electron', file: 'h.npy' }] as const;
  const alone = await loadParts(arrays, { constants, electrons: 1 }, { 'h.npy': npy([1, 1], [-1]) }, null);
  expect(alone.constants.sf).toBe(3.5 + 5e-9);
});

test('a mean field over all electrons is marked, for it excludes the two-electron part', async () => {
  const zero = npy([3, 3, 3], new Array(27).fill(0));
  const mean = {
    id: 'm',
    role: 'mean-field spin-orbit',
    file: 'm.npy',
    components: ['x', 'y', 'z'],
  } as const;
  const all = await loadParts(
    [part, { ...mean, covers: 'all' }],
    {},
    { FCIDUMP: dump('NELEC=2'), 'm.npy': zero },
    null,
  );
  const core = await loadParts(
    [part, { ...mean, covers: 'core' }],
    {},
    { FCIDUMP: dump('NELEC=2'), 'm.npy': zero },
    null,
  );
  expect([all.meanFieldCoversActive, core.meanFieldCoversActive]).toEqual([true, false]);
});

test('only the parts of the chosen terms are read', async () => {
  const broken = {
    id: 'so',
    role: 'one-electron spin-orbit',
    file: 'so.npy',
    components: ['x', 'y', 'z'],
  } as const;
  const files = { FCIDUMP: dump('NELEC=2'), 'so.npy': 'not an array' };
  const set = await loadParts([part, broken], {}, files, null, { terms: ['sf'] });
  expect(set.oneElectron.map(({ id }) => id)).toEqual(['a']);
  expect(set.provenance.files.map(({ path }) => path)).toEqual(['FCIDUMP']);
  await expect(loadParts([part, broken], {}, files, null, { terms: ['so1'] })).rejects.toThrow(/so\.npy/);
});

test('array files that nobody mentions are noted, others are not', async () => {
  const files = { FCIDUMP: dump('NELEC=2'), 'a.npy': 'x', 'b.npy': 'x', 'notes.txt': 'x' };
  const set = await loadParts([part], { ignore: ['a.npy'] }, files, null);
  expect(set.findings).toMatchObject([{ severity: 'note', code: 'unused-array', where: 'b.npy' }]);
});

test.each<[string, string, Partial<Recipe>, RegExp]>([
  [
    'electrons that disagree',
    'NELEC=3,MS2=1',
    { electrons: 2 },
    /FCIDUMP: 3 electrons; expected 2, as recipe: \/electrons says/,
  ],
  [
    'orbitals that disagree',
    'NELEC=2',
    { orbitals: 2 },
    /FCIDUMP: 3 orbitals; expected 2, as recipe: \/orbitals says/,
  ],
  ['spinors for spatial orbitals', 'NELEC=2', { spinors: 6 }, /recipe: \/spinors: 6 spinors.*Use "orbitals"/],
  ['no number of electrons', '', {}, /recipe: \/electrons: no number of electrons/],
  [
    'a constant that disagrees',
    'NELEC=2',
    { constants: [{ term: 'sf', value: 3.5001 }] },
    /3\.5001 Eh for term sf; expected 3\.5 Eh/,
  ],
  ['spin that does not fit', 'NELEC=2', { ms2: 1 }, /MS2 = 1 for 2 electrons/],
  [
    'occupations that do not fit',
    'NELEC=2',
    { occupations: [1, 0, 0] },
    /sum of 1; expected 3 numbers with a sum of 2/,
  ],
])('refused: %s', async (_, header, recipe, message) => {
  await expect(load(dump(header), recipe)).rejects.toThrow(message);
});

test.each<[string, Uint8Array, object, RegExp]>([
  [
    'packed pairs as full',
    npy([36], new Array(36).fill(0)),
    { role: 'two-electron' },
    /shape 36; expected 3×3×3×3.*"layout": "pairs-triangle"|orbital/,
  ],
  [
    'component axis last',
    npy([3, 3, 3, 3, 3], new Array(243).fill(0)),
    { role: 'one-electron spin-orbit', components: ['x', 'y', 'z'] },
    /3×3×3×3×3; expected 3×3×3/,
  ],
  [
    'tensor axis last',
    npy([21, 6], new Array(126).fill(0)),
    { role: 'spin-spin', layout: 'pairs-triangle', components: ['xx', 'xy', 'xz', 'yy', 'yz', 'zz'] },
    /21×6; expected 6×21.*"componentAxis": "last"/,
  ],
  [
    'momentum pair second',
    npy([6, 3], new Array(18).fill(0)),
    {
      role: 'two-electron spin-orbit',
      layout: 'antisymmetric-by-symmetric-pairs',
      components: ['x'],
    },
    /6×3; expected 3×6.*"momentum": "second"/,
  ],
  [
    'another number of orbitals',
    npy([4, 4], new Array(16).fill(0)),
    { role: 'one-electron' },
    /4×4; expected 3×3.*fits 4 orbitals/,
  ],
])('wrong shape, and what would fit: %s', async (_, bytes, conventions, message) => {
  const parts = [part, { id: 'b', file: 'b.npy', ...conventions } as never];
  await expect(loadParts(parts, {}, { FCIDUMP: dump('NELEC=2'), 'b.npy': bytes }, null)).rejects.toThrow(
    message,
  );
});

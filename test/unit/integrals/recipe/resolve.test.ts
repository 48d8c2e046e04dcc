import { describe, expect, test } from 'vitest';
import {
  fileSetFromMemory,
  loadIntegrals,
  parseRecipe,
  type RecipePart,
  resolveInputs,
  type SpatialIntegrals,
  suggestRecipe,
} from '../../../../core/integrals';
import { inlineContext } from '../../../../core/job';
import { doublePlatform, HDF5_SIGNATURE, type Written } from '../../../fixtures/conventions/file-writers';
import { npy } from '../../../fixtures/conventions/load-parts';
import { readSet, readSetJson } from '../../../fixtures/sets/read-set';

const context = inlineContext();
const none = doublePlatform(new Map());
const fcidump = ' &FCI NORB=1,NELEC=1,MS2=1,\n &END\n 0.5 1 1 1 1\n -1.0 1 1 0 0\n';
const spinors =
  ' &FCI NORB=2,NELEC=1,TREL=.TRUE.\n &END\n (-1.0,0.0) 1 1 0 0\n (-1.0,0.0) 2 2 0 0\n (0.1,0.0) 0 0 0 0\n';
const files = (content: Record<string, Uint8Array | string>) =>
  fileSetFromMemory('folder', new Map(Object.entries(content)));
const recipe = (part: object = {}) =>
  JSON.stringify({
    schema: 'spinwright-recipe/1',
    parts: [{ id: 'a', role: 'spin-free', file: 'FCIDUMP', ...part }],
  });

describe('a folder stands for', () => {
  test('its only recipe, whatever else is there', async () => {
    const choice = {
      files: files({
        'a.recipe.json': recipe(),
        FCIDUMP: fcidump,
        'meta.json': '{"arrays": {}}',
        'B.fcidump': fcidump,
      }),
    };
    const resolved = await resolveInputs(choice, none, context);
    expect(resolved.origin).toBe('recipe');
    expect(resolved.recipeName).toBe('a.recipe.json');
  });

  test('the template where meta.json has arrays: the parts of the recipe that is written out for the same set', async () => {
    const set = readSet('ch2o_sto3g_8o', { 'ch2o_sto3g_8o.recipe.json': null });
    const template = await resolveInputs({ files: set }, none, context);
    expect(template.origin).toBe('template');
    const written = readSetJson('ch2o_sto3g_8o', 'ch2o_sto3g_8o.recipe.json') as unknown as {
      parts: RecipePart[];
      constants: unknown;
    };
    const withoutIds = (parts: readonly RecipePart[]) =>
      parts.map(({ id: _, ...rest }) => JSON.stringify(rest, Object.keys(rest).sort())).sort();
    expect(withoutIds(template.recipe.parts)).toEqual(withoutIds(written.parts));
    expect(template.recipe.constants).toEqual(written.constants);
  });

  test('the template with arrays from the HDF5 file where there is no .npy', async () => {
    const missing = { 'gss_packed.npy': null, 'f_sto3g_2p.h5': HDF5_SIGNATURE };
    const { recipe: found } = await resolveInputs({ files: readSet('f_sto3g_2p', missing) }, none, context);
    expect(found.parts.find((part) => part.id === 'ss')).toMatchObject({
      file: 'f_sto3g_2p.h5',
      dataset: '/gss_packed',
    });
    expect(found.parts.find((part) => part.id === 'mv')!.file).toBe('h_mv.npy');
  });

  test('the template without an FCIDUMP: h1 and eri_packed instead, to the digits an FCIDUMP keeps', async () => {
    const load = async (changes: Record<string, null>) => {
      const resolved = await resolveInputs({ files: readSet('oh_sto3g', changes) }, none, context);
      return (await loadIntegrals(resolved.recipe, resolved.files, none, context)) as SpatialIntegrals;
    };
    const [arrays, dump] = [await load({ FCIDUMP: null }), await load({})];
    expect(arrays.oneElectron[0]!.origin).toContain('h1.npy');
    const difference = arrays.oneElectron[0]!.charge!.map(
      (value, i) => value - dump.oneElectron[0]!.charge![i]!,
    );
    expect(Math.max(...difference.map(Math.abs))).toBeLessThan(1e-13);
    expect(arrays.constants).toEqual(dump.constants);
    expect(arrays.electrons).toBe(dump.electrons);
  });

  test.each(['FCIDUMP', 'fcidump', 'OH.fcidump', 'OH.FCIDUMP'])('its only FCIDUMP: %s', async (name) => {
    const resolved = await resolveInputs(
      { files: files({ [name]: fcidump, 'notes.txt': 'x' }) },
      none,
      context,
    );
    expect(resolved.origin).toBe('spin-free file');
    expect(resolved.recipe.parts).toEqual([{ id: 'spin-free', role: 'spin-free', file: name }]);
  });

  test('a complex FCIDUMP: the role spinor', async () => {
    const resolved = await resolveInputs({ files: files({ FCIDUMP: spinors }) }, none, context);
    expect(resolved.recipe.parts[0]!.role).toBe('spinor');
    const set = await loadIntegrals(resolved.recipe, resolved.files, none, context);
    expect(set).toMatchObject({ kind: 'spinor', spinors: 2, electrons: 1, constant: 0.1 });
  });
});

describe('several files without a recipe', () => {
  test('one FCIDUMP and arrays with template names', async () => {
    const set = readSet('oh_sto3g');
    const chosen = ['FCIDUMP', 'hso_nuc_imag.npy', 'w2so_packed.npy', 'h1.npy'];
    const { recipe: found, origin } = await resolveInputs({ files: set, chosen }, none, context);
    expect(origin).toBe('array names');
    expect(found.parts.map((part) => part.file)).toEqual(['FCIDUMP', 'hso_nuc_imag.npy', 'w2so_packed.npy']);
    expect(found.ignore).toEqual(['h1.npy']);
  });

  test('other names: refused with a recipe that can be read', async () => {
    const z = [0, 1e-4, -1e-4, 0];
    const set = files({
      FCIDUMP: fcidump.replace('NORB=1', 'NORB=2'),
      'soc_z.npy': npy([2, 2], z),
      'mine.npy': npy([2, 2], [1, 2, 2, 1]),
    });
    const error = await resolveInputs(
      { files: set, chosen: ['FCIDUMP', 'soc_z.npy', 'mine.npy'] },
      none,
      context,
    ).catch((e) => e);
    expect(error.code).toBe('no-recipe');
    const draft = parseRecipe(/\{.*\}/.exec(error.mend)![0], 'draft');
    expect(draft.parts.map(({ role, file }) => [role, file])).toEqual([
      ['spin-free', 'FCIDUMP'],
      ['one-electron spin-orbit', 'soc_z.npy'],
      ['one-electron', 'mine.npy'],
    ]);
    expect(draft.parts[1]!.components).toEqual(['z']);
  });
});

describe('refused', () => {
  test.each<[string, Record<string, string>, RegExp]>([
    [
      'two recipes',
      { 'a.recipe.json': recipe(), 'b.recipe.json': recipe() },
      /2 candidates: a\.recipe\.json, b\.recipe\.json/,
    ],
    ['two FCIDUMPs', { 'a.fcidump': fcidump, 'b.fcidump': fcidump }, /2 candidates: a\.fcidump, b\.fcidump/],
    ['nothing of use', { 'readme.txt': 'hello' }, /readme\.txt; expected a \*\.recipe\.json/],
    ['an empty folder', {}, /no files/],
    ['meta.json that is no JSON', { 'meta.json': '{"arrays": ' }, /meta\.json:1:12/],
    [
      'an array of meta.json that is not there',
      { FCIDUMP: fcidump, 'meta.json': '{"name": "x", "arrays": {"h_mv": {}}}' },
      /neither h_mv\.npy nor x\.h5/,
    ],
    [
      'numbers of the wrong type in meta.json',
      { FCIDUMP: fcidump, 'meta.json': '{"arrays": {}, "orbitals": {"n_active": "one"}}' },
      /meta\.json: \/orbitals: "one"/,
    ],
  ])('%s', async (_, content, message) => {
    await expect(resolveInputs({ files: files(content) }, none, context)).rejects.toThrow(message);
  });

  test('a file of the recipe that is not there, with the nearest name', async () => {
    const set = files({ 'a.recipe.json': recipe({ file: 'FCIDUMPP' }), FCIDUMP: fcidump });
    const { recipe: found } = await resolveInputs({ files: set }, none, context);
    await expect(loadIntegrals(found, set, none, context)).rejects.toThrow(
      /no such file in folder.*"FCIDUMP"/,
    );
  });
});

describe('a drafted recipe', () => {
  test('of a real set in one HDF5 file: the roles of the template', async () => {
    const arrays = new Map<string, Written>();
    const set = readSet('f_sto3g_2p', { 'meta.json': null });
    const { recipe: draft, findings } = await suggestRecipe(set, doublePlatform(arrays), context);
    const template = await resolveInputs({ files: readSet('f_sto3g_2p') }, none, context);
    const roles = (parts: readonly RecipePart[]) => parts.map(({ role, file }) => `${role} ${file}`).sort();
    expect(roles(draft!.parts)).toEqual(roles(template.recipe.parts));
    expect(draft!.ignore).toEqual(['eri_packed.npy', 'h1.npy', 'mo_energies.npy']);
    expect(findings).toEqual([]);
  });

  test('of arrays with other names: role and convention by their symmetry', async () => {
    const n = 3;
    const random = (i: number) => Math.sin(12.9898 * i + 1);
    const antisymmetric = Array.from(
      { length: n * n },
      (_, i) => random(Math.min(i, (i % n) * n + Math.floor(i / n))) * Math.sign((i % n) - Math.floor(i / n)),
    );
    const momentum = (p: number, q: number, r: number, s: number) =>
      Math.sign(p - q) *
      random(1 + Math.max(p, q) + 3 * Math.min(p, q) + 10 * Math.max(r, s) + 40 * Math.min(r, s));
    const indices = Array.from(
      { length: n ** 4 },
      (_, i) => [Math.floor(i / 27), Math.floor(i / 9) % 3, Math.floor(i / 3) % 3, i % 3] as const,
    );
    const second = indices.map(([i, j, k, l]) => momentum(k, l, i, j));
    const set = files({
      'a.npy': npy(
        [n, n, 3],
        antisymmetric.flatMap((value) => [value, 2 * value, 3 * value]),
      ),
      'b.npy': npy([3, n, n, n, n], [...second, ...second, ...second]),
      'c.npy': npy([5], [1, 2, 3, 4, 5]),
    });
    const { recipe: draft, findings } = await suggestRecipe(set, none, context);
    expect(draft!.parts).toMatchObject([
      { file: 'a.npy', role: 'one-electron spin-orbit', componentAxis: 'last' },
      { file: 'b.npy', role: 'two-electron spin-orbit', momentum: 'second' },
    ]);
    expect(draft!.ignore).toEqual(['c.npy']);
    expect(findings.map(({ code }) => code)).toEqual(['guessed-role', 'guessed-role', 'unknown-array']);
  });
});

import { readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import { parseJson, parseRecipe } from '../../../../core/integrals';
import { InputError } from '../../../../core/job';
import { setFolder } from '../../../fixtures/sets/read-set';

const minimal = {
  schema: 'spinwright-recipe/1',
  orbitals: 2,
  electrons: 2,
  parts: [{ id: 'coulomb', role: 'spin-free', file: 'FCIDUMP' }],
};
const spinOrbit = { id: 'so', role: 'one-electron spin-orbit', file: 'so.npy', components: ['x', 'y', 'z'] };

function refusal(recipe: unknown): InputError {
  try {
    parseRecipe(typeof recipe === 'string' ? recipe : JSON.stringify(recipe), 'my.recipe.json');
  } catch (error) {
    if (error instanceof InputError) return error;
    throw error;
  }
  throw new Error('the recipe was accepted');
}

/** A recipe with one part that differs from a good one. */
const withPart = (part: object) => ({ ...minimal, parts: [minimal.parts[0], { ...spinOrbit, ...part }] });

describe('recipes of the data sets', () => {
  test('formaldehyde: eleven parts', () => {
    const text = readFileSync(`${setFolder('ch2o_sto3g_8o')}ch2o_sto3g_8o.recipe.json`, 'utf8');
    const recipe = parseRecipe(text, 'ch2o_sto3g_8o.recipe.json');
    expect(recipe.parts.map((part) => part.id)).toEqual([
      'coulomb',
      'so-nuclear',
      'so-core',
      'so-two',
      'ss',
      'mv',
      'd1',
      'd2-core',
      'd2',
      'ssc-core',
      'ssc',
    ]);
  });

  test('thiochromenone: two arrays from an HDF5 file', () => {
    const text = readFileSync(setFolder('thiochromone_sto3g_50o').replace(/\/$/, '.recipe.json'), 'utf8');
    const recipe = parseRecipe(text, 'thiochromone_sto3g_50o.recipe.json');
    expect(recipe.parts.filter((part) => part.dataset !== undefined).map((part) => part.dataset)).toEqual([
      '/gss_packed',
      '/contact_packed',
      '/contact_packed',
    ]);
  });
});

describe('refused, each with its place, the expected value and the nearest known one', () => {
  test.each<[string, unknown, string, RegExp]>([
    ['unknown key', { ...minimal, orbital: 2 }, 'my.recipe.json: /orbital', /"orbital".*orbitals/],
    [
      'unknown key in a part',
      withPart({ units: 'eV' }),
      'my.recipe.json: /parts/1/units',
      /unknown key "units".*nearest known key is "unit"/,
    ],
    [
      'unknown role',
      withPart({ role: 'one-electron spin orbit' }),
      'my.recipe.json: /parts/1/role',
      /nearest known value is "one-electron spin-orbit"/,
    ],
    [
      'unknown unit',
      withPart({ unit: 'cm^-1' }),
      'my.recipe.json: /parts/1/unit',
      /nearest known value is "cm-1"/,
    ],
    [
      'wrong type',
      { ...minimal, orbitals: '2' },
      'my.recipe.json: /orbitals',
      /"2"; expected a value of type integer/,
    ],
    [
      'fraction',
      { ...minimal, orbitals: 2.5 },
      'my.recipe.json: /orbitals',
      /2.5; expected a value of type integer/,
    ],
    [
      'out of range',
      { ...minimal, orbitals: 401 },
      'my.recipe.json: /orbitals',
      /401; expected a value of at most 400/,
    ],
    ['scale zero', withPart({ scale: 0 }), 'my.recipe.json: /parts/1/scale', /0; expected anything but 0/],
    ['no parts', { ...minimal, parts: [] }, 'my.recipe.json: /parts', /at least 1 entries/],
    [
      'missing file',
      { ...minimal, parts: [{ id: 'a', role: 'spin-free' }] },
      'my.recipe.json: /parts/0',
      /no key "file"/,
    ],
    [
      'missing components',
      withPart({ components: undefined }),
      'my.recipe.json: /parts/1',
      /no key "components"/,
    ],
    [
      'mean field without covers',
      withPart({ role: 'mean-field spin-orbit' }),
      'my.recipe.json: /parts/1',
      /no key "covers"/,
    ],
    ['orbitals and spinors', { ...minimal, spinors: 4 }, 'my.recipe.json: /', /both orbitals and spinors/],
    [
      'absolute path',
      withPart({ file: '/etc/so.npy' }),
      'my.recipe.json: /parts/1/file',
      /relative to the recipe/,
    ],
    [
      'path to the parent',
      withPart({ file: 'a/../../so.npy' }),
      'my.recipe.json: /parts/1/file',
      /no "\.\."/,
    ],
    ['path with a drive', withPart({ file: 'C:so.npy' }), 'my.recipe.json: /parts/1/file', /no drive/],
    ['backslash', withPart({ file: 'a\\so.npy' }), 'my.recipe.json: /parts/1/file', /no backslash/],
    ['bad id', withPart({ id: 'SO' }), 'my.recipe.json: /parts/1/id', /"SO"/],
    ['repeated id', withPart({ id: 'coulomb' }), 'my.recipe.json: /parts/1/id', /as in part 0/],
    [
      'newer version',
      { ...minimal, schema: 'spinwright-recipe/2' },
      'my.recipe.json: /schema',
      /newer Spinwright/,
    ],
    ['no schema', { parts: minimal.parts }, 'my.recipe.json: /', /no key "schema"/],
    [
      'too many electrons',
      { ...minimal, electrons: 5 },
      'my.recipe.json: /electrons',
      /5; expected at most 4/,
    ],
    [
      'occupations of another sum',
      { ...minimal, occupations: [1, 0] },
      'my.recipe.json: /occupations',
      /sum of 1; expected 2/,
    ],
    [
      'occupations of another length',
      { ...minimal, occupations: [2, 0, 0] },
      'my.recipe.json: /occupations',
      /3 numbers; expected 2/,
    ],
    [
      'real spin–orbit',
      withPart({ value: 'real' }),
      'my.recipe.json: /parts/1/value',
      /imaginary or complex/,
    ],
    [
      'layout of another role',
      withPart({ layout: 'pairs' }),
      'my.recipe.json: /parts/1/layout',
      /"pairs"; expected full/,
    ],
    [
      'tensor component of a vector',
      withPart({ components: ['xx'] }),
      'my.recipe.json: /parts/1/components',
      /"xx"; expected x, y, z/,
    ],
    [
      'momentum of a one-electron part',
      withPart({ momentum: 'second' }),
      'my.recipe.json: /parts/1/momentum',
      /no momentum pair/,
    ],
    [
      'covers of another role',
      withPart({ covers: 'all' }),
      'my.recipe.json: /parts/1/covers',
      /only a mean field/,
    ],
    [
      'component axis of one component',
      withPart({ components: ['x'], componentAxis: 'last' }),
      'my.recipe.json: /parts/1/componentAxis',
      /no such axis/,
    ],
    [
      'list columns without q',
      withPart({ layout: 'index-list', list: { columns: ['component', 'p', 'value'] } }),
      'my.recipe.json: /parts/1/list/columns',
      /component p q value/,
    ],
    [
      'physicists’ pairs',
      {
        ...minimal,
        parts: [{ id: 'g', role: 'two-electron', file: 'g.npy', layout: 'pairs', order: 'physicists' }],
      },
      'my.recipe.json: /parts/0/order',
      /chemists/,
    ],
    [
      'contact in eV',
      {
        ...minimal,
        parts: [{ id: 'g', role: 'spin-spin contact', file: 'g.npy', value: 'contact', unit: 'eV' }],
      },
      'my.recipe.json: /parts/0/value',
      /bohr/,
    ],
    [
      'spinors beside orbitals',
      withPart({ role: 'spinor', components: undefined }),
      'my.recipe.json: /parts/0/role',
      /spinor parts alone/,
    ],
    [
      'xy and yx in two files',
      {
        ...minimal,
        parts: [
          { id: 'a', role: 'spin-spin', file: 'a.npy', components: ['xy'] },
          { id: 'b', role: 'spin-spin', file: 'b.npy', components: ['yx'] },
        ],
      },
      'my.recipe.json: /parts/1/components',
      /stands for yx too/,
    ],
  ])('%s', (_, recipe, where, message) => {
    const error = refusal(recipe);
    expect(error.where).toBe(where);
    expect(error.message).toMatch(message);
    expect(error.message).not.toContain('\n');
  });
});

describe('JSON as RFC 8259 has it', () => {
  test.each<[string, string, string, RegExp]>([
    ['comment', '{ // units\n}', 'f:1:3', /expected a key in double quotes/],
    ['comment after a key', '{"a": /* none */ 1}', 'f:1:7', /JSON has none/],
    ['NaN', '{"a": NaN}', 'f:1:7', /expected a JSON value/],
    ['overflow', '[1e999]', 'f:1:2', /1e999/],
    ['trailing comma', '{"a": 1,\n}', 'f:2:1', /key in double quotes/],
    ['repeated key', '{"a": 1,\n "a": 2}', 'f:2:2', /a second time/],
    ['single quotes', "{'a': 1}", 'f:1:2', /double quotes/],
    ['leading zero', '[01]', 'f:1:3', /"," or "]"/],
    ['cut short', '{"a": [1, 2', 'f:1:12', /end of the file/],
    ['text after the value', '{} {}', 'f:1:4', /nothing after/],
    ['bad escape', '["\\x"]', 'f:1:2', /valid escapes/],
    ['nothing', '', 'f:1:1', /end of the file/],
    ['nested too deep', '['.repeat(70), 'f:1:66', /64 levels/],
  ])('%s', (_, text, where, message) => {
    let error: unknown;
    try {
      parseJson(text, 'f');
    } catch (caught) {
      error = caught;
    }
    expect(error).toBeInstanceOf(InputError);
    expect((error as InputError).where).toBe(where);
    expect((error as InputError).message).toMatch(message);
  });

  test('agrees with the built-in parser on valid documents', () => {
    const text = '\ufeff {"a": [1, -0.5e-3, true, false, null, "\\u00e9\\n"], "b": {"c": {}, "d": []}}\n';
    expect(parseJson(text, 'f')).toEqual(JSON.parse(text.slice(1)));
  });
});

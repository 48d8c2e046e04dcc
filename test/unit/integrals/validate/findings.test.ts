import { describe, expect, test } from 'vitest';
import type { RecipePart } from '../../../../core/integrals';
import { codes, loadParts, npy } from '../../../fixtures/conventions/load-parts';

// Real integrals (oh_sto3g) read under a convention that is not theirs. What is expected is that the mistake is
// named; thresholds on sizes are common practice, no source.

const XYZ = ['x', 'y', 'z'] as const;
const SIX = ['xx', 'xy', 'xz', 'yy', 'yz', 'zz'] as const;
const fcidump: RecipePart = { id: 'coulomb', role: 'spin-free', file: 'FCIDUMP' };
const nuclear: RecipePart = {
  id: 'nuc',
  role: 'one-electron spin-orbit',
  file: 'hso_nuc_imag.npy',
  components: XYZ,
};
const core: RecipePart = {
  id: 'core',
  role: 'mean-field spin-orbit',
  covers: 'core',
  file: 'hso_core_imag.npy',
  components: XYZ,
};
const packed: RecipePart = {
  id: 'w',
  role: 'two-electron spin-orbit',
  file: 'w2so_packed.npy',
  layout: 'antisymmetric-by-symmetric-pairs',
  components: XYZ,
};
const same: RecipePart = { ...packed, id: 'sso', role: 'two-electron spin-same-orbit' };
const other: RecipePart = { ...packed, id: 'soo', role: 'two-electron spin-other-orbit', scale: 2 };
const spinSpin: RecipePart = {
  id: 'ss',
  role: 'spin-spin',
  file: 'gss_packed.npy',
  layout: 'pairs-triangle',
  components: SIX,
};
const full: RecipePart = { id: 'eri', role: 'two-electron', file: 'eri_full.npy' };

test('the conventions they do have: nothing is found', async () => {
  expect(codes(await loadParts([fcidump, nuclear, core, packed, spinSpin]))).toEqual([]);
  expect(codes(await loadParts([fcidump, nuclear, core, same, other, spinSpin]))).toEqual([]);
  expect(codes(await loadParts([full], { electrons: 7 }))).toEqual([]);
});

describe.each<[string, readonly RecipePart[], readonly string[], RegExp]>([
  ['cm⁻¹ read as hartree', [fcidump, { ...nuclear, scale: 219474.6 }], ['error unit'], /"unit": "cm-1"/],
  ['hartree read as cm⁻¹', [fcidump, { ...nuclear, unit: 'cm-1' }], ['warning unit'], /hartree already/],
  [
    'two-electron part in cm⁻¹ read as hartree',
    [fcidump, { ...packed, scale: 219474.6 }],
    ['error unit'],
    /"unit": "cm-1"/,
  ],
  ['Coulomb in cm⁻¹ read as hartree', [{ ...fcidump, scale: 219474.6 }], ['warning unit'], /eV or cm⁻¹/],
  [
    'spin–orbit array as a spin-free one',
    [fcidump, { id: 'h', role: 'one-electron', file: 'z.npy' }],
    ['error symmetry'],
    /antisymmetric.*"one-electron spin-orbit"/,
  ],
  [
    'spin-free array as spin–orbit',
    [fcidump, { id: 'so', role: 'one-electron spin-orbit', file: 'h1.npy', components: ['z'] }],
    ['error symmetry', 'warning missing-component'],
    /is symmetric.*"one-electron"/,
  ],
  [
    'chemists’ order read as physicists’',
    [{ ...full, order: 'physicists' }],
    ['error symmetry', 'error index-order'],
    /holds with "order": "chemists"/,
  ],
  [
    'g^{k0} read as one spin–orbit integral',
    [fcidump, { id: 'g', role: 'two-electron spin-orbit', file: 'gk0_imag_full.npy', components: XYZ }],
    ['error symmetry'],
    /"two-electron spin-orbit summed"/,
  ],
  [
    'repulsion with the wrong sign',
    [{ ...fcidump, scale: -1 }],
    ['error coulomb-not-positive'],
    /"scale": -1/,
  ],
  [
    'other-orbit without its factor 2',
    [fcidump, same, { ...other, scale: 1 }],
    ['warning factor-two'],
    /1\.000 × .*A factor 2 is missing/,
  ],
  [
    'other-orbit with a factor 2 twice',
    [fcidump, same, { ...other, scale: 4 }],
    ['warning factor-two'],
    /4\.000 × .*A factor 2 too many/,
  ],
  [
    'same-orbit with s taken for σ',
    [fcidump, { ...same, scale: 2 }, other],
    ['warning factor-two'],
    /"spin": "s"/,
  ],
  [
    'other-orbit with the opposite sign',
    [fcidump, same, { ...other, scale: -2 }],
    ['warning factor-two'],
    /signs differ/,
  ],
  [
    'two-electron part with the sign of the nuclear one',
    [fcidump, nuclear, { ...packed, scale: -1 }],
    ['warning screening-sign'],
    /"scale": -1/,
  ],
  [
    'mean field with the sign of the nuclear part',
    [fcidump, nuclear, { ...core, scale: -1 }],
    ['warning screening-sign'],
    /"scale": -1/,
  ],
  [
    'tensor components in another order',
    [fcidump, { ...spinSpin, components: ['xx', 'yy', 'zz', 'xy', 'xz', 'yz'] }],
    ['warning trace'],
    /another order/,
  ],
  [
    'core Hamiltonian beside the FCIDUMP that holds it',
    [fcidump, { id: 'h1', role: 'one-electron', file: 'h1.npy' }],
    ['warning counted-twice'],
    /part "coulomb".*"ignore"/,
  ],
  [
    'one component forgotten',
    [fcidump, { ...nuclear, file: 'xy.npy', components: ['x', 'y'] }],
    ['warning missing-component'],
    /without component z/,
  ],
])('%s', (_, parts, expected, message) => {
  test('is named with its cure', async () => {
    const set = await loadParts(parts, { electrons: 7 }, { 'z.npy': zComponent, 'xy.npy': xyComponents });
    expect(codes(set)).toEqual(expected);
    const { where, found, mend } = set.findings.find(({ severity }) => severity !== 'note')!;
    expect(`${where} ${found} ${mend}`).toMatch(message);
  });
});

// An antisymmetric array of one component, and of two.
const zComponent = npy([5, 5], antisymmetric(5));
const xyComponents = npy([2, 5, 5], [...antisymmetric(5), ...antisymmetric(5)]);

function antisymmetric(n: number): number[] {
  return Array.from({ length: n * n }, (_, i) => 1e-4 * (Math.floor(i / n) - (i % n)));
}

describe('complex arrays', () => {
  const [n, i] = [5, antisymmetric(5)];
  const withReal = (real: number) =>
    npy(
      [n, n],
      i.flatMap((value) => [real, value]),
      true,
    );
  const part: RecipePart = {
    id: 'so',
    role: 'one-electron spin-orbit',
    file: 'c.npy',
    components: ['z'],
    value: 'complex',
  };

  test('a real part in a spin–orbit array breaks time reversal', async () => {
    const set = await loadParts([fcidump, part], {}, { 'c.npy': withReal(1e-5) });
    expect(codes(set)).toContain('error time-reversal');
    const finding = set.findings.find(({ code }) => code === 'time-reversal')!;
    expect(finding.found).toMatch(/a real part up to 1\.000e-5 Eh/);
    expect(finding.mend).toMatch(/magnetic field/);
  });

  test('rounding is no real part', async () => {
    const set = await loadParts([fcidump, part], {}, { 'c.npy': withReal(1e-16) });
    expect(codes(set)).not.toContain('error time-reversal');
  });

  test('an imaginary part in a spin-free array breaks time reversal', async () => {
    const one: RecipePart = { id: 'h', role: 'one-electron', file: 'c.npy', value: 'complex' };
    const set = await loadParts(
      [fcidump, one],
      {},
      {
        'c.npy': npy(
          [n, n],
          i.flatMap((value) => [1, value]),
          true,
        ),
      },
    );
    expect(codes(set)).toEqual(['error time-reversal']);
  });

  test.each<[string, number, Partial<RecipePart>]>([
    ['Coulomb', 1, { role: 'two-electron' }],
    ['two-electron spin–orbit', 0, { role: 'two-electron spin-orbit', components: ['z'] }],
    ['their sum', 0, { role: 'two-electron spin-orbit summed', components: ['z'] }],
  ])('four indices: the other sector in a %s array', async (_, wrongPlane, conventions) => {
    const data = new Array<number>(2 * 2 ** 4).fill(0);
    data[2 * 5 + wrongPlane] = 1e-3; // element (1 2|1 2)
    const g: RecipePart = { id: 'g', role: 'two-electron', file: 'g.npy', value: 'complex', ...conventions };
    const recipe = { orbitals: 2, electrons: 2 };
    const set = await loadParts([g], recipe, { 'g.npy': npy([2, 2, 2, 2], data, true) }, null);
    const finding = set.findings.find(({ code }) => code === 'time-reversal')!;
    expect(finding.severity).toBe('error');
    expect(finding.found).toContain('(1 2|1 2)');
  });

  test('a list with a real part in a spin–orbit array', async () => {
    const text = '1e-5 1e-4 1 2\n';
    const list = { columns: ['re', 'im', 'p', 'q'] } as const;
    const so: RecipePart = { ...part, file: 'so.txt', layout: 'index-list', list };
    const set = await loadParts([so], { orbitals: 2, electrons: 2 }, { 'so.txt': text }, null);
    expect(codes(set)).toContain('error time-reversal');
  });

  test('complex numbers under a real value are refused', async () => {
    await expect(
      loadParts([fcidump, { ...part, value: 'imaginary' }], {}, { 'c.npy': withReal(0) }),
    ).rejects.toMatchObject({ code: 'complex-data', mend: expect.stringContaining('"value": "complex"') });
  });
});

describe('lists', () => {
  const g: RecipePart = { id: 'g', role: 'two-electron', file: 'g.txt', layout: 'index-list' };
  const load = (text: string, change: Partial<RecipePart> = {}) =>
    loadParts([{ ...g, ...change }], { orbitals: 2, electrons: 2 }, { 'g.txt': text }, null);
  const listed = '1 1 1 1 0.7\n2 2 2 2 0.6\n1 1 2 2 0.5\n1 2 1 2 0.1\n';

  test('⟨pq|rs⟩ read as (pq|rs) exchanges Coulomb and exchange integrals', async () => {
    const physicists = '1 1 1 1 0.7\n2 2 2 2 0.6\n1 2 1 2 0.5\n1 1 2 2 0.1\n';
    expect(codes(await load(listed))).toEqual([]);
    const wrong = await load(physicists);
    expect(codes(wrong)).toEqual(['error index-order']);
    expect(wrong.findings[0]!.mend).toContain('"physicists" where nothing was said');
    expect(codes(await load(physicists, { order: 'physicists' }))).toEqual([]);
  });

  test('a duplicate with another value: both lines', async () => {
    await expect(load(`${listed}1 1 2 2 0.4\n`)).rejects.toMatchObject({
      code: 'duplicate-element',
      where: 'g.txt:5',
      found: expect.stringContaining('on line 3'),
    });
    await expect(load(`${listed}1 1 2 2 0.5\n`)).resolves.toBeDefined();
  });

  test('a FCIDUMP is in chemists’ order by its format', async () => {
    await expect(loadParts([{ ...fcidump, order: 'physicists' }])).rejects.toMatchObject({
      code: 'index-order',
    });
  });

  test('a partner with another value', async () => {
    expect(codes(await load(`${listed}2 2 1 1 0.4\n`))).toEqual(['error symmetry']);
  });

  test('"as-listed": a partner that is absent is zero, and breaks the symmetry', async () => {
    const set = await load(listed, { list: { fill: 'as-listed' } });
    expect(codes(set)).toEqual(['error missing-element']);
    expect(set.findings[0]!.mend).toContain('"fill": "symmetry"');
    const complete = `${listed}2 2 1 1 0.5\n2 1 1 2 0.1\n1 2 2 1 0.1\n2 1 2 1 0.1\n`;
    expect(codes(await load(complete, { list: { fill: 'as-listed' } }))).toEqual([]);
  });

  test('a diagonal element of an antisymmetric array', async () => {
    const part: RecipePart = {
      id: 'so',
      role: 'one-electron spin-orbit',
      file: 'g.txt',
      layout: 'index-list',
      components: ['z'],
    };
    const set = await loadParts(
      [part],
      { orbitals: 2, electrons: 2 },
      { 'g.txt': '1 2 1e-4\n2 2 1e-4\n' },
      null,
    );
    expect(codes(set)).toContain('error symmetry');
    expect(set.findings[0]!.where).toContain('g.txt:2');
  });

  test('a repulsion integral that is missing', async () => {
    const set = await load('1 1 1 1 0.7\n1 2 1 2 0.0\n');
    expect(codes(set)).toEqual(['warning missing-element']);
    expect(set.findings[0]!.found).toContain('orbital 2');
  });
});

describe('the first error stops the job unless findings are asked for', () => {
  test('as an InputError with the finding’s code', async () => {
    await expect(
      loadParts([{ ...fcidump, scale: -1 }], {}, {}, 'oh_sto3g', { onError: 'throw' }),
    ).rejects.toMatchObject({ name: 'InputError', code: 'coulomb-not-positive' });
  });

  test('warnings do not', async () => {
    await expect(
      loadParts([fcidump, same, { ...other, scale: 1 }], {}, {}, 'oh_sto3g', { onError: 'throw' }),
    ).resolves.toBeDefined();
  });
});

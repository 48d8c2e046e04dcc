import { expect, describe as group, test } from 'vitest';
import { describe, type RecipePart } from '../../../../core/integrals';
import { loadParts, npy } from '../../../fixtures/conventions/load-parts';
import { readSetJson } from '../../../fixtures/sets/read-set';

const XYZ = ['x', 'y', 'z'] as const;

group('sizes of the terms of a real set', () => {
  test('agree with the checksums of the program that made it', async () => {
    const set = await loadParts([
      { id: 'coulomb', role: 'spin-free', file: 'FCIDUMP' },
      { id: 'nuc', role: 'one-electron spin-orbit', file: 'hso_nuc_imag.npy', components: XYZ },
      // Under the term of the nuclear part, so that the sum is the one of the checksum.
      {
        id: 'core',
        role: 'mean-field spin-orbit',
        term: 'so1',
        covers: 'core',
        file: 'hso_core_imag.npy',
        components: XYZ,
      },
      {
        id: 'w',
        role: 'two-electron spin-same-orbit',
        file: 'w2so_packed.npy',
        layout: 'antisymmetric-by-symmetric-pairs',
        components: XYZ,
      },
      {
        id: 'ss',
        role: 'spin-spin',
        file: 'gss_packed.npy',
        layout: 'pairs-triangle',
        components: ['xx', 'xy', 'xz', 'yy', 'yz', 'zz'],
      },
    ]);
    const sums = readSetJson('oh_sto3g', 'meta.json').checksums as unknown as Record<
      string,
      number & number[]
    >;
    const total = (values: readonly number[]) => values.reduce((a, b) => a + b, 0);
    const { terms, orbitals, electrons, constant, findings } = describe(set);
    const norm = (name: string) => terms.find((term) => term.name === name)!.oneNorm;
    expect(norm('sf')).toBeCloseTo(sums.sum_abs_h1! + 0.5 * sums.sum_abs_eri_all_n4!, 10);
    expect(norm('so1')).toBeCloseTo(total(sums.sum_abs_hso_imag_nuc_plus_core!), 13);
    expect(norm('so2')).toBeCloseTo(total(sums.sum_abs_w_all_n4!), 13);
    const [xx, xy, xz, yy, yz, zz] = sums.sum_abs_gss_all_n4_xx_xy_xz_yy_yz_zz!;
    expect(norm('ss')).toBeCloseTo(0.5 * (xx! + yy! + zz!) + xy! + xz! + yz!, 13);
    expect([orbitals, electrons]).toEqual([5, 7]);
    expect(constant).toBe(set.constants.sf);
    expect(findings).toBe(set.findings);
    expect(terms.map(({ name }) => name)).toEqual(['sf', 'so1', 'so2', 'ss']);
  });
});

test('spin–orbit sizes are those of the full tensor g^{k0} = i(S_pqrs + O_rspq)', async () => {
  const n = 3;
  const file = 'gk0_imag_full.npy';
  const part: RecipePart = { id: 'g', role: 'two-electron spin-orbit summed', file, components: ['x'] };
  // Any tensor with A_pqrs = −A_qpsr.
  const value = (p: number, q: number, r: number, s: number) => Math.sin(1 + p + 3 * q + 9 * r + 27 * s);
  const tensor = Array.from({ length: n ** 4 }, (_, i) => {
    const [p, q, r, s] = [Math.floor(i / 27), Math.floor(i / 9) % 3, Math.floor(i / 3) % 3, i % 3] as const;
    return value(p, q, r, s) - value(q, p, s, r);
  });
  const set = await loadParts([part], { electrons: 2 }, { [file]: npy([n, n, n, n], tensor) }, null);
  const [so2] = describe(set).terms;
  expect(so2!.oneNorm).toBeCloseTo(
    tensor.reduce((sum, a) => sum + Math.abs(a), 0),
    11,
  );
  expect(so2!.maxAbs).toBeCloseTo(Math.max(...tensor.map(Math.abs)), 12);
});

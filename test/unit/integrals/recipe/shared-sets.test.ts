import { describe, expect, test } from 'vitest';
import { nodeReadPlatform } from '../../../../app/cli/hdf5';
import {
  describe as describeSet,
  type IntegralSet,
  loadIntegrals,
  resolveInputs,
} from '../../../../core/integrals';
import { inlineContext } from '../../../../core/job';
import { codes } from '../../../fixtures/conventions/load-parts';
import { haveShared, sharedFolder } from '../readers/shared-data';

const context = inlineContext();

async function load(name: string, chosen?: readonly string[]): Promise<IntegralSet> {
  const files = await sharedFolder(name);
  const choice = chosen === undefined ? { files } : { files, chosen };
  const { recipe } = await resolveInputs(choice, nodeReadPlatform, context);
  return loadIntegrals(recipe, files, nodeReadPlatform, context);
}

async function checksums(name: string): Promise<Record<string, number & number[]>> {
  const meta = (await sharedFolder(name)).open('meta.json')!;
  return JSON.parse(new TextDecoder().decode(await meta.read(0, meta.size))).checksums;
}

describe.skipIf(!haveShared)('larger real sets, two of them with arrays in an HDF5 file only', () => {
  test.each(['ch2_sto3g', 'h2se_def2svp_6o', 'ch2o_631g_20o', 'h2se_def2svp_41o', 'thiochromone_sto3g_50o'])(
    '%s: the checksums of the generator, and no false alarm',
    async (name) => {
      const set = await load(name);
      const sums = await checksums(name);
      const total = (values: readonly number[]) => values.reduce((a, b) => a + b, 0);
      const norm = (term: string) => describeSet(set).terms.find((entry) => entry.name === term)!.oneNorm;
      const [xx, xy, xz, yy, yz, zz] = sums.sum_abs_gss_all_n4_xx_xy_xz_yy_yz_zz!;
      expect(codes(set)).toEqual([]);
      const expected = [
        [norm('sf'), sums.sum_abs_h1! + 0.5 * sums.sum_abs_eri_all_n4!],
        [norm('ss'), 0.5 * (xx! + yy! + zz!) + xy! + xz! + yz!],
      ] as const;
      for (const [found, wanted] of expected) expect(Math.abs(found / wanted - 1)).toBeLessThan(1e-10);
      // The checksum is over w alone; same-orbit is w, so each of its elements must be there.
      const so =
        set.kind === 'spatial' ? set.twoElectron.find((part) => part.kind === 'spin-orbit') : undefined;
      const n = set.kind === 'spatial' ? set.orbitals : 0;
      const w = so?.kind === 'spin-orbit' ? so.same! : new Float64Array(0);
      let sum = 0;
      for (let i = 0; i < w.length; i++) {
        const rs = i % ((n * (n + 1)) / 2);
        // A diagonal pair rr stands for one order, any other for two; the antisymmetric pair always for two.
        const r = Math.floor((Math.sqrt(8 * rs + 1) - 1) / 2 + 1e-9);
        sum += (rs === (r * (r + 3)) / 2 ? 2 : 4) * Math.abs(w[i]!);
      }
      expect(Math.abs(sum / total(sums.sum_abs_w_all_n4!) - 1)).toBeLessThan(1e-10);
    },
  );

  test('a lone TREXIO file in a folder', async () => {
    const set = await load('trexio');
    expect(set).toMatchObject({ kind: 'spatial', orbitals: 12, electrons: 16 });
    expect(codes(set)).toEqual([]);
  });

  test.each(['oh_sto3g_4c_breit.FCIDUMP', 'o2_sto3g_4c_coulomb.FCIDUMP'])('spinors: %s', async (file) => {
    const set = await load('spinor_fcidump', [file]);
    expect(set.kind).toBe('spinor');
    expect(codes(set)).toEqual([]);
  });

  test('a folder with several FCIDUMPs names them', async () => {
    await expect(load('spinor_fcidump')).rejects.toThrow(/4 candidates: o2_sto3g_4c_breit\.FCIDUMP/);
  });
});

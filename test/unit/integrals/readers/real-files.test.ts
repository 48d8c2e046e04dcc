import { describe, expect, it } from 'vitest';
import { nodeReadPlatform } from '../../../../app/cli/hdf5';
import {
  type FileSet,
  numSymmetricPairs,
  type RawArray,
  readFcidump,
  readHdf5Dataset,
  readNpy,
  readTrexio,
  type SpinFreeContents,
  sniffFormat,
} from '../../../../core/integrals';
import { inlineContext } from '../../../../core/job';
import { haveShared, sharedFolder } from './shared-data';

const context = inlineContext();
const SETS = [
  'br_def2svp_4p',
  'c_631g_2p',
  'ch2_sto3g',
  'ch2o_631g_20o',
  'ch2o_sto3g_8o',
  'f_sto3g_2p',
  'h2se_def2svp_6o',
  'oh_sto3g',
];

interface Meta {
  readonly scalars: { readonly e_core: number };
  readonly checksums: {
    readonly sum_abs_h1: number;
    readonly sum_abs_eri_all_n4: number;
    readonly sum_abs_w_all_n4: number[];
    readonly sum_abs_gss_all_n4_xx_xy_xz_yy_yz_zz: number[];
  };
}

async function readMeta(files: FileSet): Promise<Meta> {
  const source = files.open('meta.json');
  if (source === undefined) throw new Error('no meta.json');
  return JSON.parse(new TextDecoder().decode(await source.read(0, source.size)));
}

const open = (files: FileSet, path: string) => {
  const source = files.open(path);
  if (source === undefined) throw new Error(`no ${path}`);
  return source;
};

/** Sum of |(pq|rs)| over all n⁴ index values of a pairs-triangle. */
function sumOverAll(triangle: Float64Array, n: number): number {
  let sum = 0;
  let at = 0;
  const weight: number[] = [];
  for (let p = 0; p < n; p++) for (let q = 0; q <= p; q++) weight.push(p === q ? 1 : 2);
  for (let bra = 0; bra < weight.length; bra++) {
    for (let ket = 0; ket <= bra; ket++, at++) {
      sum += Math.abs(triangle[at]) * weight[bra] * weight[ket] * (bra === ket ? 1 : 2);
    }
  }
  return sum;
}

const near = (value: number, expected: number): void =>
  expect(Math.abs(value - expected)).toBeLessThanOrEqual(1e-11 * Math.abs(expected));

describe.skipIf(!haveShared)('the data sets, written by NumPy and h5py', () => {
  it.each(SETS)(
    '%s: FCIDUMP, npy and HDF5 agree, and with the checksums of their generator',
    async (name) => {
      const files = await sharedFolder(name);
      const meta = await readMeta(files);
      const dump = (await readFcidump(open(files, 'FCIDUMP'), context)) as SpinFreeContents;
      const n = dump.orbitals;
      expect(dump.kind).toBe('spin-free');
      expect(dump.notes).toEqual([]);
      expect(Math.abs(dump.constant - meta.scalars.e_core)).toBeLessThan(1e-13 * Math.abs(dump.constant));
      near(sumOverAll(dump.twoElectron, n), meta.checksums.sum_abs_eri_all_n4);
      near(
        dump.oneElectron.reduce((sum, value) => sum + Math.abs(value), 0),
        meta.checksums.sum_abs_h1,
      );

      const arrays = new Map<string, RawArray>();
      for (const source of files.list().filter(({ path }) => path.endsWith('.npy'))) {
        const array = await readNpy(source, context);
        const dataset = `/${source.path.replace('.npy', '')}`;
        const twin = await readHdf5Dataset(open(files, `${name}.h5`), dataset, nodeReadPlatform, context);
        expect(twin.shape).toEqual(array.shape);
        expect(twin.data).toEqual(array.data);
        expect(twin.origin).toBe(`${name}.h5:${dataset}`);
        arrays.set(dataset.slice(1), array);
      }
      expect(arrays.size).toBeGreaterThanOrEqual(11);

      // The FCIDUMP leaves out what is below 1e-14.
      const eri = arrays.get('eri_packed')?.data as Float64Array;
      const h1 = arrays.get('h1')?.data as Float64Array;
      expect(eri.length).toBe(dump.twoElectron.length);
      expect(eri.every((value, i) => Math.abs(value - dump.twoElectron[i]) <= 1.01e-14)).toBe(true);
      expect(h1.every((value, i) => Math.abs(value - dump.oneElectron[i]) <= 1.01e-14)).toBe(true);

      const gss = arrays.get('gss_packed')?.data as Float64Array;
      const length = gss.length / 6;
      meta.checksums.sum_abs_gss_all_n4_xx_xy_xz_yy_yz_zz.forEach((sum, kl) => {
        near(sumOverAll(gss.subarray(kl * length, (kl + 1) * length), n), sum);
      });
      const w = arrays.get('w2so_packed') as RawArray;
      const npair = numSymmetricPairs(n);
      expect(w.shape).toEqual([3, (n * (n - 1)) / 2, npair]);
      meta.checksums.sum_abs_w_all_n4.forEach((sum, k) => {
        let own = 0;
        for (let bra = 0; bra < w.shape[1]; bra++) {
          for (let p = 0, at = (k * w.shape[1] + bra) * npair; p < n; p++) {
            for (let q = 0; q <= p; q++, at++) own += 2 * Math.abs(w.data[at]) * (p === q ? 1 : 2);
          }
        }
        near(own, sum);
      });
    },
  );

  it('ch2o_sto3g_8o: the files are told apart by content', async () => {
    const files = await sharedFolder('ch2o_sto3g_8o');
    const format = (path: string) => sniffFormat(open(files, path));
    expect(await format('FCIDUMP')).toBe('fcidump');
    expect(await format('h1.npy')).toBe('npy');
    expect(await format('ch2o_sto3g_8o.h5')).toBe('hdf5');
    expect(await format('meta.json')).toBe('json');
  });
});

describe.skipIf(!haveShared)('formaldehyde, STO-3G, all electrons, from two general programs', () => {
  it('TREXIO (through its own library) and a restricted FCIDUMP (from a CI program) hold one Hamiltonian', async () => {
    const trexio = await readTrexio(
      open(await sharedFolder('trexio'), 'ch2o_sto3g_all.trexio.h5'),
      nodeReadPlatform,
      context,
    );
    const dump = (await readFcidump(
      open(await sharedFolder('restricted_fcidump'), 'ch2o_sto3g_c2v.FCIDUMP'),
      context,
    )) as SpinFreeContents;
    expect(trexio.notes).toEqual([]);
    expect([trexio.orbitals, trexio.electrons, trexio.ms2]).toEqual([12, 16, 0]);
    expect([dump.orbitals, dump.electrons, dump.ms2]).toEqual([12, 16, 0]);
    expect(Math.abs(trexio.constant - dump.constant)).toBeLessThan(1e-10);
    // Orbitals may come in another order and with another sign, so what is compared has neither.
    const invariants = ({ orbitals: n, oneElectron: h, twoElectron: g }: SpinFreeContents): number[][] => {
      const pair = (p: number, q: number) => (p >= q ? (p * (p + 1)) / 2 + q : (q * (q + 1)) / 2 + p);
      const values = Array.from({ length: n }, (_, p) => [h[p * n + p], g[pair(pair(p, p), pair(p, p))]]);
      const exchange: number[] = [];
      for (let p = 0; p < n; p++) for (let q = 0; q < p; q++) exchange.push(g[pair(pair(p, q), pair(p, q))]);
      const sorted = (numbers: number[]) => numbers.sort((a, b) => a - b);
      return [sorted(values.map(([a]) => a)), sorted(values.map(([, b]) => b)), sorted(exchange)];
    };
    const theirs = invariants(dump);
    invariants(trexio).forEach((list, which) => {
      list.forEach((value, i) => {
        expect(Math.abs(value - theirs[which][i])).toBeLessThan(1e-9);
      });
    });
    near(sumOverAll(trexio.twoElectron, 12), sumOverAll(dump.twoElectron, 12));
  });
});

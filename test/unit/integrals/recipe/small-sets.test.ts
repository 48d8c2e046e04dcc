import { describe, expect, test } from 'vitest';
import {
  loadIntegrals,
  numSymmetricPairs,
  pairsTriangleLength,
  resolveInputs,
  type SpatialIntegrals,
  type SpinOrbitPart,
  type SpinSpinPart,
} from '../../../../core/integrals';
import { inlineContext } from '../../../../core/job';
import { readSet, readSetJson, SMALL_SETS } from '../../../fixtures/sets/read-set';

// Outside numbers: the checksums in meta.json, written by the program that made the integrals, over all index
// values of its unpacked tensors.

const context = inlineContext();
const platform = { openHdf5: () => Promise.reject(new Error('these sets need no HDF5')) };

async function load(name: string): Promise<SpatialIntegrals> {
  const { recipe, files } = await resolveInputs({ files: readSet(name) }, platform, context);
  return (await loadIntegrals(recipe, files, platform, context)) as SpatialIntegrals;
}

const sumAbs = (values: Float64Array) => values.reduce((sum, value) => sum + Math.abs(value), 0);

/** Σ |A_pqrs| over all n⁴ indices of a pairs-triangle, visiting every index. */
function sumAbsTriangle(values: Float64Array, n: number): number {
  const pair = (p: number, q: number) => (Math.max(p, q) * (Math.max(p, q) + 1)) / 2 + Math.min(p, q);
  let sum = 0;
  for (let p = 0; p < n; p++)
    for (let q = 0; q < n; q++)
      for (let r = 0; r < n; r++)
        for (let s = 0; s < n; s++) sum += Math.abs(values[pair(pair(p, q), pair(r, s))]!);
  return sum;
}

/** The same for one component of nanti × npair: each element stands for two orders of pq and one or two of rs. */
function sumAbsSpinOrbit(values: Float64Array, n: number): number {
  const sym = numSymmetricPairs(n);
  let sum = 0;
  for (let a = 0; a < (n * (n - 1)) / 2; a++)
    for (let r = 0, position = 0; r < n; r++)
      for (let s = 0; s <= r; s++, position++)
        sum += 2 * (r === s ? 1 : 2) * Math.abs(values[a * sym + position]!);
  return sum;
}

describe.each(SMALL_SETS)('%s', (name) => {
  const { checksums, scalars, electrons, orbitals } = readSetJson(name, 'meta.json') as unknown as {
    checksums: Record<string, number & number[]>;
    scalars: Record<string, number>;
    electrons: { active: number; ms2: number };
    orbitals: { n_active: number };
  };

  test('arrays have the checksums of the generator', async () => {
    const set = await load(name);
    const n = set.orbitals;
    const one = (id: string) => set.oneElectron.find((part) => part.id === id)!;
    const coulomb = set.twoElectron.find((part) => part.kind === 'charge-charge' && part.term === 'sf')!;
    const spinOrbit = set.twoElectron.find((part) => part.kind === 'spin-orbit') as SpinOrbitPart;
    const spinSpin = set.twoElectron.find((part) => part.term === 'ss') as SpinSpinPart;

    expect(sumAbs(one(coulomb.id).charge!)).toBeCloseTo(checksums.sum_abs_h1!, 10);
    expect(
      sumAbsTriangle(coulomb.kind === 'charge-charge' ? coulomb.values : spinSpin.values, n),
    ).toBeCloseTo(checksums.sum_abs_eri_all_n4!, 10);
    const nuclear = one('so-nuclear').spin!;
    const core = one('so-core').spin!;
    const anti = (n * (n - 1)) / 2;
    for (let k = 0; k < 3; k++) {
      const both = nuclear.map((value, i) => value + core[i]!).subarray(k * n * n, (k + 1) * n * n);
      expect(sumAbs(both)).toBeCloseTo(checksums.sum_abs_hso_imag_nuc_plus_core![k]!, 14);
      const block = anti * numSymmetricPairs(n);
      const w = spinOrbit.same!.subarray(k * block, (k + 1) * block);
      expect(sumAbsSpinOrbit(w, n)).toBeCloseTo(checksums.sum_abs_w_all_n4![k]!, 15);
    }
    const size = pairsTriangleLength(n);
    for (let kl = 0; kl < 6; kl++) {
      expect(sumAbsTriangle(spinSpin.values.subarray(kl * size, (kl + 1) * size), n)).toBeCloseTo(
        checksums.sum_abs_gss_all_n4_xx_xy_xz_yy_yz_zz![kl]!,
        15,
      );
    }
  });

  test('electrons, constants and occupations are those of the set, without findings', async () => {
    const set = await load(name);
    expect(set.orbitals).toBe(orbitals.n_active);
    expect(set.electrons).toBe(electrons.active);
    expect(set.ms2).toBe(electrons.ms2);
    expect(set.occupations.reduce((a, b) => a + b, 0)).toBe(electrons.active);
    expect(set.constants.sf).toBe(scalars.e_core);
    expect(set.constants.scalar).toBeCloseTo(
      scalars.e_core_mv! + scalars.e_core_d1! + scalars.e_core_d2!,
      12,
    );
    expect(set.constants.ssc).toBe(scalars.e_core_ssc);
    expect(set.meanFieldCoversActive).toBe(false);
    expect(set.findings).toEqual([]);
    expect(set.provenance.files[0]!.path).toBe('FCIDUMP');
  });
});

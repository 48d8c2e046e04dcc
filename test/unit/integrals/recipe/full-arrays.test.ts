import { expect, test } from 'vitest';
import type { SpinOrbitPart } from '../../../../core/integrals';
import { codes, loadParts } from '../../../fixtures/conventions/load-parts';

// The set oh_sto3g holds the same arrays packed and in full, both written by the program that made them: what is
// read from the one must be what is read from the other.

const XYZ = ['x', 'y', 'z'] as const;
const fcidump = { id: 'coulomb', role: 'spin-free', file: 'FCIDUMP' } as const;

function largestDifference(a: ArrayLike<number>, b: ArrayLike<number>): number {
  expect(a.length).toBe(b.length);
  let worst = 0;
  for (let i = 0; i < a.length; i++) worst = Math.max(worst, Math.abs(a[i]! - b[i]!));
  return worst;
}

test('Im g^{k0} in full splits into the packed same-orbit array and twice it as other-orbit', async () => {
  const summed = {
    id: 'g',
    role: 'two-electron spin-orbit summed',
    file: 'gk0_imag_full.npy',
    components: XYZ,
  } as const;
  const packed = {
    id: 'w',
    role: 'two-electron spin-orbit',
    file: 'w2so_packed.npy',
    components: XYZ,
    layout: 'antisymmetric-by-symmetric-pairs',
  } as const;
  const full = await loadParts([fcidump, summed]);
  const reference = await loadParts([fcidump, packed]);
  const so = full.twoElectron[1] as SpinOrbitPart;
  const w = (reference.twoElectron[1] as SpinOrbitPart).same!;
  expect(codes(full)).toEqual([]);
  expect(largestDifference(so.same!, w)).toBeLessThan(1e-18);
  expect(
    largestDifference(
      so.other as Float64Array,
      w.map((value) => 2 * value),
    ),
  ).toBeLessThan(1e-18);
});

test('spin–spin and Coulomb arrays in full', async () => {
  const components = ['xx', 'xy', 'xz', 'yy', 'yz', 'zz'] as const;
  const set = await loadParts([
    { id: 'full', role: 'spin-spin', file: 'gss_full.npy', components },
    { id: 'packed', role: 'spin-spin', file: 'gss_packed.npy', components, layout: 'pairs-triangle' },
    { id: 'eri', role: 'two-electron', file: 'eri_full.npy' },
    fcidump,
  ]);
  const [full, packed, eri, coulomb] = set.twoElectron.map((part) =>
    part.kind === 'spin-orbit' ? [] : part.values,
  );
  expect(largestDifference(full!, packed!)).toBeLessThan(1e-18);
  // The FCIDUMP leaves out what is below 1e-14.
  expect(largestDifference(eri!, coulomb!)).toBeLessThan(1e-14);
});

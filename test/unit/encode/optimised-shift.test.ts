import { describe, expect, it } from 'vitest';
import { buildEncoding, expandVariants, formatVariant, parseVariant } from '../../../core/encode';
import { factorise, optimiseShifts } from '../../../core/factor';
import {
  buildHamiltonian,
  restrictToWindow,
  type SpatialHamiltonian,
  shiftedHamiltonian,
  shiftedSpinorHamiltonian,
  spinorForm,
} from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';
import { hermitianEigenvalues } from '../../../core/linalg';
import { findSet, loadSet } from '../../published/data-set';
import { largestDifference, randomHamiltonian } from '../hamiltonian/random-hamiltonian';
import { matrixOf, restrict } from './fock-space';

const ctx = inlineContext();

async function systems(): Promise<[string, SpatialHamiltonian][]> {
  const found: [string, SpatialHamiltonian][] = [
    ['random, 2 orbitals, 3 electrons', randomHamiltonian(2, 11, undefined, 3)],
    ['random, 3 orbitals, 2 electrons', randomHamiltonian(3, 12, undefined, 2)],
  ];
  for (const name of ['f_sto3g_2p', 'c_631g_2p', 'br_def2svp_4p', 'oh_sto3g']) {
    const folder = findSet(name);
    if (!folder) continue;
    const whole = buildHamiltonian(await loadSet(folder)) as SpatialHamiltonian;
    const h =
      whole.orbitals <= 3
        ? whole
        : restrictToWindow(whole, { orbitals: [1, 2, 3], electrons: 5, occupations: [2, 2, 2, 1, 0] });
    found.push([name, h]);
  }
  return found;
}

const all = await systems();
const NAMES = expandVariants('triplet/*/index/*/clean, spinor/*/index/*/clean, sparse/*/index/*/clean')
  .filter(({ shift }) => shift !== 'none')
  .map(formatVariant);

describe.each(all)('shifts of %s', (_, h) => {
  const before = matrixOf(h);
  describe.each(NAMES)('%s', (name) => {
    const variant = parseVariant(name);
    const made = (async () => {
      if (variant.factorisation === 'sparse') return buildEncoding(h, null, variant, {}, ctx);
      const given = await factorise(h, { grouping: variant.grouping as 'joint' | 'separate' }, ctx);
      const form = variant.factorisation === 'spinor' ? 'spinor' : 'triplet';
      const factors =
        variant.shift === 'optimised' ? (await optimiseShifts(h, given, { form }, ctx)).factorisation : given;
      return buildEncoding(h, factors, variant, {}, ctx);
    })();

    it('amount to H + ξ (N̂ − η) with the ξ that is reported, on all of Fock space', async () => {
      const encoding = await made;
      const found = matrixOf(encoding.rebuild());
      const expected = matrixOf(shiftedHamiltonian(h, encoding.symmetryShift!()));
      expect(largestDifference(found.re, expected.re)).toBeLessThan(1e-10);
      expect(largestDifference(found.im, expected.im)).toBeLessThan(1e-10);
    });

    it('leave the levels of the sector and change those of its neighbours', async () => {
      const after = matrixOf((await made).rebuild());
      const moved = (electrons: number) =>
        largestDifference(
          hermitianEigenvalues(restrict(after, electrons)),
          hermitianEigenvalues(restrict(before, electrons)),
        );
      expect(moved(h.electrons)).toBeLessThan(1e-9);
      expect(moved(h.electrons - 1)).toBeGreaterThan(1e-5);
      expect(moved(h.electrons + 1)).toBeGreaterThan(1e-5);
    });
  });
});

describe.each(all)('shifts of %s over spinors', (_, spatial) => {
  const h = spinorForm(spatial);
  const before = matrixOf(h);
  it.each([
    'spinor/joint/index/median/clean',
    'spinor/joint/index/optimised/clean',
    'spinor/separate/index/optimised/clean',
  ])('%s amounts to H + ξ (N̂ − η)', async (name) => {
    const variant = parseVariant(name);
    const given = await factorise(h, { grouping: variant.grouping as 'joint' | 'separate' }, ctx);
    const factors =
      variant.shift === 'optimised' ? (await optimiseShifts(h, given, {}, ctx)).factorisation : given;
    const encoding = await buildEncoding(h, factors, variant, {}, ctx);
    const found = matrixOf(encoding.rebuild());
    const expected = matrixOf(shiftedSpinorHamiltonian(h, encoding.spinorShift!()));
    expect(largestDifference(found.re, expected.re)).toBeLessThan(1e-10);
    expect(largestDifference(found.im, expected.im)).toBeLessThan(1e-10);
    const moved = (electrons: number) =>
      largestDifference(
        hermitianEigenvalues(restrict(found, electrons)),
        hermitianEigenvalues(restrict(before, electrons)),
      );
    expect(moved(h.electrons)).toBeLessThan(1e-9);
    expect(moved(h.electrons + 1)).toBeGreaterThan(1e-5);
    const median = parseVariant(`spinor/${given.grouping}/index/median/clean`);
    const plain = await buildEncoding(h, given, median, {}, ctx);
    expect(encoding.lambda.total).toBeLessThanOrEqual(plain.lambda.total + 1e-12);
  });
});

describe('spin components of the sparse shift', () => {
  it('are kept where the two spin–orbit parts share no array, and lower λ', async () => {
    const kinds = { charge: true, spinOrbit: 'independent', spinSpin: false } as const;
    const h = randomHamiltonian(3, 31, kinds, 1);
    const encoding = await buildEncoding(h, null, parseVariant('sparse/-/index/optimised/clean'), {}, ctx);
    const { planes } = encoding.symmetryShift!().operator;
    expect(planes.subarray(9).some((x) => x !== 0)).toBe(true);
    const charge = planes.map((x, i) => (i < 9 ? x : 0));
    const { scalar, operator } = encoding.symmetryShift!();
    const without = shiftedHamiltonian(h, { scalar, operator: { ...operator, planes: charge } });
    const plain = await buildEncoding(without, null, parseVariant('sparse/-/index/none/clean'), {}, ctx);
    expect(encoding.lambda.total).toBeLessThan(plain.lambda.total);
  });

  it('give way where nothing is won, with a note', async () => {
    const h = randomHamiltonian(1, 3, { charge: false, spinOrbit: 'none', spinSpin: false }, 1);
    const empty = {
      ...h,
      h: { ...h.h, planes: new Float64Array(4) },
      k: { ...h.k, planes: new Float64Array(4) },
    };
    const encoding = await buildEncoding(
      empty,
      null,
      parseVariant('sparse/-/index/optimised/clean'),
      {},
      ctx,
    );
    expect(encoding.notes).toEqual([expect.stringContaining('ξ = 0')]);
  });
});

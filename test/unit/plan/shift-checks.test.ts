import { describe, expect, it } from 'vitest';
import { parseVariant } from '../../../core/encode';
import { buildHamiltonian, type SpatialHamiltonian, spinorForm } from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';
import { Encodings } from '../../../core/plan/encodings';
import { shiftChecks } from '../../../core/plan/shift-checks';
import { findSet, loadSet } from '../../published/data-set';

const ctx = inlineContext();
const folder = findSet('f_sto3g_2p')!;
const h = buildHamiltonian(await loadSet(folder)) as SpatialHamiltonian;

describe('checks of symmetry shifts in the neighbouring sector', () => {
  it.each([
    'triplet/joint/index/optimised/clean',
    'triplet/separate/index/median/clean',
    'compressed/separate/index/optimised/clean',
    'spinor/joint/index/optimised/clean',
    'sparse/-/index/optimised/clean',
  ])('%s: pass, and the shift does move levels there', async (name) => {
    const encoding = await new Encodings(h, 0, null, 0).of(parseVariant(name), ctx);
    const checks = await shiftChecks(name, h, encoding, 4, 1e-9, ctx);
    expect(checks.map(({ ok }) => ok)).toEqual([true, true]);
    expect(checks[1]!.value).toBeGreaterThan(1e-3);
  });

  it.each(['f_sto3g_2p', 'br_def2svp_4p', 'oh_sto3g'])(
    '%s: no shift that is chosen has a larger λ than medians, and spinors never more than triplets',
    async (name) => {
      const set = findSet(name);
      if (!set) return;
      const own = buildHamiltonian(await loadSet(set));
      for (const grouping of ['separate', 'joint']) {
        const encodings = new Encodings(own, 0, null, 0);
        const total = async (text: string) => (await encodings.of(parseVariant(text), ctx)).lambda.total;
        const found: number[] = [];
        for (const form of ['triplet', 'spinor']) {
          const [median, optimised] = [
            await total(`${form}/${grouping}/index/median/clean`),
            await total(`${form}/${grouping}/index/optimised/clean`),
          ];
          expect(optimised).toBeLessThan(0.9999 * median);
          found.push(optimised);
        }
        expect(found[1]).toBeLessThanOrEqual(found[0]!);
      }
      const sparse = new Encodings(own, 0, null, 0);
      const [none, shifted] = [
        await sparse.of(parseVariant('sparse/-/index/none/clean'), ctx),
        await sparse.of(parseVariant('sparse/-/index/optimised/clean'), ctx),
      ];
      expect(shifted.lambda.total).toBeLessThan(0.5 * none.lambda.total);
    },
  );

  it('pass for spinor integrals', async () => {
    const spinors = spinorForm(h);
    const variant = parseVariant('spinor/joint/index/optimised/clean');
    const encoding = await new Encodings(spinors, 0, null, 0).of(variant, ctx);
    const checks = await shiftChecks('spinors', spinors, encoding, 4, 1e-9, ctx);
    expect(checks.map(({ ok }) => ok)).toEqual([true, true]);
  });

  it('fail where the reported operator is not the one that was used', async () => {
    const variant = parseVariant('triplet/joint/index/optimised/clean');
    const encoding = await new Encodings(h, 0, null, 0).of(variant, ctx);
    const { scalar, operator } = encoding.symmetryShift!();
    const wrong = { ...encoding, symmetryShift: () => ({ scalar: scalar + 1e-6, operator }) };
    const checks = await shiftChecks('wrong', h, wrong, 4, 1e-9, ctx);
    expect(checks[0]!.ok).toBe(false);
  });

  it('are left out where nothing is shifted', async () => {
    const variant = parseVariant('triplet/joint/index/none/clean');
    const encoding = await new Encodings(h, 0, null, 0).of(variant, ctx);
    expect(await shiftChecks('none', h, encoding, 4, 1e-9, ctx)).toEqual([]);
  });
});

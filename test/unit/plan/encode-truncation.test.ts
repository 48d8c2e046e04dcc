import { describe, expect, it } from 'vitest';
import { loadInputs, openInputs } from '../../../app/cli/inputs';
import { verifyText } from '../../../app/cli/verify-text';
import { expandVariants } from '../../../core/encode';
import { inlineContext } from '../../../core/job';
import { runVerification } from '../../../core/plan';

const ctx = inlineContext();
const VARIANTS =
  'triplet/separate/index/median/clean,triplet/separate/index/none/clean,sparse/-/index/none/clean';

async function evidence(folder: string, change: object) {
  const inputs = await openInputs({ files: [folder], recipe: null }, ctx);
  const set = await loadInputs(inputs, 'all', 'throw', ctx);
  const request = {
    terms: ['sf', 'so1', 'somf', 'so2'] as const,
    electrons: null,
    occupations: null,
    variants: expandVariants(VARIANTS),
    threshold: 1e-2,
    states: 4,
    ...change,
  };
  return runVerification(set, request, ctx);
}

describe('truncation in verify', () => {
  it('puts bound, perturbation theory and random determinants side by side', async () => {
    const found = await evidence('test/fixtures/sets/oh_sto3g', {});
    expect(Object.keys(found.truncation)).toEqual(VARIANTS.split(','));
    for (const [name, view] of Object.entries(found.truncation)) {
      const shift = found.spectrum.variants[name]![0]! - found.spectrum.exact[0]!;
      expect(Math.abs(view.firstOrder + view.secondOrder - shift)).toBeLessThan(0.5 * Math.abs(shift) + 1e-7);
      expect(view.oneNormBound).toBeGreaterThan(Math.abs(shift));
    }
    const own = found.checks.filter(({ name }) => name.includes(': truncation, '));
    expect(own).toHaveLength(6);
    expect(own.every(({ ok }) => ok)).toBe(true);
    const text = verifyText(found);
    expect(text).toContain('What truncation changes, in Eh:');
    expect(text).toMatch(/first order +\S+ +\S+ +\S+ +reference determinant/);
  });

  it('says nothing of it where nothing is dropped', async () => {
    const found = await evidence('test/fixtures/sets/oh_sto3g', { threshold: 0 });
    expect(found.truncation).toEqual({});
    expect(found.checks.some(({ name }) => name.includes('truncat'))).toBe(false);
    expect(verifyText(found)).not.toContain('What truncation changes');
  });

  it('shows in a window what truncating all orbitals does there', async () => {
    const found = await evidence('app/demo/carbonyl', {
      window: { orbitals: [3, 4, 5, 6], electrons: null },
    });
    const own = found.checks.filter(({ name }) => name.includes('seen in the window'));
    // The two shifts share their factors.
    expect(own.map(({ name }) => name.split(':')[0])).toEqual([
      VARIANTS.split(',')[0],
      VARIANTS.split(',')[2],
    ]);
    for (const { ok, value, tolerance } of own) {
      expect(ok).toBe(true);
      expect(value).toBeGreaterThan(1e-9);
      expect(tolerance).toBeLessThan(0.011);
    }
  });
});

import { describe, expect, it } from 'vitest';
import { hypercontract, hypercontractedHamiltonian } from '../../core/factor';
import { buildHamiltonian, restrictToWindow, type SpatialHamiltonian } from '../../core/hamiltonian';
import { inlineContext } from '../../core/job';
import { exactSpectrum, referenceDeterminant, secondOrder } from '../../core/verify';
import { findSet, loadSet } from './data-set';

/** What the fit means for energies, judged by exact diagonalisation and by second order of H itself. */

const context = inlineContext();
const small = findSet('ch2o_sto3g_8o');
const medium = findSet('ch2o_631g_20o');

async function spinFree(folder: string) {
  const set = await loadSet(folder);
  if (set.kind !== 'spatial') throw new TypeError('a set over spatial orbitals is needed');
  const h = buildHamiltonian(set, { terms: ['sf'] }) as SpatialHamiltonian;
  return { h, occupations: set.occupations };
}

describe.skipIf(!small)('hypercontracted formaldehyde, 8 orbitals', () => {
  it('keeps the lowest levels to 1 mEh, and to 0.05 mEh with a smaller residual', async () => {
    const { h, occupations } = await spinFree(small!);
    const exact = await exactSpectrum(h, { states: 4 }, context);
    const lambdas: number[] = [];
    for (const [residualTarget, error] of [
      [5e-3, 1e-3],
      [5e-4, 5e-5],
    ] as const) {
      const fit = await hypercontract(h, { occupations, residualTarget }, context);
      expect(fit.notes).toEqual([]);
      const kept = await exactSpectrum(hypercontractedHamiltonian(h, fit.block, fit), { states: 4 }, context);
      for (const [i, level] of exact.values.entries()) {
        expect(Math.abs(kept.values[i]! - level)).toBeLessThan(error);
        expect(Math.abs(kept.values[i]! - level)).toBeLessThan(fit.residual.oneNormBound);
      }
      lambdas.push(fit.lambda.total);
    }
    // Median shifts of double factorisation: 7.73 Eh of the design page, whose factors are exact.
    expect(lambdas[0]).toBeLessThan(7.73);
    expect(lambdas[1]).toBeGreaterThan(lambdas[0]!);
  });
});

describe.skipIf(!medium)('hypercontracted formaldehyde, 20 orbitals', () => {
  it('has λ below 32 Eh with reference, second order and a window level to 1 mEh', async () => {
    const { h, occupations } = await spinFree(medium!);
    const fit = await hypercontract(h, { occupations, residualTarget: 0.02, steps: 600 }, context);
    expect(fit.block.count).toBe(100);
    // Median shifts give 40.6 Eh with all spin-dependent terms, which are below 1 Eh.
    expect(fit.lambda.total).toBeLessThan(32);
    const kept = hypercontractedHamiltonian(h, fit.block, fit);
    const occupied = referenceDeterminant(occupations, h.electrons);
    const exact = await secondOrder(h, occupied, null, context);
    const truncated = await secondOrder(kept, occupied, exact, context);
    expect(truncated.reference).toBeCloseTo(exact.reference, 8);
    expect(Math.abs(truncated.correlation - exact.correlation)).toBeLessThan(1e-3);
    const window = { orbitals: [3, 4, 5, 6, 7, 8], electrons: 6, occupations };
    const [levels, fitted] = await Promise.all(
      [h, kept].map((x) => exactSpectrum(restrictToWindow(x, window), { states: 1 }, context)),
    );
    expect(Math.abs(fitted!.values[0]! - levels!.values[0]!)).toBeLessThan(1e-3);
  });
});

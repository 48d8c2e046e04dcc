import { describe, expect, it } from 'vitest';
import { loadInputs, openInputs } from '../../../app/cli/inputs';
import { parseVariant } from '../../../core/encode';
import { inlineContext } from '../../../core/job';
import { Encodings } from '../../../core/plan/encodings';
import { hamiltonianOf, occupationsOf } from '../../../core/plan/system';
import { fromHartree, toHartree } from '../../../core/units';
import { exactSpectrum } from '../../../core/verify';

const ctx = inlineContext();
const MIXED = parseVariant('mixed/separate/swap-layers/optimised/clean');
const UNIFORM = parseVariant('compressed/separate/swap-layers/optimised/clean');

async function encodings(set: string, wavenumbers: number) {
  const inputs = await openInputs({ files: [`test/fixtures/sets/${set}`], recipe: null }, ctx);
  const loaded = await loadInputs(inputs, 'all', 'throw', ctx);
  const request = {
    terms: ['sf', 'so1', 'somf', 'so2'] as const,
    electrons: null,
    occupations: null,
  };
  const h = hamiltonianOf(loaded, request);
  const tolerance = toHartree(wavenumbers, 'cm-1');
  return { h, found: new Encodings(h, 0, occupationsOf(loaded, request), tolerance) };
}

describe('spin-dependent parts thinned by what they mean for low states', () => {
  it('the hydroxyl radical keeps its fine structure within the tolerance', async () => {
    const { h, found } = await encodings('oh_sto3g', 0.2);
    const exact = await exactSpectrum(h, { states: 4 }, ctx);
    const uniform = await found.of(UNIFORM, ctx);
    const mixed = await found.of(MIXED, ctx);
    expect(mixed.shape.rows).toBeLessThanOrEqual(0.75 * uniform.shape.rows);
    expect(mixed.notes?.some((note) => note.includes('mean field of the rest kept'))).toBe(true);
    // Full configuration interaction of all orbitals, which the choice of rows did not look at.
    const left = await exactSpectrum(mixed.rebuild(), { states: 4 }, ctx);
    const splitting = (values: Float64Array) => fromHartree(values[2]! - values[0]!, 'cm-1');
    expect(splitting(exact.values)).toBeGreaterThan(100);
    expect(Math.abs(splitting(left.values) - splitting(exact.values))).toBeLessThan(0.2);
    expect(Math.abs(left.values[0]! - exact.values[0]!)).toBeLessThan(mixed.residual.oneNormBound);
  });

  it('formaldehyde: fewer rows the more may change, all of them where nothing may', async () => {
    const rows: number[] = [];
    for (const tolerance of [0, 0.01, 0.2, 50]) {
      const { found } = await encodings('ch2o_sto3g_8o', tolerance);
      rows.push((await found.of(MIXED, ctx)).shape.rows);
    }
    const { found } = await encodings('ch2o_sto3g_8o', 0);
    expect(rows[0]).toBe((await found.of(UNIFORM, ctx)).shape.rows);
    expect(rows[1]).toBeLessThan(rows[0]!);
    expect(rows[2]).toBeLessThan(rows[1]!);
    expect(rows[3]).toBeLessThan(rows[2]!);
  });
});

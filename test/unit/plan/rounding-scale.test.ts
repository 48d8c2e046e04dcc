import { describe, expect, it } from 'vitest';
import { loadInputs, openInputs } from '../../../app/cli/inputs';
import { encodedProgram, tripletTables } from '../../../core/circuit';
import { parseVariant } from '../../../core/encode';
import type { SelectableTerm } from '../../../core/integrals';
import { inlineContext } from '../../../core/job';
import { costOf, targetOf, toleranceOf } from '../../../core/plan/costing';
import { Encodings } from '../../../core/plan/encodings';
import { hamiltonianOf, occupationsOf } from '../../../core/plan/system';
import { fromHartree } from '../../../core/units';
import { exactSpectrum, levelShifts, windowOfProgram } from '../../../core/verify';

const ctx = inlineContext();
const MIXED = parseVariant('mixed/separate/swap-layers/optimised/clean');

/** The hydroxyl radical in all its orbitals, and its mixed encoding rounded to the bits chosen for 5 cm⁻¹. */
async function hydroxyl(terms: readonly SelectableTerm[]) {
  const inputs = await openInputs({ files: ['test/fixtures/sets/oh_sto3g'], recipe: null }, ctx);
  const set = await loadInputs(inputs, 'all', 'throw', ctx);
  const request = {
    terms,
    electrons: null,
    occupations: null,
    target: { value: 5, unit: 'cm-1', meaning: 'level' } as const,
    threshold: 0,
    bits: 'auto' as const,
    overlaps: [1],
    qubitsMax: null,
  };
  const h = hamiltonianOf(set, request);
  if (h.kind !== 'spatial') throw new Error('spatial orbitals expected');
  const occupations = occupationsOf(set, request)!;
  const target = targetOf(request);
  const encoding = await new Encodings(h, 0, occupations, toleranceOf(target)).of(MIXED, ctx);
  const { bits, budget, bitChoices } = costOf(encoding, MIXED, target, request);
  const program = encoding.program!();
  const tables = tripletTables(program, {
    keep: bits.keep,
    innerKeep: bits.keep,
    rotation: bits.rotation,
  });
  const all = { orbitals: [...occupations.keys()], electrons: h.electrons, occupations };
  return {
    given: await windowOfProgram(program, all, ctx),
    rounded: await windowOfProgram(encodedProgram(program, tables), all, ctx),
    budget,
    bitChoices,
  };
}

describe('bits chosen from what rounding does to low states', () => {
  it('move the levels of the whole molecule by no more than the budget', async () => {
    const { given, rounded, budget, bitChoices } = await hydroxyl(['sf', 'so1', 'somf', 'so2']);
    expect(bitChoices.rotation.chosen).toBe('measured plus a guard bit');
    expect(bitChoices.rotation.used).toBeLessThan(bitChoices.rotation.rigorous!);
    const shifts = await levelShifts(given, rounded, 8, ctx);
    expect(shifts.largest).toBeGreaterThan(0);
    expect(shifts.largest).toBeLessThan(budget.rotation + budget.prepare);
  });

  it('leave the orbital degeneracy of its ²Π term', async () => {
    const { given, rounded, budget } = await hydroxyl(['sf']);
    const widthOf = async (h: typeof given) => {
      const { values } = await exactSpectrum(h, { states: 4 }, ctx);
      return values[3]! - values[0]!;
    };
    expect(await widthOf(given)).toBeLessThan(1e-9);
    // Rounding breaks the symmetry of space, by far less than the fine structure of 102 cm⁻¹.
    const width = await widthOf(rounded);
    expect(width).toBeLessThan(budget.rotation + budget.prepare);
    expect(fromHartree(width, 'cm-1')).toBeLessThan(0.3);
  });
});

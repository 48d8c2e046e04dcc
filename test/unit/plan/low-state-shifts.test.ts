import { describe, expect, it } from 'vitest';
import { loadInputs, openInputs } from '../../../app/cli/inputs';
import { expandVariants } from '../../../core/encode';
import { inlineContext } from '../../../core/job';
import { runComparison } from '../../../core/plan';
import { fromHartree } from '../../../core/units';

const ctx = inlineContext();
const SPARSE = 'sparse/-/index/none/clean';
const TRIPLET = 'triplet/separate/swap-layers/none/clean';
const MIXED = 'mixed/separate/swap-layers/optimised/clean';

async function compared(variants: string, threshold: number, terms = ['sf', 'so1', 'somf', 'so2'] as const) {
  const inputs = await openInputs({ files: ['test/fixtures/sets/oh_sto3g'], recipe: null }, ctx);
  const set = await loadInputs(inputs, 'all', 'throw', ctx);
  const { outcomes } = await runComparison(
    set,
    {
      terms: [...terms],
      electrons: null,
      occupations: null,
      target: { value: 5, unit: 'cm-1', meaning: 'level' },
      threshold,
      bits: 'auto',
      overlaps: [1],
      qubitsMax: null,
      variants: expandVariants(variants),
    },
    ctx,
  );
  return outcomes.map((outcome) => {
    if (outcome.status !== 'done') throw new Error(outcome.status);
    const { estimate, notes = [] } = outcome;
    return { ...estimate.residual, warns: notes.some((note) => note.includes('moves low levels against')) };
  });
}

describe('what truncation does to low states', () => {
  it('is nothing where nothing was dropped', async () => {
    const [found] = await compared(SPARSE, 0);
    expect(found).toMatchObject({ lowStates: 0, warns: false });
  });

  it('is said where a threshold takes spin–orbit coupling away that the energy estimate does not miss', async () => {
    const [found] = await compared(SPARSE, 0.02);
    // Two-electron spin–orbit coupling takes some 7 cm⁻¹ off this splitting even where its mean field is kept.
    expect(fromHartree(found!.lowStates!, 'cm-1')).toBeGreaterThan(5);
    expect(found!.warns).toBe(true);
  });

  it('stays in the budget of a mixed encoding where the threshold leaves the Coulomb part', async () => {
    const [mixed] = await compared(MIXED, 1e-7);
    expect(mixed!.lowStates).toBeGreaterThan(0);
    expect(fromHartree(mixed!.lowStates!, 'cm-1')).toBeLessThan(0.2);
    expect(mixed!.warns).toBe(false);
    const [coarse] = await compared(TRIPLET, 5e-4);
    expect(coarse!.lowStates!).toBeGreaterThan(mixed!.lowStates!);
    expect(coarse!.warns).toBe(true);
  });
});

describe('a single orbital', () => {
  it('has no weight left after its shift, in every form', async () => {
    const inputs = await openInputs({ files: ['test/fixtures/sets/oh_sto3g'], recipe: null }, ctx);
    const set = await loadInputs(inputs, 'all', 'throw', ctx);
    const forms = ['triplet', 'compressed', 'mixed', 'hypercontracted'];
    const { outcomes } = await runComparison(
      set,
      {
        terms: ['sf', 'so1', 'somf', 'so2'],
        electrons: null,
        occupations: null,
        window: { orbitals: [2], electrons: null },
        target: { value: 5, unit: 'cm-1', meaning: 'level' },
        threshold: 0,
        bits: 'auto',
        overlaps: [1],
        qubitsMax: null,
        variants: expandVariants(forms.map((form) => `${form}/separate/index/optimised/clean`).join(',')),
      },
      ctx,
    );
    expect(outcomes.map(({ status }) => status)).toEqual(forms.map(() => 'done'));
    for (const outcome of outcomes) {
      if (outcome.status === 'done') expect(outcome.estimate.lambda.total).toBeLessThan(1e-12);
    }
  });
});

import { expect, it } from 'vitest';
import { expandVariants } from '../../../core/encode';
import { inlineContext } from '../../../core/job';
import { runVerification } from '../../../core/plan';
import { findSet, loadSet } from '../../published/data-set';

it('proves the circuits of truncated sparse encodings against H, fluorine 2p⁵ with spin–spin', async () => {
  const evidence = await runVerification(
    await loadSet(findSet('f_sto3g_2p')!),
    {
      terms: ['sf', 'so1', 'somf', 'so2', 'ss'],
      electrons: null,
      occupations: null,
      window: null,
      variants: expandVariants('sparse/*/index/none/clean'),
      threshold: 3e-3,
      states: 6,
    },
    inlineContext(),
  );
  const failed = evidence.checks.filter(({ ok }) => !ok);
  expect(failed).toEqual([]);
  const ofCircuits = evidence.checks.filter(({ name }) => name.includes('emitted circuit against H'));
  expect(ofCircuits).toHaveLength(2);
  // More than rounding: what was dropped shows, and is within what it was said to be.
  for (const { value } of ofCircuits) expect(value).toBeGreaterThan(1e-5);
}, 60_000);

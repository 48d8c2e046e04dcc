import { describe, expect, it } from 'vitest';
import { parseVariant } from '../../core/encode';
import { inlineContext } from '../../core/job';
import { runComparison } from '../../core/plan';
import { countWalkStep } from '../../core/plan/circuit-count';
import { targetOf, toleranceOf } from '../../core/plan/costing';
import { Encodings } from '../../core/plan/encodings';
import { hamiltonianOf, occupationsOf } from '../../core/plan/system';
import { findSet, loadSet } from './data-set';

const VARIANTS = [
  'triplet/joint/index/median/clean',
  'triplet/joint/swap-layers/median/clean',
  'triplet/separate/index/none/plain',
  'triplet/separate/swap-layers/median/clean',
  'triplet/separate/swap-layers/median/dirty',
  'spinor/joint/index/median/clean',
  'spinor/separate/index/median/clean',
  'spinor/separate/index/none/plain',
  'spinor/separate/index/median/dirty',
  'hypercontracted/separate/swap-layers/optimised/clean',
  'hypercontracted/separate/index/none/dirty',
  'sparse/-/index/none/clean',
  'sparse/-/index/none/dirty',
  'sparse/joint/index/none/clean',
  'sparse/joint/index/none/plain',
  'sparse/joint/index/none/dirty',
];

describe.each(['oh_sto3g', 'ch2o_sto3g_8o', 'ch2o_631g_20o'])('%s', (name) => {
  const folder = findSet(name);
  it.skipIf(folder === null)(
    'counts in the emitted walk step what compare estimates, and its wires',
    async () => {
      const context = inlineContext();
      const set = await loadSet(folder!);
      const request = {
        terms: ['sf', 'so1', 'somf', 'so2'],
        electrons: null,
        occupations: null,
        window: null,
        target: { value: 5, unit: 'cm-1', meaning: 'level' },
        variants: VARIANTS.filter(
          (v) => name !== 'ch2o_631g_20o' || /^(triplet|spinor).separate|^sparse/.test(v),
        ).map(parseVariant),
        threshold: 0,
        bits: 'auto',
        overlaps: [1],
        qubitsMax: null,
      } as const;
      const { comparison } = await runComparison(set, request, context);
      expect(comparison.variants).toHaveLength(request.variants.length);
      const tolerance = toleranceOf(targetOf(request));
      const occupations = occupationsOf(set, request);
      const encodings = new Encodings(hamiltonianOf(set, request), 0, occupations, tolerance);
      for (const estimate of comparison.variants) {
        const variant = parseVariant(estimate.name);
        const encoding = await encodings.of(variant, context);
        const counted = await countWalkStep(encoding, variant, estimate, null, context);
        expect(counted.step.parts).toEqual(estimate.step.parts);
        expect(counted.step.toffoli).toBe(estimate.step.toffoli);
        expect(counted.step.t).toBe(estimate.step.t);
        expect(counted.wires).toBe(estimate.logicalQubits);
      }
    },
  );
});

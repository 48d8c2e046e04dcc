import { describe, expect, it } from 'vitest';
import { product, toggled, USUAL, valuesIn, whyNot } from '../../../../renderer/state/axes';

describe('axes', () => {
  it('offers sound combinations only', () => {
    for (const name of product({})) expect(whyNot(name)).toBeNull();
    expect(whyNot('sparse/-/swap-layers/none/clean')).toContain('swap layers');
    expect(product({ factorisation: ['sparse'], lookup: ['clean'] })).toEqual([
      'sparse/joint/index/none/clean',
      'sparse/joint/index/optimised/clean',
      'sparse/-/index/none/clean',
      'sparse/-/index/optimised/clean',
    ]);
    const medians = product({ factorisation: ['sparse'], shift: ['median'], lookup: ['clean'] });
    expect(medians).toEqual(['sparse/joint/index/none/clean', 'sparse/-/index/none/clean']);
    for (const name of [
      'triplet/joint/index',
      'spinor/joint/index',
      'spinor/separate/index',
      'sparse/-/index',
    ]) {
      expect(product({})).toContain(`${name}/optimised/clean`);
    }
  });

  it('adds the combinations of a word with the words in use, and takes them away again', () => {
    const dirty = toggled(USUAL, 'lookup', 'dirty');
    expect(dirty.length).toBeGreaterThan(USUAL.length);
    expect(dirty.slice(0, USUAL.length)).toEqual(USUAL);
    expect(dirty).toContain('sparse/-/index/none/dirty');
    expect(toggled(dirty, 'lookup', 'dirty')).toEqual(USUAL);
  });

  it('knows which words are in use', () => {
    expect(valuesIn(USUAL, 'shift')).toEqual(['none', 'median', 'optimised']);
    expect(valuesIn(toggled(USUAL, 'factorisation', 'sparse'), 'factorisation')).toEqual([
      'triplet',
      'mixed',
      'spinor',
    ]);
  });

  it('gives compressed factors the shift that they come with', () => {
    expect(toggled(USUAL, 'factorisation', 'compressed').slice(USUAL.length)).toEqual([
      'compressed/joint/index/optimised/clean',
      'compressed/joint/swap-layers/optimised/clean',
      'compressed/separate/index/optimised/clean',
      'compressed/separate/swap-layers/optimised/clean',
    ]);
  });

  it('gives a hypercontracted charge part no medians, and separate grouping', () => {
    expect(product({ factorisation: ['hypercontracted'], lookup: ['clean'] })).toEqual([
      'hypercontracted/separate/index/none/clean',
      'hypercontracted/separate/index/optimised/clean',
      'hypercontracted/separate/swap-layers/none/clean',
      'hypercontracted/separate/swap-layers/optimised/clean',
    ]);
  });

  it('finds its way back from nothing', () => {
    const back = toggled([], 'factorisation', 'sparse');
    expect(back).toContain('sparse/-/index/none/clean');
    expect(back.every((n) => /^sparse\/(-|joint)\/index\//.test(n))).toBe(true);
  });
});

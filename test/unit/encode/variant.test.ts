import { describe, expect, it } from 'vitest';
import { DEFAULT_VARIANTS, expandVariants, formatVariant, parseVariant } from '../../../core/encode';
import { InputError } from '../../../core/job';

const names = (list: string) => expandVariants(list).map(formatVariant);

describe('variant names', () => {
  it('read back as they are written', () => {
    for (const variant of DEFAULT_VARIANTS) expect(parseVariant(formatVariant(variant))).toEqual(variant);
  });

  it('default to the seven of the design and a mixed one', () => {
    expect(DEFAULT_VARIANTS.map(formatVariant)).toEqual([
      'triplet/joint/index/median/clean',
      'triplet/joint/swap-layers/median/clean',
      'triplet/separate/index/median/clean',
      'triplet/separate/swap-layers/median/clean',
      'triplet/separate/swap-layers/none/clean',
      'spinor/separate/index/median/clean',
      'sparse/-/index/optimised/clean',
      'mixed/separate/swap-layers/optimised/clean',
    ]);
  });

  it('expand * over the values that make sense together', () => {
    expect(names('triplet/joint/*/median/clean')).toEqual([
      'triplet/joint/index/median/clean',
      'triplet/joint/swap-layers/median/clean',
    ]);
    expect(names('*/*/swap-layers/none/plain')).toEqual([
      'triplet/joint/swap-layers/none/plain',
      'triplet/separate/swap-layers/none/plain',
      'hypercontracted/separate/swap-layers/none/plain',
    ]);
    expect(names('sparse/*/*/*/*')).toEqual(
      ['joint', '-'].flatMap((grouping) =>
        ['none', 'optimised'].flatMap((shift) =>
          ['plain', 'clean', 'dirty'].map((lookup) => `sparse/${grouping}/index/${shift}/${lookup}`),
        ),
      ),
    );
    // 3 look-ups × (triplet 2 groupings × 2 spins × 3 shifts, spinor half of that, 4 sparse, 4 compressed, 2 mixed,
    // hypercontracted 2 spins × 2 shifts).
    expect(names('*/*/*/*/*')).toHaveLength(3 * (12 + 6 + 4 + 4 + 2 + 4));
  });

  it('come once each, in the order of first mention', () => {
    expect(
      names('sparse/-/index/none/clean, triplet/*/index/none/clean ,triplet/joint/index/none/clean'),
    ).toEqual([
      'sparse/-/index/none/clean',
      'triplet/joint/index/none/clean',
      'triplet/separate/index/none/clean',
    ]);
  });

  it.each([
    ['triplet/joint/index/median', 'five parts'],
    ['triplets/joint/index/median/clean', 'one of sparse, triplet'],
    ['triplet/-/index/median/clean', 'joint or separate'],
    ['sparse/separate/index/none/clean', 'no factors to keep apart'],
    ['sparse/-/swap-layers/none/clean', 'swap layers with the sparse form'],
    ['sparse/-/index/median/clean', 'acts on the eigenvalues of factors'],
    ['spinor/joint/swap-layers/none/clean', 'mix both spins'],
    ['hypercontracted/joint/index/none/clean', 'hypercontracted charge part'],
    ['hypercontracted/separate/index/median/clean', 'hypercontracted charge part'],
    ['compressed/joint/index/none/clean', 'optimised together with their shifts'],
    ['compressed/separate/index/median/clean', 'optimised together with their shifts'],
  ])('%s is refused with the reason', (name, reason) => {
    for (const read of [parseVariant, expandVariants]) {
      expect(() => read(name)).toThrow(InputError);
      expect(() => read(name)).toThrow(reason);
    }
  });

  it('a pattern that leaves nothing is refused, and so is * for one variant', () => {
    expect(() => expandVariants('sparse/separate/*/*/*')).toThrow('no factors to keep apart');
    expect(() => expandVariants(' , ')).toThrow('no name');
    expect(() => parseVariant('triplet/joint/*/none/clean')).toThrow('one value for each axis');
  });
});

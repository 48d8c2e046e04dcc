import { expect, it } from 'vitest';
import { REFERENCE_LEVELS, referenceEigenvalues } from '../../../core/verify';

const document = { levels: { spinfree: { eigenvalues: [-2, -1] }, so1_bare: { eigenvalues: [-2.5, 'x'] } } };

it('finds the level by its terms, in any order', () => {
  expect(referenceEigenvalues(document, ['sf'])).toEqual([-2, -1]);
  const all = { levels: { so1_so2: { eigenvalues: [1] } } };
  expect(referenceEigenvalues(all, ['so2', 'somf', 'so1', 'sf'])).toEqual([1]);
});

it('is null where the document has no such level, or is something else', () => {
  expect(referenceEigenvalues(document, ['sf', 'so1'])).toBeNull();
  expect(referenceEigenvalues(document, ['sf', 'so2'])).toBeNull();
  expect(referenceEigenvalues(document, ['sf', 'so1', 'somf'])).toBeNull();
  for (const other of [null, 3, 'levels', [], { levels: null }]) {
    expect(referenceEigenvalues(other, ['sf'])).toBeNull();
  }
});

it('levels are cumulative', () => {
  for (const [i, level] of REFERENCE_LEVELS.entries()) {
    expect(level.terms).toHaveLength(i + 1);
    if (i > 0) expect(level.terms.slice(0, i)).toEqual(REFERENCE_LEVELS[i - 1]!.terms);
  }
});

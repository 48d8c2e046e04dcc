import { expect, it } from 'vitest';
import { Remaining } from '../../../../renderer/state/remaining';

it('says nothing in the first two seconds, then names steps, and does not count what was no work', () => {
  let now = 0;
  const remaining = new Remaining(7, () => now);
  remaining.dropped();
  remaining.dropped();
  now = 1_500;
  remaining.finished();
  expect(remaining.words()).toBe('');
  now = 10_000;
  // One of five pieces in 10 s: 40 s for the other four.
  expect(remaining.words()).toBe('About 40 s left');
  now = 100_000;
  remaining.finished();
  // 50 s a piece, three left: 150 s, the next step is 3 min.
  expect(remaining.words()).toBe('About 3 min left');
});

it('says nothing before a piece is finished', () => {
  const remaining = new Remaining(3, () => 60_000);
  expect(remaining.words()).toBe('');
});

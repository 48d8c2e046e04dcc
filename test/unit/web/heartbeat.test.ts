import { afterEach, beforeEach, expect, it, vi } from 'vitest';
import { Heartbeat } from '../../../app/web/heartbeat';

beforeEach(() => void vi.useFakeTimers());
afterEach(() => void vi.useRealTimers());

it('ends ten seconds after the last beat', () => {
  const silent = vi.fn();
  const heartbeat = new Heartbeat(silent);
  heartbeat.beat();
  vi.advanceTimersByTime(9_000);
  heartbeat.beat();
  vi.advanceTimersByTime(9_900);
  expect(silent).not.toHaveBeenCalled();
  vi.advanceTimersByTime(200);
  expect(silent).toHaveBeenCalledTimes(1);
  vi.advanceTimersByTime(60_000);
  expect(silent).toHaveBeenCalledTimes(1);
});

it('gives a browser a minute to start', () => {
  const silent = vi.fn();
  new Heartbeat(silent);
  vi.advanceTimersByTime(59_000);
  expect(silent).not.toHaveBeenCalled();
  vi.advanceTimersByTime(1_000);
  expect(silent).toHaveBeenCalledTimes(1);
});

it('does not take the sleep of the computer for silence', () => {
  const silent = vi.fn();
  const heartbeat = new Heartbeat(silent);
  heartbeat.beat();
  // Timers stand still while a computer sleeps, and its clock goes on.
  vi.setSystemTime(Date.now() + 3_600_000);
  vi.advanceTimersByTime(2_000);
  expect(silent).not.toHaveBeenCalled();
});

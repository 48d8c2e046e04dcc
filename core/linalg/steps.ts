import type { JobContext } from '../job';
import { type Arena, withArena } from './kernels/arena';

/**
 * A computation in short steps (some 10 ms each). Every yield is the work done since the last one, in units of the
 * algorithm's own plan, so that one text serves callers who wait and callers who show progress.
 */
export type Steps<T> = Generator<number, T>;

/** Runs to the end at once. */
export function finish<T>(steps: Steps<T>): T {
  for (;;) {
    const step = steps.next();
    if (step.done) return step.value;
  }
}

/** Runs at once on a lent memory. */
export function runNow<T>(start: (arena: Arena) => Steps<T>): T {
  return withArena((arena) => finish(start(arena)));
}

/** Runs on a lent memory with progress 0…total in `stage` and a checkpoint after each step. */
export function runAsJob<T>(
  start: (arena: Arena) => Steps<T>,
  stage: string,
  total: number,
  context: JobContext,
): Promise<T> {
  return withArena(async (arena) => {
    const steps = start(arena);
    let done = 0;
    context.report(stage, 0, total);
    for (;;) {
      const step = steps.next();
      if (step.done) {
        context.report(stage, total, total);
        return step.value;
      }
      done = Math.min(total, done + step.value);
      context.report(stage, done, total);
      await context.checkpoint();
    }
  });
}

import { Cancelled, inlineContext, type JobContext } from '../../core/job';
import type { TaskPool } from './pool';
import type { Progress } from './progress';

/** Between two reports of one stage, so that reporting costs nothing. */
const REPORT_MS = 80;

/**
 * The job contract inside a worker thread. A stop needs no checkpoint where the main thread just ends this one; a job with
 * something to save is asked through `stop`. With a pool `map` runs on it, else in place.
 */
export function workerContext(
  seed: number,
  pool: TaskPool | null,
  stop: SharedArrayBuffer | null,
  onProgress: (progress: Progress) => void,
): JobContext {
  const asked = stop ? new Int32Array(stop) : null;
  let lastStage = '';
  let lastTime = 0;
  const report = (stage: string, done: number, total: number | null): void => {
    const now = performance.now();
    if (stage === lastStage && now - lastTime < REPORT_MS && done !== total) return;
    lastStage = stage;
    lastTime = now;
    onProgress({ stage, done, total });
  };
  const checkpoint = async (): Promise<void> => {
    if (asked && Atomics.load(asked, 0) !== 0) throw new Cancelled();
  };
  // A stage that counts steps of its own is not counted in pieces of a step.
  let ownTotal: number | null = null;
  return {
    seed,
    report(stage, done, total) {
      ownTotal = total;
      report(stage, done, total);
    },
    checkpoint,
    async map(task, inputs) {
      if (pool && inputs.length > 1) {
        return pool.map(task, inputs, (done) => {
          if (ownTotal === null || ownTotal === inputs.length) report(lastStage, done, inputs.length);
        });
      }
      const outputs = [];
      for (const input of inputs) {
        await checkpoint();
        outputs.push(await task.run(input, inlineContext(seed)));
      }
      return outputs;
    },
  };
}

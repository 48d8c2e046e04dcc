import { Worker } from 'node:worker_threads';
import type { Task } from '../../core/job';
import { fromFailure, type TaskCall, type TaskReply } from './messages';

/**
 * A fixed number of workers that run named tasks. Inputs are handed out as workers fall free; outputs come back
 * in input order, so that the result does not depend on how many workers there are.
 */
export class TaskPool {
  readonly #workers: Worker[];
  readonly #seed: number;
  #nextId = 0;

  /** @param script the bundled worker, see worker.ts */
  constructor(size: number, script: URL, seed: number) {
    this.#seed = seed;
    this.#workers = Array.from({ length: size }, () => new Worker(script, { workerData: { role: 'tasks' } }));
  }

  /** Runs the task once per input. Rejects with the first failure; the others' results are then dropped. */
  map<Input, Output>(
    task: Task<Input, Output>,
    inputs: readonly Input[],
    onDone: (done: number) => void = () => {},
  ): Promise<Output[]> {
    return new Promise((resolve, reject) => {
      const outputs = new Array<Output>(inputs.length);
      const position = new Map<number, number>();
      let next = 0;
      let done = 0;
      const finish = (end: () => void): void => {
        for (const stop of stops) stop();
        end();
      };
      const stops = this.#workers.map((worker) => {
        const call = (): void => {
          if (next === inputs.length) return;
          const id = this.#nextId++;
          position.set(id, next);
          const message: TaskCall = { id, task: task.name, input: inputs[next++], seed: this.#seed };
          worker.postMessage(message);
        };
        const onMessage = (reply: TaskReply): void => {
          const at = position.get(reply.id);
          if (at === undefined) return; // left over from a map that failed
          if (reply.kind === 'failed') {
            finish(() => reject(fromFailure(reply.failure)));
            return;
          }
          outputs[at] = reply.output as Output;
          onDone(++done);
          if (done === inputs.length) finish(() => resolve(outputs));
          else call();
        };
        const onError = (error: Error): void => finish(() => reject(error));
        worker.on('message', onMessage);
        worker.on('error', onError);
        call();
        return () => {
          worker.off('message', onMessage);
          worker.off('error', onError);
        };
      });
      if (inputs.length === 0) finish(() => resolve(outputs));
    });
  }

  async close(): Promise<void> {
    await Promise.all(this.#workers.map((worker) => worker.terminate()));
  }
}

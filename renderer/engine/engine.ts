import { Cancelled, InputError } from '../../core/job';
import type { FromWorker, JobName, Jobs, ToWorker } from './protocol';

export interface RunOptions<K extends JobName> {
  readonly signal?: AbortSignal;
  readonly onProgress?: (stage: string, done: number, total: number | null) => void;
  readonly onNews?: (news: Jobs[K]['news']) => void;
}

/** Runs jobs somewhere else than on the page's own thread. */
export interface Engine {
  /**
   * @throws Cancelled once `signal` was aborted; InputError where the input is at fault; Error for a bug.
   */
  run<K extends JobName>(
    job: K,
    input: Jobs[K]['input'],
    options?: RunOptions<K>,
  ): Promise<Jobs[K]['output']>;
}

/** One worker as the engine sees it; a fake in tests. */
export interface Endpoint {
  post(message: ToWorker): void;
  terminate(): void;
}
export type Spawn = (onMessage: (message: FromWorker) => void, onError: (error: Error) => void) => Endpoint;

/** After a stop was asked for, how long the job may take to notice before its worker is replaced. */
const GRACE_MS = 150;

interface Running {
  readonly id: number;
  readonly settle: (how: () => void) => void;
  readonly resolve: (value: never) => void;
  readonly reject: (error: Error) => void;
  readonly onProgress: RunOptions<JobName>['onProgress'];
  readonly onNews: ((news: never) => void) | undefined;
}

interface Waiting {
  readonly start: () => void;
  readonly drop: () => void;
}

/** Runs one job at a time on one worker; others wait in the order they came. */
export class WorkerEngine implements Engine {
  readonly #spawn: Spawn;
  #endpoint: Endpoint | null = null;
  #running: Running | null = null;
  #queue: Waiting[] = [];
  #nextId = 1;

  constructor(spawn: Spawn) {
    this.#spawn = spawn;
  }

  run<K extends JobName>(
    job: K,
    input: Jobs[K]['input'],
    options: RunOptions<K> = {},
  ): Promise<Jobs[K]['output']> {
    const { signal } = options;
    return new Promise((resolve, reject) => {
      if (signal?.aborted) {
        reject(new Cancelled());
        return;
      }
      const waiting: Waiting = {
        start: () => {
          signal?.removeEventListener('abort', waiting.drop);
          this.#start(job, input, options, resolve, reject);
        },
        drop: () => {
          this.#queue = this.#queue.filter((w) => w !== waiting);
          reject(new Cancelled());
        },
      };
      signal?.addEventListener('abort', waiting.drop, { once: true });
      this.#queue.push(waiting);
      this.#pump();
    });
  }

  #pump(): void {
    if (!this.#running) this.#queue.shift()?.start();
  }

  #start<K extends JobName>(
    job: K,
    input: Jobs[K]['input'],
    options: RunOptions<K>,
    resolve: (value: Jobs[K]['output']) => void,
    reject: (error: Error) => void,
  ): void {
    const id = this.#nextId++;
    let timer: ReturnType<typeof setTimeout> | undefined;
    const stop = () => {
      this.#endpoint?.post({ type: 'cancel', id });
      timer = setTimeout(() => this.#replace(new Cancelled()), GRACE_MS);
    };
    options.signal?.addEventListener('abort', stop, { once: true });
    this.#running = {
      id,
      resolve,
      reject,
      onProgress: options.onProgress,
      onNews: options.onNews,
      settle: (how) => {
        clearTimeout(timer);
        options.signal?.removeEventListener('abort', stop);
        this.#running = null;
        how();
        this.#pump();
      },
    };
    this.#endpoint ??= this.#spawn(
      (message) => this.#hear(message),
      (error) => this.#replace(error),
    );
    this.#endpoint.post({ type: 'run', id, job, input });
  }

  #hear(message: FromWorker): void {
    const running = this.#running;
    // A late answer of a job that was given up is dropped.
    if (!running || running.id !== message.id) return;
    if (message.type === 'progress') {
      running.onProgress?.(message.stage, message.done, message.total);
    } else if (message.type === 'news') {
      running.onNews?.(message.news as never);
    } else if (message.type === 'result') {
      running.settle(() => running.resolve(message.value as never));
    } else {
      const { failure } = message;
      running.settle(() =>
        running.reject(
          failure.kind === 'cancelled'
            ? new Cancelled()
            : failure.kind === 'input'
              ? new InputError(failure.problem)
              : new Error(failure.message),
        ),
      );
    }
  }

  /** Ends the worker; the next job gets a new one. */
  #replace(why: Error): void {
    this.#endpoint?.terminate();
    this.#endpoint = null;
    const running = this.#running;
    running?.settle(() => running.reject(why));
  }
}

import { Cancelled, InputError, type Problem } from '../../core/job';
import type { Progress } from './progress';
import type { Request } from './request';
import type { Result } from './result';

/** An error as it crosses a worker border, where classes do not survive. */
export type Failure =
  | { readonly kind: 'input'; readonly problem: Problem }
  | { readonly kind: 'cancelled' }
  | { readonly kind: 'bug'; readonly message: string; readonly stack: string };

export function toFailure(error: unknown): Failure {
  if (error instanceof InputError) return { kind: 'input', problem: error.toProblem() };
  if (error instanceof Cancelled) return { kind: 'cancelled' };
  const { message, stack } = error instanceof Error ? error : new Error(String(error));
  return { kind: 'bug', message, stack: stack ?? message };
}

export function fromFailure(failure: Failure): Error {
  if (failure.kind === 'input') return new InputError(failure.problem);
  if (failure.kind === 'cancelled') return new Cancelled();
  const error = new Error(failure.message);
  error.stack = failure.stack;
  return error;
}

/** From a task worker to its pool. */
export type TaskReply =
  | { readonly kind: 'done'; readonly id: number; readonly output: unknown }
  | { readonly kind: 'failed'; readonly id: number; readonly failure: Failure };

/** From the pool to a task worker. */
export interface TaskCall {
  readonly id: number;
  readonly task: string;
  readonly input: unknown;
  readonly seed: number;
}

/**
 * Buffers of an output that may be handed over instead of copied: those that a typed array covers whole, so that
 * no other view of the same memory can be lost.
 */
export function transferables(value: unknown): ArrayBuffer[] {
  const found = new Set<ArrayBuffer>();
  const visit = (item: unknown): void => {
    if (ArrayBuffer.isView(item)) {
      if (item.buffer instanceof ArrayBuffer && item.byteLength === item.buffer.byteLength)
        found.add(item.buffer);
    } else if (typeof item === 'object' && item !== null) Object.values(item).forEach(visit);
  };
  visit(value);
  return [...found];
}

/** What the job's worker starts with. */
export interface JobStart {
  readonly request: Request;
  readonly seed: number;
  readonly workers: number;
  /** One number, not 0 once the job shall stop at its next checkpoint; null: the thread is ended instead. */
  readonly stop: SharedArrayBuffer | null;
}

/** From the job's worker to the main thread. */
export type JobReply =
  | { readonly kind: 'progress'; readonly progress: Progress }
  | { readonly kind: 'done'; readonly result: Result }
  | { readonly kind: 'failed'; readonly failure: Failure };

import { Cancelled, InputError, type JobContext, type Problem } from '../../core/job';
import type { Failure, FromWorker, ToWorker } from './protocol';

/** A job as the worker runs it. `tell` sends a piece of the answer before the end. */
export type Handler = (input: never, context: JobContext, tell: (news: unknown) => void) => Promise<unknown>;

/** Least time between two reports of progress: at most 20 a second. */
const REPORT_EVERY_MS = 50;
/** Longest time without letting a message in. */
const TURN_EVERY_MS = 16;

// A nested setTimeout(0) is clamped to 4 ms in a browser; a turn of a MessageChannel is not.
function makeTurn(): () => Promise<void> {
  const channel = new MessageChannel();
  const waiting: (() => void)[] = [];
  channel.port1.onmessage = () => waiting.shift()?.();
  return () =>
    new Promise((resolve) => {
      waiting.push(resolve);
      channel.port2.postMessage(0);
    });
}

function failureOf(error: unknown): Failure {
  if (error instanceof Cancelled) return { kind: 'cancelled' };
  if (error instanceof InputError) return { kind: 'input', problem: error.toProblem() };
  return { kind: 'bug', message: error instanceof Error ? error.message : String(error) };
}

/** An error as data, a bug too: the window shows what, where, expected and cure for both. */
export function problemOf(error: unknown, where: string): Problem {
  const failure = failureOf(error);
  if (failure.kind === 'input') return failure.problem;
  const found = failure.kind === 'bug' ? failure.message : 'stopped on request';
  return {
    code: 'bug',
    where,
    found,
    expected: 'no error',
    mend: 'This is a fault of the program; please report it.',
  };
}

/**
 * The worker's side of the engine.
 *
 * @param handlers - one function a job name.
 * @param send - posts a message to the page.
 * @param now - milliseconds, monotonic; replaced in tests.
 * @returns the handler for messages from the page.
 */
export function serve(
  handlers: Readonly<Record<string, Handler>>,
  send: (message: FromWorker) => void,
  now: () => number = () => performance.now(),
): (message: ToWorker) => void {
  const cancelled = new Set<number>();
  const turn = makeTurn();
  return (message) => {
    const { id } = message;
    if (message.type === 'cancel') {
      cancelled.add(id);
      return;
    }
    let turned = now();
    let reported = Number.NEGATIVE_INFINITY;
    let lastStage = '';
    const context: JobContext = {
      seed: (message.input as { ask?: { seed?: number } }).ask?.seed ?? 1,
      report(stage, done, total) {
        const time = now();
        if (stage === lastStage && time - reported < REPORT_EVERY_MS) return;
        lastStage = stage;
        reported = time;
        send({ type: 'progress', id, stage, done, total });
      },
      async checkpoint() {
        if (now() - turned >= TURN_EVERY_MS) {
          await turn();
          turned = now();
        }
        if (cancelled.has(id)) throw new Cancelled();
      },
      async map(task, inputs) {
        const outputs = [];
        for (const each of inputs) outputs.push(await task.run(each, context));
        return outputs;
      },
    };
    const handler = handlers[message.job];
    const run = handler
      ? handler(message.input as never, context, (news) => send({ type: 'news', id, news }))
      : Promise.reject(new Error(`no job named ${message.job}`));
    run
      .then(
        (value) => send({ type: 'result', id, value }),
        (error: unknown) => send({ type: 'failure', id, failure: failureOf(error) }),
      )
      .finally(() => cancelled.delete(id));
  };
}

import { type MessagePort, parentPort, workerData } from 'node:worker_threads';
import { inlineContext } from '../../core/job';
import { findTask } from '../../core/plan';
import { workerContext } from './context';
import { answer } from './jobs';
import {
  type JobReply,
  type JobStart,
  type TaskCall,
  type TaskReply,
  toFailure,
  transferables,
} from './messages';
import { TaskPool } from './pool';

/**
 * Entry of every worker thread. One runs the whole job, so that the main thread always hears Ctrl-C; with more
 * than one core asked for, that one owns a pool of others which run the job's parallel pieces.
 */
type Role = { readonly role: 'job'; readonly start: JobStart } | { readonly role: 'tasks' };

const port = parentPort;
if (!port) throw new Error('worker.ts runs in a worker thread only');
const given = workerData as Role;
if (given.role === 'job') await runJob(port, given.start);
else serveTasks(port);

async function runJob(to: MessagePort, { request, seed, workers, stop }: JobStart): Promise<void> {
  const send = (reply: JobReply): void => to.postMessage(reply);
  const pool = workers > 1 ? new TaskPool(workers, new URL(import.meta.url), seed) : null;
  try {
    const context = workerContext(seed, pool, stop, (progress) => send({ kind: 'progress', progress }));
    send({ kind: 'done', result: await answer(request, context) });
  } catch (error) {
    send({ kind: 'failed', failure: toFailure(error) });
  } finally {
    await pool?.close();
  }
}

function serveTasks(from: MessagePort): void {
  from.on('message', async ({ id, task, input, seed }: TaskCall) => {
    try {
      const output = await findTask(task).run(input, inlineContext(seed));
      const reply: TaskReply = { kind: 'done', id, output };
      from.postMessage(reply, transferables(output));
    } catch (error) {
      const reply: TaskReply = { kind: 'failed', id, failure: toFailure(error) };
      from.postMessage(reply);
    }
  });
}

import { Worker } from 'node:worker_threads';
import { fromFailure, type JobReply, type JobStart } from './messages';
import type { Progress } from './progress';
import type { Result } from './result';

/** The bundler puts the worker beside the command line's own file. */
const SCRIPT = new URL('./worker.js', import.meta.url);

/** Runs one request in a thread of its own and returns its result. */
export async function runInThread(
  start: JobStart,
  onProgress: (progress: Progress) => void,
): Promise<Result> {
  const worker = new Worker(SCRIPT, { workerData: { role: 'job', start } });
  try {
    return await new Promise<Result>((resolve, reject) => {
      worker.on('message', (reply: JobReply) => {
        if (reply.kind === 'progress') onProgress(reply.progress);
        else if (reply.kind === 'done') resolve(reply.result);
        else reject(fromFailure(reply.failure));
      });
      worker.on('error', reject);
      worker.on('exit', (code) => reject(new Error(`the job's thread ended with status ${code}`)));
    });
  } finally {
    await worker.terminate();
  }
}

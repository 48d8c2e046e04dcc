import type { Spawn } from './engine';
import type { FromWorker } from './protocol';

/** A module worker that runs core. */
export const spawnWorker: Spawn = (onMessage, onError) => {
  // The bundler recognises only this literal shape.
  const worker = new Worker(new URL('./worker.ts', import.meta.url), { type: 'module' });
  worker.onmessage = (event: MessageEvent<FromWorker>) => onMessage(event.data);
  worker.onerror = (event) => onError(new Error(event.message || 'the worker did not start'));
  return { post: (message) => worker.postMessage(message), terminate: () => worker.terminate() };
};

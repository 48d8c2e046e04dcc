import { jobs } from './jobs';
import type { ToWorker } from './protocol';
import { type Handler, serve } from './serve';

declare const self: DedicatedWorkerGlobalScope;

const handle = serve(jobs as unknown as Readonly<Record<string, Handler>>, (message) =>
  self.postMessage(message),
);
self.onmessage = (event: MessageEvent<ToWorker>) => handle(event.data);

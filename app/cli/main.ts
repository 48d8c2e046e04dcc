#!/usr/bin/env node
import { fileURLToPath } from 'node:url';
import { Cancelled } from '../../core/job';
import { runInThread } from './job-thread';
import { removePending } from './output';
import { printResult } from './print';
import { type Call, parseCall } from './program';
import { ProgressLine } from './progress';
import { DONE, INTERRUPTED, reportError } from './status';

/** Beside the bundle, dist/node/cli.js, in a checkout and in an installed app alike. */
const DEMO_FOLDER = fileURLToPath(new URL('../../app/demo/carbonyl', import.meta.url));

process.stdout.on('error', (error: NodeJS.ErrnoException) => {
  if (error.code === 'EPIPE') process.exit(DONE); // the reader, such as `head`, has seen enough
  throw error;
});
process.exitCode = await main(process.argv.slice(2));

async function main(args: readonly string[]): Promise<number> {
  let call: Call | null = null;
  let line: ProgressLine | null = null;
  let stop: SharedArrayBuffer | null = null;
  process.on('SIGINT', () => {
    // A job that keeps what it found is asked first, and ended if asked again.
    if (stop && Atomics.exchange(new Int32Array(stop), 0, 1) === 0) return;
    line?.clear();
    removePending();
    process.exit(INTERRUPTED);
  });
  try {
    call = parseCall(args, DEMO_FOLDER, (text) => process.stdout.write(text));
    const { request, manner } = call;
    const progress = new ProgressLine(process.stderr, manner.quiet);
    line = progress;
    const { seed, workers } = manner;
    stop = request.command === 'compare' && request.mixingState !== null ? new SharedArrayBuffer(4) : null;
    const result = await runInThread({ request, seed, workers, stop }, (state) => progress.show(state));
    progress.clear();
    return printResult(result, manner, process.stdout, process.stderr);
  } catch (error) {
    line?.clear();
    removePending();
    if (stop && error instanceof Cancelled) {
      process.stderr.write('stopped on request; the best mixing so far is kept\n');
      return INTERRUPTED;
    }
    return reportError(error, call?.manner.trace ?? args.includes('--trace'), process.stderr);
  }
}

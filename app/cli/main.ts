#!/usr/bin/env node
import { fileURLToPath } from 'node:url';
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
  process.once('SIGINT', () => {
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
    const result = await runInThread({ request, seed, workers }, (state) => progress.show(state));
    progress.clear();
    return printResult(result, manner, process.stdout, process.stderr);
  } catch (error) {
    line?.clear();
    removePending();
    return reportError(error, call?.manner.trace ?? args.includes('--trace'), process.stderr);
  }
}

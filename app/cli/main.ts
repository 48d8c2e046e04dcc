#!/usr/bin/env node
import { fileURLToPath } from 'node:url';
import { Cancelled, InputError } from '../../core/job';
import { runInThread } from './job-thread';
import { removePending } from './output';
import { printResult } from './print';
import { type Call, HelpShown, parseCall } from './program';
import { ProgressLine } from './progress';

/** Exit statuses, see the manual: the command line's contract with scripts. */
const DONE = 0;
const BUG = 1;
const BAD_INPUT = 2;
const FAILED = 3;
const INTERRUPTED = 130;

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
    return report(error, call?.manner.trace ?? args.includes('--trace'));
  }
}

/** One line on stderr, and the status that goes with the kind of error. */
function report(error: unknown, trace: boolean): number {
  if (error instanceof HelpShown) return DONE;
  const { message, stack } = error instanceof Error ? error : new Error(String(error));
  if (error instanceof InputError) process.stderr.write(`${message}\n`);
  else if (error instanceof Cancelled) process.stderr.write('stopped on request\n');
  else
    process.stderr.write(`spinwright: a bug: ${message.replace(/\s*\n\s*/g, ' ')}; --trace shows where.\n`);
  if (trace && stack) process.stderr.write(`${stack}\n`);
  if (error instanceof InputError) return BAD_INPUT;
  return error instanceof Cancelled ? FAILED : BUG;
}

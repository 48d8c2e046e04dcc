import { Cancelled, InputError } from '../../core/job';
import { HelpShown } from './program';
import type { TerminalStream } from './progress';

/** Exit statuses, see the manual: the command line's contract with scripts. */
export const DONE = 0;
export const BUG = 1;
export const BAD_INPUT = 2;
export const FAILED = 3;
export const CHECK_FAILED = 4;
export const INTERRUPTED = 130;

/** Writes one line on `err`, the stack too where asked for, and returns the status of the kind of error. */
export function reportError(error: unknown, trace: boolean, err: TerminalStream): number {
  if (error instanceof HelpShown) return DONE;
  const { message, stack } = error instanceof Error ? error : new Error(String(error));
  if (error instanceof InputError) err.write(`${message}\n`);
  else if (error instanceof Cancelled) err.write('stopped on request\n');
  else err.write(`spinwright: a bug: ${message.replace(/\s*\n\s*/g, ' ')}; --trace shows where.\n`);
  if (trace && stack) err.write(`${stack}\n`);
  if (error instanceof InputError) return BAD_INPUT;
  return error instanceof Cancelled ? FAILED : BUG;
}

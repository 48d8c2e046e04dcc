import { answer } from '../../../app/cli/jobs';
import { printResult } from '../../../app/cli/print';
import { type Call, parseCall } from '../../../app/cli/program';
import { reportError } from '../../../app/cli/status';
import { inlineContext } from '../../../core/job';

export interface Answer {
  readonly status: number;
  readonly stdout: string;
  readonly stderr: string;
  readonly error: unknown;
}

/** A call of the command line within this process: the same steps, without the thread of its own. */
export async function spinwright(words: readonly string[]): Promise<Answer> {
  const [out, err] = [collector(), collector()];
  let call: Call | null = null;
  try {
    call = parseCall(words, '', out.write);
    const result = await answer(call.request, inlineContext(call.manner.seed));
    const status = printResult(result, call.manner, out, err);
    return { status, stdout: out.text, stderr: err.text, error: null };
  } catch (error) {
    const status = reportError(error, false, err);
    return { status, stdout: out.text, stderr: err.text, error };
  }
}

function collector() {
  const stream = {
    text: '',
    write(text: string) {
      stream.text += text;
    },
  };
  return stream;
}

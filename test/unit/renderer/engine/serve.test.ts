import { describe, expect, it } from 'vitest';
import { InputError, type JobContext } from '../../../../core/job';
import type { FromWorker } from '../../../../renderer/engine/protocol';
import { type Handler, problemOf, serve } from '../../../../renderer/engine/serve';

function served(handlers: Record<string, Handler>, now?: () => number) {
  const sent: FromWorker[] = [];
  let settled: () => void = () => {};
  const end = new Promise<void>((resolve) => {
    settled = resolve;
  });
  const handle = serve(
    handlers,
    (m) => {
      sent.push(structuredClone(m));
      if (m.type === 'result' || m.type === 'failure') settled();
    },
    now,
  );
  return { handle, sent, end };
}
const run = (job: string, input: unknown = {}) => ({ type: 'run', id: 7, job: job as never, input }) as const;

describe('worker side', () => {
  it('answers with the result, news and the seed of the question', async () => {
    const { handle, sent, end } = served({
      work: (async (input: { x: number }, context: JobContext, tell: (n: unknown) => void) => {
        tell('half way');
        return [input.x, context.seed];
      }) as unknown as Handler,
    });
    handle(run('work', { x: 2, ask: { seed: 5 } }));
    await end;
    expect(sent).toEqual([
      { type: 'news', id: 7, news: 'half way' },
      { type: 'result', id: 7, value: [2, 5] },
    ]);
  });

  it('reports at most every 50 ms within a stage, and every new stage', async () => {
    let time = 0;
    const { handle, sent, end } = served(
      {
        work: (async (_input: unknown, context: JobContext) => {
          for (let i = 0; i < 100; i++) {
            time += 10;
            context.report('one', i, 100);
          }
          context.report('two', 0, 1);
        }) as unknown as Handler,
      },
      () => time,
    );
    handle(run('work'));
    await end;
    const progress = sent.filter((m) => m.type === 'progress');
    expect(progress.filter((m) => m.stage === 'one')).toHaveLength(20);
    expect(progress[progress.length - 1]).toMatchObject({ stage: 'two' });
  });

  it('hears a stop at the next checkpoint', async () => {
    let rounds = 0;
    const { handle, sent, end } = served({
      work: (async (_input: unknown, context: JobContext) => {
        for (;;) {
          rounds++;
          await context.checkpoint();
          await new Promise((resolve) => setTimeout(resolve, 1));
        }
      }) as unknown as Handler,
    });
    handle(run('work'));
    await new Promise((resolve) => setTimeout(resolve, 20));
    handle({ type: 'cancel', id: 7 });
    await end;
    expect(rounds).toBeGreaterThan(0);
    expect(sent[sent.length - 1]).toEqual({ type: 'failure', id: 7, failure: { kind: 'cancelled' } });
  });

  it('sends bad input as plain data and names an unknown job', async () => {
    const problem = { code: 'x', where: 'a.npy', found: 'b', expected: 'c', mend: 'd' };
    const bad = served({
      work: (async () => {
        throw new InputError(problem);
      }) as unknown as Handler,
    });
    bad.handle(run('work'));
    await bad.end;
    expect(bad.sent).toEqual([{ type: 'failure', id: 7, failure: { kind: 'input', problem } }]);
    const unknown = served({});
    unknown.handle(run('nothing'));
    await unknown.end;
    expect(unknown.sent).toEqual([
      { type: 'failure', id: 7, failure: { kind: 'bug', message: 'no job named nothing' } },
    ]);
  });

  it('describes a bug in the same four parts as bad input', () => {
    expect(problemOf(new Error('index 3 of 2'), 'set')).toMatchObject({
      where: 'set',
      found: 'index 3 of 2',
    });
  });
});

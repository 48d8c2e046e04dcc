import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { Cancelled, InputError } from '../../../../core/job';
import { type Endpoint, WorkerEngine } from '../../../../renderer/engine/engine';
import type { FromWorker, ToWorker } from '../../../../renderer/engine/protocol';

const SOURCE = { id: 1, name: 'set', files: [], chosenOneByOne: false };

/** Workers that do nothing by themselves: the test answers in their place. */
function fakeWorkers() {
  const workers: {
    posted: ToWorker[];
    ended: boolean;
    say: (m: FromWorker) => void;
    fail: (e: Error) => void;
  }[] = [];
  const engine = new WorkerEngine((onMessage, onError): Endpoint => {
    const worker = { posted: [] as ToWorker[], ended: false, say: onMessage, fail: onError };
    workers.push(worker);
    return {
      post: (m) => void worker.posted.push(m),
      terminate: () => {
        worker.ended = true;
      },
    };
  });
  return { engine, workers };
}

describe('worker engine', () => {
  beforeEach(() => void vi.useFakeTimers());
  afterEach(() => void vi.useRealTimers());

  it('runs one job at a time, in order, on one worker', async () => {
    const { engine, workers } = fakeWorkers();
    const first = engine.run('read', { source: SOURCE });
    const second = engine.run('read', { source: { ...SOURCE, id: 2 } });
    expect(workers[0]!.posted).toHaveLength(1);
    workers[0]!.say({ type: 'result', id: 1, value: 'one' });
    await expect(first).resolves.toBe('one');
    expect(workers[0]!.posted[1]).toMatchObject({ type: 'run', id: 2 });
    workers[0]!.say({ type: 'result', id: 2, value: 'two' });
    await expect(second).resolves.toBe('two');
    expect(workers).toHaveLength(1);
  });

  it('passes progress and news on, and drops answers of jobs that are over', async () => {
    const { engine, workers } = fakeWorkers();
    const heard: unknown[] = [];
    const run = engine.run(
      'reckon',
      { source: SOURCE, ask: {} as never, variants: [] },
      {
        onProgress: (...args) => heard.push(args),
        onNews: (news) => heard.push(news),
      },
    );
    workers[0]!.say({ type: 'progress', id: 1, stage: 'factors', done: 1, total: null });
    workers[0]!.say({ type: 'news', id: 1, news: { status: 'started', name: 'x' } });
    workers[0]!.say({ type: 'result', id: 1, value: {} });
    await run;
    workers[0]!.say({ type: 'progress', id: 1, stage: 'late', done: 1, total: 1 });
    expect(heard).toEqual([['factors', 1, null], { status: 'started', name: 'x' }]);
  });

  it('stops softly where the job listens, and keeps its worker', async () => {
    const { engine, workers } = fakeWorkers();
    const stop = new AbortController();
    const run = engine.run('read', { source: SOURCE }, { signal: stop.signal });
    stop.abort();
    expect(workers[0]!.posted[1]).toEqual({ type: 'cancel', id: 1 });
    workers[0]!.say({ type: 'failure', id: 1, failure: { kind: 'cancelled' } });
    await expect(run).rejects.toBeInstanceOf(Cancelled);
    vi.advanceTimersByTime(1000);
    expect(workers[0]!.ended).toBe(false);
  });

  it('ends a worker that does not listen after 150 ms and gives the next job a new one', async () => {
    const { engine, workers } = fakeWorkers();
    const stop = new AbortController();
    const run = engine.run('read', { source: SOURCE }, { signal: stop.signal });
    run.catch(() => {});
    stop.abort();
    vi.advanceTimersByTime(149);
    expect(workers[0]!.ended).toBe(false);
    vi.advanceTimersByTime(1);
    expect(workers[0]!.ended).toBe(true);
    await expect(run).rejects.toBeInstanceOf(Cancelled);
    const next = engine.run('read', { source: SOURCE });
    workers[1]!.say({ type: 'result', id: 2, value: 'again' });
    await expect(next).resolves.toBe('again');
  });

  it('drops a waiting job that is stopped before it started', async () => {
    const { engine, workers } = fakeWorkers();
    const stop = new AbortController();
    const first = engine.run('read', { source: SOURCE });
    const second = engine.run('read', { source: SOURCE }, { signal: stop.signal });
    stop.abort();
    await expect(second).rejects.toBeInstanceOf(Cancelled);
    workers[0]!.say({ type: 'result', id: 1, value: 'one' });
    await first;
    expect(workers[0]!.posted).toHaveLength(1);
    await expect(engine.run('read', { source: SOURCE }, { signal: stop.signal })).rejects.toBeInstanceOf(
      Cancelled,
    );
  });

  it('gives bad input back as data, and a worker that broke as an error', async () => {
    const { engine, workers } = fakeWorkers();
    const problem = { code: 'x', where: 'FCIDUMP:3', found: 'a', expected: 'b', mend: 'c' };
    const bad = engine.run('read', { source: SOURCE });
    workers[0]!.say({ type: 'failure', id: 1, failure: { kind: 'input', problem } });
    const error = await bad.catch((e: unknown) => e);
    expect(error).toBeInstanceOf(InputError);
    expect((error as InputError).toProblem()).toEqual(problem);
    const broken = engine.run('read', { source: SOURCE });
    workers[0]!.fail(new Error('out of memory'));
    await expect(broken).rejects.toThrow('out of memory');
    expect(workers[0]!.ended).toBe(true);
  });
});

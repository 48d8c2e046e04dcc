import { afterEach, describe, expect, it } from 'vitest';
import { transferables } from '../../../app/cli/messages';
import { TaskPool } from '../../../app/cli/pool';
import { InputError, type Task } from '../../../core/job';

const SCRIPT = new URL('../../fixtures/cli/pool-worker.mjs', import.meta.url);
const square: Task<number, number> = {
  name: 'square',
  run: () => Promise.reject(new Error('runs on workers only')),
};

describe('a pool of task workers', () => {
  let pool: TaskPool;
  afterEach(() => pool.close());

  it.each([1, 2, 3])('gives outputs in input order with %i workers, whichever ends first', async (size) => {
    pool = new TaskPool(size, SCRIPT, 1);
    const inputs = [1, 9, 2, 8, 3, 7, 4];
    const done: number[] = [];
    expect(await pool.map(square, inputs, (count) => done.push(count))).toEqual(inputs.map((x) => x * x));
    expect(done).toEqual([1, 2, 3, 4, 5, 6, 7]);
  });

  it('maps nothing to nothing', async () => {
    pool = new TaskPool(2, SCRIPT, 1);
    expect(await pool.map(square, [])).toEqual([]);
  });

  it('rejects with the bad input of a task, as an InputError, and serves on', async () => {
    pool = new TaskPool(2, SCRIPT, 1);
    const failing = pool.map(square, [3, -1, 5, 6]);
    await expect(failing).rejects.toBeInstanceOf(InputError);
    await expect(failing).rejects.toMatchObject({ code: 'negative', where: 'square' });
    expect(await pool.map(square, [4, 5])).toEqual([16, 25]);
  });

  it('rejects with the stack of a bug', async () => {
    pool = new TaskPool(1, SCRIPT, 1);
    await expect(pool.map(square, [0])).rejects.toMatchObject({ message: 'zero', stack: 'at zero' });
  });
});

describe('buffers handed over between threads', () => {
  it('are those a typed array covers whole, each once, wherever they are', () => {
    const whole = new Float64Array(4);
    const part = new Float64Array(8).subarray(2, 4);
    const found = transferables({ a: whole, list: [whole, { part }], text: 'x', none: null });
    expect(found).toEqual([whole.buffer]);
  });
});

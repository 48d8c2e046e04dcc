import { spawn } from 'node:child_process';
import { resolve } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { ensureBuilt, ensureKernels } from '../../build/setup.mjs';
import { CORPUS, manifest, type Row } from '../unit/corpus/manifest';

const CLI = resolve('dist/node/cli.js');
/** Run before the command: its main thread tells on stream 3, as it ends, what the whole process took. */
const METER = `data:text/javascript,${encodeURIComponent(`
  import { writeSync } from 'node:fs';
  import { isMainThread } from 'node:worker_threads';
  if (isMainThread) process.on('exit', () => {
    const { maxRSS, userCPUTime, systemCPUTime } = process.resourceUsage();
    writeSync(3, JSON.stringify({ mebibytes: maxRSS / 1024, seconds: (userCPUTime + systemCPUTime) / 1e6 }));
  });
`)}`;

const { seconds: mostSeconds, mebibytes: mostMebibytes } = manifest.limits;
/** Ends a run-away process; four times the limit, since the machine may be busy with other tests. */
const WATCHDOG_MS = 4 * 1000 * mostSeconds;

interface Cost {
  readonly mebibytes: number;
  /** Processor time of all threads, which a busy machine does not stretch. */
  readonly seconds: number;
}

interface Answer {
  readonly status: number | null;
  readonly stdout: string;
  readonly stderr: string;
  readonly cost: Cost;
}

/** The row's command as a user runs it, in the corpus folder. */
function run(row: Row): Promise<Answer> {
  const args = [`--max-old-space-size=${mostMebibytes}`, '--import', METER, CLI, ...row.command.split(' ')];
  const child = spawn(process.execPath, args, { cwd: CORPUS, stdio: ['ignore', 'pipe', 'pipe', 'pipe'] });
  const texts = ['', '', '', ''];
  for (const stream of [1, 2, 3] as const) {
    child.stdio[stream]?.on('data', (bytes: Buffer) => {
      texts[stream] += bytes.toString();
    });
  }
  const watchdog = setTimeout(() => child.kill('SIGKILL'), WATCHDOG_MS);
  return new Promise((done, fail) => {
    child.once('error', fail);
    child.once('close', (status) => {
      clearTimeout(watchdog);
      const cost = JSON.parse(texts[3] || '{"mebibytes":null,"seconds":null}') as Cost;
      done({ status, stdout: texts[1]!, stderr: texts[2]!, cost });
    });
  });
}

beforeAll(async () => {
  await ensureKernels();
  await ensureBuilt(['node']);
}, 300_000);

// All rows run in place in test/unit/corpus; SPINWRIGHT_CORPUS=all runs all of them as processes too.
const rows = manifest.errors.filter((row) => row.spawn || process.env.SPINWRIGHT_CORPUS === 'all');
const costs: { path: string; cost: Cost }[] = [];

describe('malformed files, the command as a process', () => {
  it.each(rows.map((row) => [`${row.path}: ${row.damage}`, row] as const))('%s', async (_name, row) => {
    const { status, stdout, stderr, cost } = await run(row);
    expect({ status, stdout }).toEqual({ status: row.exit, stdout: '' });
    expect(stderr.trimEnd().split('\n')).toHaveLength(1);
    for (const part of [row.where, row.what, row.cure]) expect(stderr).toContain(part);
    expect(cost.mebibytes).toBeLessThan(mostMebibytes);
    expect(cost.seconds).toBeLessThan(WATCHDOG_MS / 1000);
    costs.push({ path: row.path, cost });
  });

  afterAll(() => {
    const most = (key: keyof Cost) => [...costs].sort((a, b) => b.cost[key] - a.cost[key])[0];
    const [slow, large] = [most('seconds'), most('mebibytes')];
    if (!slow || !large) return;
    process.stdout.write(
      `corpus: ${costs.length} processes; most ${slow.cost.seconds.toFixed(2)} s of processor time (${slow.path}), ` +
        `${large.cost.mebibytes.toFixed(0)} MiB (${large.path})\n`,
    );
  });
});

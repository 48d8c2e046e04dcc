import { openAsBlob } from 'node:fs';
import { join, posix } from 'node:path';
import { describe, expect, it, vi } from 'vitest';
import type { Problem } from '../../../core/job';
import { jobs } from '../../../renderer/engine/jobs';
import type { FromWorker, JobName, Jobs, Reading, Source } from '../../../renderer/engine/protocol';
import { type Handler, serve } from '../../../renderer/engine/serve';
import { CORPUS, handedOver, inputOf, manifest, type Row } from './manifest';

// The library mounts a Blob only inside a browser's worker; here the bytes reach the same HDF5 reader through a
// temporary file. The mounting itself is tested in a browser.
vi.mock('../../../renderer/engine/hdf5', async () => {
  const { nodeReadPlatform } = await import('../../../app/cli/hdf5');
  return { webReadPlatform: nodeReadPlatform };
});

const WATCHDOG_MS = 4 * 1000 * manifest.limits.seconds;

let id = 0;

/** Posts a message to the worker's side of the engine and waits for the answer. */
function ask<K extends JobName>(job: K, input: Jobs[K]['input']): Promise<FromWorker> {
  return new Promise((resolve) => {
    const post = serve(jobs as unknown as Record<string, Handler>, (message) => {
      if (message.type === 'result' || message.type === 'failure') resolve(message);
    });
    post({ type: 'run', id: ++id, job, input } as Parameters<typeof post>[0]);
  });
}

/** The row's files as the page would hand them over: Blobs, with paths relative to their folder. */
async function sourceOf(row: Row): Promise<Source> {
  const { name, paths, chosenOneByOne } = handedOver(row);
  const folder = chosenOneByOne ? posix.dirname(inputOf(row)) : inputOf(row);
  const files = await Promise.all(
    paths.map(async (path) => ({
      path: posix.relative(folder, path),
      blob: await openAsBlob(join(CORPUS, path)),
    })),
  );
  return { id: ++id, name, files, chosenOneByOne };
}

/** What the window shows: the problem of the job, or the first finding that forbids going on. */
async function shown(row: Row): Promise<Problem | null> {
  const source = await sourceOf(row);
  const answer = await ask('read', { source });
  if (answer.type === 'failure') return problemOf(answer);
  const { findings } = (answer as unknown as { value: Reading }).value;
  const error = findings.find(({ severity }) => severity === 'error');
  if (error) return error;
  // What only the choice of terms makes wrong shows when the reckoning is asked for.
  const terms = /--terms (\S+)/.exec(row.command)?.[1]?.split(',') ?? 'all';
  const reckoned = await ask('reckon', {
    source,
    ask: {
      terms,
      electrons: null,
      occupations: null,
      window: null,
      target: { value: 5, unit: 'cm-1', meaning: 'level' },
      threshold: 0,
      bits: 'auto',
      overlaps: [1],
      qubitsMax: null,
      seed: 1,
    },
    variants: ['triplet/separate/index/median/clean'],
  } as unknown as Jobs['reckon']['input']);
  return reckoned.type === 'failure' ? problemOf(reckoned) : null;
}

function problemOf(message: FromWorker): Problem {
  if (message.type !== 'failure' || message.failure.kind !== 'input') {
    throw new Error(`not the user's fault: ${JSON.stringify(message)}`);
  }
  return message.failure.problem;
}

describe('malformed files in the window', () => {
  it.each(manifest.errors.map((row) => [`${row.path}: ${row.damage}`, row] as const))(
    '%s',
    async (_name, row) => {
      const problem = await shown(row);
      expect(problem).not.toBeNull();
      const { code, where, found, expected, mend } = problem!;
      expect(code).toBe(row.code);
      expect(`${where}: ${found}`).toContain(row.what);
      expect(`${expected}. ${mend}`).toContain(row.cure);
    },
    WATCHDOG_MS,
  );
});

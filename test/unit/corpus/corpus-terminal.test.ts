import { describe, expect, it } from 'vitest';
import { InputError } from '../../../core/job';
import type { Inspection } from '../../../core/plan';
import { spinwright } from './call';
import { manifest, type Row, wordsOf } from './manifest';

/** Four times the limit: only a run-away job meets it, never a busy machine. */
const WATCHDOG_MS = 4 * 1000 * manifest.limits.seconds;

const named = <R extends Row>(rows: readonly R[]) =>
  rows.map((row) => [`${row.path}: ${row.damage}`, row] as const);

describe('malformed files in the terminal', () => {
  it.each(named(manifest.errors))(
    '%s',
    async (_name, row) => {
      const { status, stdout, stderr, error } = await spinwright(wordsOf(row));
      expect(error, stderr).toBeInstanceOf(InputError);
      expect({ status, stdout, code: (error as InputError).code }).toEqual({
        status: row.exit,
        stdout: '',
        code: row.code,
      });
      const { where, found, expected, mend } = error as InputError;
      for (const part of [where, found, expected, mend]) expect(part.trim()).not.toBe('');
      expect(where).toContain(row.where);
      expect(`${where}: ${found}`).toContain(row.what);
      expect(`${expected}. ${mend}`).toContain(row.cure);
      // One line, all four parts in it, and nothing that tells of the machine it ran on.
      expect(stderr).toBe(`${(error as InputError).message}\n`);
      expect(stderr.trimEnd()).not.toContain('\n');
      expect(stderr).not.toContain(process.cwd());
      expect(stderr).not.toMatch(/\bat \S+ \(|undefined|\[object|NaN MiB/);
    },
    WATCHDOG_MS,
  );

  it.each(named(manifest.errors.filter(({ code }) => isFinding(code))))(
    'inspect lists what compare refuses, and ends with the same status: %s',
    async (_name, row) => {
      const words = ['inspect', wordsOf(row)[1]!, '--json'];
      const { status, stdout, stderr } = await spinwright(words);
      expect({ status, lines: stderr.trimEnd().split('\n').length }).toEqual({ status: 2, lines: 1 });
      const { findings } = JSON.parse(stdout) as Inspection;
      const found = findings.find(({ code, severity }) => code === row.code && severity === 'error');
      expect(found?.where).toContain(row.where);
      expect(found?.found).toContain(row.what);
      expect(found?.mend).toContain(row.cure);
    },
    WATCHDOG_MS,
  );
});

/** Problems that are noticed in arrays that can be read, and so listed. */
const isFinding = (code: string): boolean =>
  ['symmetry', 'time-reversal', 'unit', 'index-order', 'coulomb-not-positive', 'missing-element'].includes(
    code,
  );

describe('files with something to note', () => {
  it.each(named(manifest.findings))(
    '%s',
    async (_name, row) => {
      const { status, stdout, stderr } = await spinwright(wordsOf(row));
      expect({ status, stderr }).toEqual({ status: row.exit, stderr: '' });
      const { findings } = JSON.parse(stdout) as Inspection;
      const found = findings.find(({ code, where }) => code === row.code && where.includes(row.where));
      expect(found, stdout).toMatchObject({ severity: row.severity });
      expect(found!.found).toContain(row.what);
      expect(found!.mend).toContain(row.cure);
      expect(findings.filter(({ severity }) => severity === 'error')).toEqual([]);
    },
    WATCHDOG_MS,
  );

  it.each(named(manifest.findings))(
    'as text, without a character that a terminal obeys: %s',
    async (_name, row) => {
      const { status, stdout } = await spinwright(wordsOf(row).filter((word) => word !== '--json'));
      expect(status).toBe(0);
      expect(stdout.replaceAll('\n', '')).not.toMatch(/[\p{Cc}\p{Cf}]/u);
      expect(stdout).toContain(`- ${row.severity}: `);
    },
  );
});

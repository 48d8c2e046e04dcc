import { mkdtempSync, rmSync, utimesSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, relative } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { fingerprint, isStale, writeStamp } from '../../../build/stale.mjs';

describe('when to build again', () => {
  let folder: string;
  let path: string;
  beforeEach(() => {
    folder = mkdtempSync(join(tmpdir(), 'stale-test-'));
    path = relative(process.cwd(), folder);
    writeFileSync(join(folder, 'a.ts'), 'one');
  });
  afterEach(() => rmSync(folder, { recursive: true }));

  it('is when a source was edited, added, removed, or put back to an older state', () => {
    const prints = [fingerprint([path])];
    writeFileSync(join(folder, 'a.ts'), 'three');
    prints.push(fingerprint([path]));
    writeFileSync(join(folder, 'b.ts'), '');
    prints.push(fingerprint([path]));
    rmSync(join(folder, 'a.ts'));
    prints.push(fingerprint([path]));
    utimesSync(join(folder, 'b.ts'), 1, 1);
    prints.push(fingerprint([path]));
    expect(new Set(prints).size).toBe(prints.length);
  });

  it('is not when nothing changed or only a skipped file did', () => {
    const before = fingerprint([path], ['made.ts']);
    writeFileSync(join(folder, 'made.ts'), 'output');
    expect(fingerprint([path], ['made.ts'])).toBe(before);
  });

  it('is when there is no stamp or another one', () => {
    const stamp = join(folder, 'stamps', 'x');
    expect(isStale(stamp, 'print')).toBe(true);
    writeStamp(stamp, 'print');
    expect(isStale(stamp, 'print')).toBe(false);
    expect(isStale(stamp, 'other')).toBe(true);
  });
});

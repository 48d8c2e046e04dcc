import {
  existsSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  rmSync,
  writeFileSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { copyFolder, writeWhole } from '../../../app/cli/output';
import { ProgressLine } from '../../../app/cli/progress';

describe('files that are written', () => {
  let folder: string;
  beforeEach(() => {
    folder = mkdtempSync(join(tmpdir(), 'output-test-'));
  });
  afterEach(() => rmSync(folder, { recursive: true }));

  it('replace the old ones whole and leave no temporary name', () => {
    const path = join(folder, 'new', 'recipe.json');
    writeWhole(path, 'one');
    writeWhole(path, 'two');
    expect(readFileSync(path, 'utf8')).toBe('two');
    expect(readdirSync(join(folder, 'new'))).toEqual(['recipe.json']);
  });

  it('leave nothing where they cannot be written', () => {
    mkdirSync(join(folder, 'taken'));
    writeFileSync(join(folder, 'taken', 'file'), '');
    expect(() => writeWhole(join(folder, 'taken'), 'text')).toThrow(/cannot be written .*expected a place/);
    expect(readdirSync(folder)).toEqual(['taken']);
  });

  it('are copied into a new or an empty folder only', () => {
    const source = join(folder, 'source');
    mkdirSync(source);
    writeFileSync(join(source, 'b'), '2');
    writeFileSync(join(source, 'a'), '1');
    mkdirSync(join(folder, 'empty'));
    expect(copyFolder(source, join(folder, 'empty'))).toEqual(['a', 'b']);
    expect(readFileSync(join(folder, 'empty', 'b'), 'utf8')).toBe('2');
    expect(() => copyFolder(source, join(folder, 'empty'))).toThrow(
      /holds files; expected a new or an empty/,
    );
    expect(existsSync(join(folder, 'empty', 'a'))).toBe(true);
  });
});

describe('the progress line', () => {
  const terminal = (isTTY: boolean) => {
    let text = '';
    const stream = { isTTY, columns: 60, write: (piece: string) => (text += piece) };
    return { stream, text: () => text };
  };

  it('shows bar, share and stage on a terminal, within its width, and clears itself', () => {
    const { stream, text } = terminal(true);
    const line = new ProgressLine(stream, false);
    line.show({ stage: `factors ${'x'.repeat(80)}`, done: 1, total: 4 });
    const shown = text().replace('\r\u001b[2K', '');
    expect(shown).toMatch(/^={6}·{18}\s+25\.0 % {2}factors x+$/);
    expect(shown.length).toBe(59);
    line.clear();
    expect(text().endsWith('\r\u001b[2K')).toBe(true);
  });

  it('says nothing to a pipe or when asked to be quiet', () => {
    for (const [tty, quiet] of [
      [false, false],
      [true, true],
    ] as const) {
      const { stream, text } = terminal(tty);
      const line = new ProgressLine(stream, quiet);
      line.show({ stage: 'factors', done: 1, total: null });
      line.clear();
      expect(text()).toBe('');
    }
  });
});

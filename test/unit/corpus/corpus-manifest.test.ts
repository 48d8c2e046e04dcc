import { readdirSync, statSync } from 'node:fs';
import { dirname, join, relative } from 'node:path';
import { describe, expect, it } from 'vitest';
import { CORPUS, inputOf, manifest } from './manifest';

const { errors, findings, support } = manifest;
const listed = [...errors, ...findings].map(({ path }) => path);

const present = readdirSync(CORPUS, { recursive: true, withFileTypes: true })
  .filter((entry) => entry.isFile())
  .map((entry) => relative(CORPUS, join(entry.parentPath, entry.name)).replaceAll('\\', '/'))
  .filter((path) => path !== 'manifest.json' && path !== '.gitattributes');

describe('the corpus of malformed files', () => {
  it('has at least 60 rows', () => {
    expect(errors.length).toBeGreaterThanOrEqual(60);
  });

  it('lists every file of its folder exactly once, and no other', () => {
    expect([...listed, ...support].sort()).toEqual([...present].sort());
  });

  it('stays small', () => {
    const bytes = present.reduce((sum, path) => sum + statSync(join(CORPUS, path)).size, 0);
    expect(bytes).toBeLessThan(400_000);
  });

  it('needs every supporting file', () => {
    const inputs = new Set([...errors, ...findings].flatMap((row) => [inputOf(row), dirname(row.path)]));
    const idle = support.filter((path) => !inputs.has(path) && !inputs.has(dirname(path)));
    expect(idle).toEqual([]);
  });

  it('asks something of every message', () => {
    for (const { path, code, where, what, cure, exit } of errors) {
      expect({ path, exit }).toEqual({ path, exit: 2 });
      for (const part of [code, where, what, cure]) expect(part.length, path).toBeGreaterThan(0);
    }
    for (const row of findings) expect(row.exit, row.path).toBe(0);
  });

  // The kinds of damage that the manual names, so that a row cannot go without being missed.
  it.each([
    ['empty files', /^empty-file$|^not-json$/, 5],
    ['cut files', /^truncated$|^too-few-fields$|^unclosed-header$|^no-core-energy$|^bad-zip$/, 8],
    ['bad headers', /^bad-header$/, 8],
    ['fields that are no numbers', /^bad-number$|^bad-index$/, 5],
    ['NaN and infinities', /^not-finite$/, 8],
    ['indices out of range', /^index-out-of-range$|^bad-indices$/, 5],
    ['claims of huge sizes', /^too-large$|^implausible-size$/, 6],
    ['wrong shapes', /^wrong-shape$/, 8],
    ['broken symmetries', /^symmetry$|^asymmetric$/, 10],
    ['mixed time-reversal sectors', /^time-reversal$/, 1],
    ['elements given twice', /^duplicate-/, 4],
    ['element types', /^object-array$|^bad-element-type$|^byte-order$/, 6],
    ['units by magnitude', /^unit$/, 2],
    ['index order', /^index-order$/, 1],
    ['electron counts', /^electron|^spin-count$/, 6],
    ['recipes', /^schema$|^recipe|^not-json$|^not-utf8$/, 25],
    ['what FILES stands for', /^no-recipe$|^missing-file$/, 4],
  ])('has %s', (_what, codes, least) => {
    expect(errors.filter(({ code }) => codes.test(code)).length).toBeGreaterThanOrEqual(least);
  });
});

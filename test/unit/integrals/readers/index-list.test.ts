import { describe, expect, it } from 'vitest';
import { type IndexListFormat, memorySource, readIndexList } from '../../../../core/integrals';
import { InputError, inlineContext } from '../../../../core/job';

const context = inlineContext();
const TWO: IndexListFormat = { columns: ['p', 'q', 'value'], base: 1, components: [], orbitals: 3 };
const read = (text: string, format: Partial<IndexListFormat> = {}) =>
  readIndexList(memorySource('h.txt', text), { ...TWO, ...format }, context);

describe('readIndexList', () => {
  it('reads two indices and a value, with comments and blank lines, and keeps line numbers', async () => {
    const list = await read('# one-electron\n\n1 1 -1.5\n2,1,0.25D0 ! off-diagonal\n  3 3 2e-1\n');
    expect(list.origin).toBe('h.txt');
    expect(list.count).toBe(3);
    expect([...list.indices]).toEqual([0, 0, 1, 0, 2, 2]);
    expect([...list.re]).toEqual([-1.5, 0.25, 0.2]);
    expect(list.im).toBe(null);
    expect(list.components).toBe(null);
    expect([...list.lines]).toEqual([3, 4, 5]);
  });

  it('reads components by label or by number, four indices, complex values, base 0', async () => {
    const format = {
      columns: ['component', 'p', 'q', 'r', 's', 're', 'im'],
      components: ['x', 'y', 'z'],
      base: 0 as const,
    };
    const list = await read('x 0 1 2 0 1 -1\nZ 2 2 2 2 0.5 0\n1 0 0 0 0 3 4', format);
    expect([...(list.components ?? [])]).toEqual([0, 2, 1]);
    expect([...list.indices]).toEqual([0, 1, 2, 0, 2, 2, 2, 2, 0, 0, 0, 0]);
    expect([...list.re]).toEqual([1, 0.5, 3]);
    expect([...(list.im ?? [])]).toEqual([-1, 0, 4]);
  });

  it('puts indices in the order of their names, wherever their columns stand', async () => {
    const list = await read('0.5 2 1 3', { columns: ['value', 'q', 'p', 'r'] });
    expect([...list.indices]).toEqual([0, 1, 2]);
    expect([...list.re]).toEqual([0.5]);
  });

  it('reads more entries than it first made room for', async () => {
    let text = '';
    for (let i = 0; i < 5000; i++) text += `${1 + (i % 3)} 1 ${i}\n`;
    const list = await read(text);
    expect(list.count).toBe(5000);
    expect(list.re[4999]).toBe(4999);
    expect(list.lines[4999]).toBe(5000);
  });

  it.each<[string, string, Partial<IndexListFormat>, string, string]>([
    ['an empty file', '', {}, 'empty-file', 'h.txt'],
    ['comments only', '# nothing\n', {}, 'no-entries', 'p q value'],
    ['an index beyond the orbitals', '1 1 1\n4 1 1\n', {}, 'index-out-of-range', 'h.txt:2'],
    ['index 0 where counting starts at 1', '0 1 1\n', {}, 'index-out-of-range', 'from 1 to 3'],
    ['index 3 of 3 where counting starts at 0', '3 1 1\n', { base: 0 }, 'index-out-of-range', 'from 0 to 2'],
    ['too few fields', '1 1\n', {}, 'too-few-fields', 'p q value'],
    ['too many fields', '1 1 1 1\n', {}, 'too-many-fields', 'after the last column'],
    ['a word', '1 1 one\n', {}, 'bad-number', '"one"'],
    ['a fractional index', '1.0 1 1\n', {}, 'bad-index', '"1.0"'],
    ['NaN', '1 1 nan\n', {}, 'not-finite', 'nan'],
    [
      'an unknown component',
      'w 1 1 2\n',
      { columns: ['component', 'p', 'q', 'value'], components: ['x', 'y'] },
      'bad-component',
      '"w"',
    ],
    [
      'a component number beyond',
      '3 1 1 2\n',
      { columns: ['component', 'p', 'q', 'value'], components: ['x', 'y'] },
      'bad-component',
      'x, y',
    ],
    ['binary garbage', '\u0000\u0001\u0002', {}, 'bad-index', '\\x00'],
  ])('refuses %s', async (_name, text, format, code, part) => {
    const error = await read(text, format).catch((e: unknown) => e);
    expect(error).toBeInstanceOf(InputError);
    expect((error as InputError).code).toBe(code);
    expect((error as InputError).message).toContain(part);
  });
});

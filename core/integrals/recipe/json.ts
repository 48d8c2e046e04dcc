import { InputError } from '../../job';

export type Json = null | boolean | number | string | Json[] | { [key: string]: Json };

const MAX_DEPTH = 64;

/**
 * Parses JSON as RFC 8259 defines it. The built-in parser is not used because it accepts a repeated key
 * (the last one wins silently), turns 1e999 into infinity, and does not say where it stopped.
 *
 * @param text - the document; a leading byte order mark is skipped.
 * @param file - name for messages.
 * @throws InputError `not-json` with line and column.
 */
export function parseJson(text: string, file: string): Json {
  let pos = text.charCodeAt(0) === 0xfeff ? 1 : 0;

  function fail(found: string, expected: string, cure?: string): never {
    const isCut = pos >= text.length;
    const mend =
      cure ??
      (isCut ? 'Was the file cut short? Copy it again or complete it' : 'Correct the JSON at this place');
    const before = text.slice(0, pos).split('\n');
    const where = `${file}:${before.length}:${before[before.length - 1]!.length + 1}`;
    throw new InputError({ code: 'not-json', where, found, expected, mend: `${mend} (RFC 8259).` });
  }
  function here(): string {
    return pos >= text.length
      ? 'the end of the file'
      : JSON.stringify(/.{0,12}/.exec(text.slice(pos, pos + 12))![0]);
  }
  /** The cure where the text is what other notations allow and JSON does not. */
  function habit(): string | undefined {
    const c = text[pos];
    if (text.startsWith('//', pos) || text.startsWith('/*', pos) || c === '#')
      return 'Remove the comment: JSON has none';
    if (c === "'") return 'Use double quotes';
    if ((c === ']' || c === '}') && /,\s*$/.test(text.slice(Math.max(0, pos - 200), pos)))
      return 'Remove the comma before it';
    if (/^[+-]?(NaN|Inf)/i.test(text.slice(pos, pos + 4)))
      return 'JSON has no NaN or infinity: give a number';
    return undefined;
  }
  function skipSpace(): void {
    while (pos < text.length && ' \t\n\r'.includes(text[pos]!)) pos++;
  }
  function value(depth: number): Json {
    if (depth > MAX_DEPTH) fail('nesting', `at most ${MAX_DEPTH} levels`);
    skipSpace();
    const c = text[pos];
    if (c === '{') return object(depth);
    if (c === '[') return array(depth);
    if (c === '"') return string();
    if (c === '-' || (c !== undefined && c >= '0' && c <= '9')) return number();
    for (const [word, meaning] of [
      ['true', true],
      ['false', false],
      ['null', null],
    ] as const) {
      if (text.startsWith(word, pos)) {
        pos += word.length;
        return meaning;
      }
    }
    return fail(here(), 'a JSON value', habit());
  }
  function object(depth: number): Json {
    const result: { [key: string]: Json } = {};
    pos++;
    skipSpace();
    if (text[pos] === '}') {
      pos++;
      return result;
    }
    for (;;) {
      skipSpace();
      if (text[pos] !== '"') fail(here(), 'a key in double quotes', habit());
      const start = pos;
      const key = string();
      if (Object.hasOwn(result, key)) {
        pos = start;
        fail(`key ${JSON.stringify(key)} a second time`, 'each key once', 'Keep one of the two');
      }
      skipSpace();
      if (text[pos] !== ':') fail(here(), '":" after a key');
      pos++;
      // Defined, not assigned: a key named __proto__ must stay a plain key.
      Object.defineProperty(result, key, {
        value: value(depth + 1),
        enumerable: true,
        writable: true,
        configurable: true,
      });
      skipSpace();
      if (text[pos] === '}') break;
      if (text[pos] !== ',') fail(here(), '"," or "}"');
      pos++;
    }
    pos++;
    return result;
  }
  function array(depth: number): Json {
    const result: Json[] = [];
    pos++;
    skipSpace();
    if (text[pos] === ']') {
      pos++;
      return result;
    }
    for (;;) {
      result.push(value(depth + 1));
      skipSpace();
      if (text[pos] === ']') break;
      if (text[pos] !== ',') fail(here(), '"," or "]"');
      pos++;
    }
    pos++;
    return result;
  }
  function string(): string {
    const start = pos;
    pos++;
    while (pos < text.length && text[pos] !== '"') {
      if (text[pos]! < ' ') fail('a control character in a text', 'an escape such as \\n');
      pos += text[pos] === '\\' ? 2 : 1;
    }
    if (pos >= text.length) fail('the end of the file', 'the closing double quote');
    pos++;
    try {
      return JSON.parse(text.slice(start, pos)) as string;
    } catch {
      pos = start;
      return fail(here(), 'a text with valid escapes');
    }
  }
  function number(): number {
    const match = /^-?(?:0|[1-9]\d*)(?:\.\d+)?(?:[eE][+-]?\d+)?/.exec(text.slice(pos, pos + 400));
    if (!match) return fail(here(), 'a number');
    const result = Number(match[0]);
    if (!Number.isFinite(result)) fail(match[0], 'a number below 1.8e308');
    pos += match[0].length;
    return result;
  }

  skipSpace();
  if (pos >= text.length)
    fail('the end of the file', 'a JSON document', 'The file is empty: write or copy it again');
  const result = value(0);
  skipSpace();
  if (pos < text.length) fail(here(), 'nothing after the JSON value');
  return result;
}

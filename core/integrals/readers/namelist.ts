import { InputError } from '../../job';
import { latin1 } from './text-lines';

const MAX_HEADER_BYTES = 2 ** 16;
/** A label for each of 800 spinors is the longest list there is; repeat counts can claim any number. */
const MAX_VALUES = 10_000;
/** Blank and comment lines that may come before the header. */
const MAX_LEADING_LINES = 1000;
/** A line of integrals where the header should go on: a number with a decimal point comes first. */
const DATA_LINE = /^\s*(?:\(\s*)?[-+]?\d*\.\d/;
/** `KEY=` or `KEY(1)=`. Bounded and never begun inside a word, so that no text makes it slow. */
const KEY = /(?<![A-Za-z0-9_])([A-Za-z][A-Za-z0-9_]{0,30})\s{0,99}(?:\([^)]{0,99}\))?\s{0,99}=/g;

const MENDS: Readonly<Record<string, string>> = {
  'unclosed-header': 'Close the header with a line "&END"; if the file was cut short, copy it again.',
};

/** The keys of a Fortran namelist group, upper case, each with its values as written and its line. */
export type Namelist = ReadonlyMap<string, { readonly values: readonly string[]; readonly line: number }>;

/**
 * Collects a Fortran namelist group from the lines at the head of a file, up to `&END`, `$END` or `/`.
 * `add` takes a line and returns true with the line that closes the group.
 */
export class NamelistCollector {
  private text = '';
  private opened = false;
  private firstLine = 1;

  constructor(
    private readonly path: string,
    private readonly group: string,
  ) {}

  add(bytes: Uint8Array, start: number, end: number, line: number): boolean {
    let text = latin1(bytes.subarray(start, end));
    if (!this.opened) {
      if (line <= MAX_LEADING_LINES && (text.trim() === '' || text.trimStart().startsWith('!'))) return false;
      const opening = new RegExp(`^\\s*[&$]\\s*${this.group}\\b`, 'i').exec(text);
      if (opening === null) {
        const found = text.trim() === '' ? 'blank lines only' : `"${excerpt(text)}"`;
        throw this.problem('bad-header', line, found, `a header that opens with &${this.group}`);
      }
      this.opened = true;
      this.firstLine = line;
      text = text.slice(opening[0].length);
    } else if (DATA_LINE.test(text)) {
      throw this.problem('unclosed-header', line, `"${excerpt(text)}"`, 'the end of the header, &END or /');
    }
    const { kept, closed } = untilEnd(text);
    this.text += `${kept}\n`;
    if (this.text.length > MAX_HEADER_BYTES) throw this.unclosed(line);
    return closed;
  }

  /** For a file that ended inside the header. */
  unclosed(line: number): InputError {
    return this.opened
      ? this.problem('unclosed-header', line, 'no end of the header', '&END or /')
      : this.problem('bad-header', line, 'no header', `a header that opens with &${this.group}`);
  }

  parse(): Namelist {
    const keys = new Map<string, { values: string[]; line: number }>();
    const found = [...this.text.matchAll(KEY)];
    let [line, counted] = [this.firstLine, 0];
    found.forEach((match, i) => {
      const key = match[1].toUpperCase();
      for (; counted < match.index; counted++) if (this.text[counted] === '\n') line++;
      const from = match.index + match[0].length;
      const body = this.text.slice(from, found[i + 1]?.index ?? this.text.length);
      const written = body.split(/[\s,;]+/).filter((value) => value !== '');
      const count = written.reduce((sum, value) => sum + repetitions(value).count, 0);
      if (count > MAX_VALUES) {
        const found = `${key} with ${count} values`;
        throw this.problem('bad-header', line, found, `at most ${MAX_VALUES}`, `Correct ${key}.`);
      }
      const values = written.flatMap(repeated);
      const earlier = keys.get(key)?.values;
      if (earlier && earlier.join(' ') !== values.join(' ')) {
        const both = `${excerpt(earlier.join(' '))} and ${excerpt(values.join(' '))}`;
        throw this.problem(
          'bad-header',
          line,
          `${key} twice, ${both}`,
          'one value',
          'Remove one of the two.',
        );
      }
      keys.set(key, { values, line });
    });
    return keys;
  }

  private problem(
    code: string,
    line: number,
    found: string,
    expected: string,
    mend = MENDS[code] ??
      `Give a file that starts with a namelist such as "&${this.group} NORB=8,NELEC=8,MS2=0, &END".`,
  ): InputError {
    return new InputError({
      code,
      where: `${this.path}:${line}`,
      found,
      expected,
      mend,
    });
  }
}

export const excerpt = (text: string): string => {
  const clean = text.trim().replace(/[^\x20-\x7e]/g, '?');
  return clean.length > 60 ? `${clean.slice(0, 60)}…` : clean;
};

/** A line of the group up to its end mark and without a comment; quoted text may hold either. */
function untilEnd(text: string): { kept: string; closed: boolean } {
  const mark = /'[^']*'|"[^"]*"|!|\/|[&$]\s*END\b/gi;
  for (const match of text.matchAll(mark)) {
    if (/^['"]/.test(match[0])) continue;
    return { kept: text.slice(0, match.index), closed: match[0] !== '!' };
  }
  return { kept: text, closed: false };
}

/** Fortran's repeat count: `8*1` stands for eight ones. */
function repetitions(value: string): { count: number; once: string } {
  const match = /^(\d{1,4})\*(.+)$/.exec(value);
  return match ? { count: Number(match[1]), once: match[2] } : { count: 1, once: value };
}

function repeated(value: string): string[] {
  const { count, once } = repetitions(value);
  return new Array<string>(count).fill(once);
}

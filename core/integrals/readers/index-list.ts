import { InputError, type JobContext } from '../../job';
import type { ByteSource } from '../source';
import { refuseEmpty } from './chunks';
import { FIELD, FieldScanner } from './field-scanner';
import { MAX_ARRAY_BYTES } from './limits';
import { forEachLine } from './text-lines';

/** How the lines of an index–value list are laid out. */
export interface IndexListFormat {
  /** In file order: `component`, index names (`p`, `q`, …), and `value` or `re` and `im`. */
  readonly columns: readonly string[];
  /** Number of the first orbital in the file. */
  readonly base: 0 | 1;
  /** Labels that the component column may hold, e.g. x y z; it may also number them from `base`. */
  readonly components: readonly string[];
  /** Upper bound of the indices; null while it is not known. */
  readonly orbitals: number | null;
}

/** Entries of an index–value list, in file order. */
export interface IndexList {
  readonly origin: string;
  readonly count: number;
  /** count × number of indices, 0-based, in alphabetical order of their names (p q r s). */
  readonly indices: Int32Array;
  /** Position in `components`, for each entry; null where there is no component column. */
  readonly components: Int32Array | null;
  readonly re: Float64Array;
  /** null where the list has a `value` column. */
  readonly im: Float64Array | null;
  /** Line number in the file, from 1, for each entry. */
  readonly lines: Int32Array;
}

const COMMENT = [33, 35]; // ! and #

/**
 * Reads lines of indices and a value, e.g. `i j value` or `x i j k l value`. Everything after `#` or `!` is
 * a comment; blank lines are skipped; fields are separated by blanks or commas.
 * @throws InputError with file and line.
 */
export async function readIndexList(
  source: ByteSource,
  format: IndexListFormat,
  context: JobContext,
): Promise<IndexList> {
  refuseEmpty(source);
  const reader = new ListReader(source.path, format);
  await forEachLine(source, context, (bytes, start, end, line) => reader.line(bytes, start, end, line));
  return reader.finish();
}

type Column =
  | { readonly kind: 'component' | 're' | 'im' }
  | { readonly kind: 'index'; readonly position: number; readonly name: string };

const MENDS: Readonly<Record<string, string>> = {
  'index-out-of-range': 'Correct this line, or the number of orbitals in the recipe.',
  'index-zero':
    'If the list counts from 0, set "base": 0 under "list" in the recipe; else correct this line.',
  'too-few-fields':
    'Correct this line, or the columns in the recipe; if it is the last line, the file was cut short.',
  'not-finite': 'Compute the integrals again: the program that wrote them divided by zero or overflowed.',
};

class ListReader {
  private readonly scanner = new FieldScanner();
  private readonly columns: readonly Column[];
  private readonly rank: number;
  private readonly hasIm: boolean;
  private readonly hasComponent: boolean;
  private count = 0;
  private indices = new Int32Array(0);
  private components = new Int32Array(0);
  private re = new Float64Array(0);
  private im = new Float64Array(0);
  private lines = new Int32Array(0);

  constructor(
    private readonly path: string,
    private readonly format: IndexListFormat,
  ) {
    const values = new Set(['component', 'value', 're', 'im']);
    const names = format.columns.filter((name) => !values.has(name)).sort();
    this.rank = names.length;
    this.hasIm = format.columns.includes('im');
    this.hasComponent = format.columns.includes('component');
    this.columns = format.columns.map((name): Column => {
      if (name === 'component' || name === 'im') return { kind: name };
      if (name === 'value' || name === 're') return { kind: 're' };
      return { kind: 'index', position: names.indexOf(name), name };
    });
  }

  line(bytes: Uint8Array, start: number, lineEnd: number, line: number): void {
    const { scanner, columns, rank } = this;
    let end = start;
    while (end < lineEnd && !COMMENT.includes(bytes[end])) end++;
    scanner.reset(bytes, start, end);
    if (scanner.peek() < 0) return;
    if (this.count === this.lines.length) this.grow(line);
    const entry = this.count;
    for (const column of columns) {
      if (column.kind === 'index')
        this.indices[entry * rank + column.position] = this.index(column.name, line);
      else if (column.kind === 'component') this.components[entry] = this.component(line);
      else if (column.kind === 're') this.re[entry] = this.number(line);
      else this.im[entry] = this.number(line);
    }
    if (scanner.peek() >= 0) {
      scanner.start = scanner.position;
      throw this.problem('too-many-fields', line, `"${scanner.text()}" after the last column`, this.shape());
    }
    this.lines[entry] = line;
    this.count++;
  }

  finish(): IndexList {
    const { count, rank } = this;
    if (count === 0) throw this.problem('no-entries', 1, 'no entries', this.shape());
    return {
      origin: this.path,
      count,
      indices: this.indices.slice(0, count * rank),
      components: this.hasComponent ? this.components.slice(0, count) : null,
      re: this.re.slice(0, count),
      im: this.hasIm ? this.im.slice(0, count) : null,
      lines: this.lines.slice(0, count),
    };
  }

  private grow(line: number): void {
    const size = Math.max(1024, this.count * 2);
    if (size * (this.rank * 4 + 24) > MAX_ARRAY_BYTES) {
      throw this.problem('too-large', line, `over ${this.count} entries`, 'a smaller list or a binary array');
    }
    this.indices = extended(this.indices, size * this.rank);
    if (this.hasComponent) this.components = extended(this.components, size);
    this.re = extendedDoubles(this.re, size);
    if (this.hasIm) this.im = extendedDoubles(this.im, size);
    this.lines = extended(this.lines, size);
  }

  private index(name: string, line: number): number {
    const { scanner, format } = this;
    const outcome = scanner.integer();
    if (outcome === FIELD.missing) throw this.problem('too-few-fields', line, 'too few fields', this.shape());
    if (outcome !== FIELD.ok) {
      throw this.problem('bad-index', line, `"${scanner.text()}"`, `a whole number as index ${name}`);
    }
    const index = scanner.value - format.base;
    const limit = format.orbitals ?? 400;
    if (index >= 0 && index < limit) return index;
    const expected = `an index from ${format.base} to ${limit - 1 + format.base}`;
    const mend = scanner.value === 0 ? MENDS['index-zero'] : MENDS['index-out-of-range'];
    throw this.problem('index-out-of-range', line, `index ${name} = ${scanner.text()}`, expected, mend);
  }

  private component(line: number): number {
    const { scanner, format } = this;
    if (scanner.peek() < 0) throw this.problem('too-few-fields', line, 'too few fields', this.shape());
    scanner.start = scanner.position;
    const text = scanner.text();
    scanner.position += text.length;
    const labels = format.components;
    const at = labels.indexOf(text.toLowerCase());
    const number = /^\d{1,3}$/.test(text) ? Number(text) - format.base : -1;
    const found = at >= 0 ? at : number;
    if (found >= 0 && found < labels.length) return found;
    throw this.problem('bad-component', line, `component "${text}"`, `one of ${labels.join(', ')}`);
  }

  private number(line: number): number {
    const { scanner } = this;
    const outcome = scanner.number();
    if (outcome === FIELD.ok) return scanner.value;
    if (outcome === FIELD.missing) throw this.problem('too-few-fields', line, 'too few fields', this.shape());
    const code = outcome === FIELD.notFinite ? 'not-finite' : 'bad-number';
    throw this.problem(
      code,
      line,
      `"${scanner.text()}"`,
      code === 'not-finite' ? 'a finite number' : 'a number',
    );
  }

  private shape(): string {
    return `lines "${this.format.columns.join(' ')}"`;
  }

  private problem(
    code: string,
    line: number,
    found: string,
    expected: string,
    mend = MENDS[code] ?? 'Correct this line, or the columns in the recipe.',
  ): InputError {
    return new InputError({ code, where: `${this.path}:${line}`, found, expected, mend });
  }
}

function extended(array: Int32Array<ArrayBuffer>, size: number): Int32Array<ArrayBuffer> {
  const out = new Int32Array(size);
  out.set(array);
  return out;
}

function extendedDoubles(array: Float64Array<ArrayBuffer>, size: number): Float64Array<ArrayBuffer> {
  const out = new Float64Array(size);
  out.set(array);
  return out;
}

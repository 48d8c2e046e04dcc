import { InputError } from '../../job';
import { FIELD, FieldScanner } from './field-scanner';

/** What the four indices of a line say the value is. */
export type EntryKind = 'two-electron' | 'one-electron' | 'orbital-energy' | 'constant';

const CUT_SHORT = 'Correct this line; if it is the last one, the file was cut short: write or copy it again.';
const TOO_NARROW =
  'Fortran writes stars where a field is too narrow: write the file again with a wider format.';
const MENDS: Readonly<Record<string, string>> = {
  'index-out-of-range': 'Correct NORB in the header or this line.',
  'bad-indices': 'Indices count from 1 and 0 stands for none: correct this line, or write the file again.',
  'not-finite': 'Compute the integrals again: the program that wrote them divided by zero or overflowed.',
};

/**
 * One line of integrals: `value i j k l`, or `(re,im) i j k l`. Fields are overwritten by each line; indices
 * are 1-based, 0 where the line has none.
 */
export class EntryParser {
  kind: EntryKind = 'constant';
  re = 0;
  im = 0;
  i = 0;
  j = 0;
  k = 0;
  l = 0;
  complex = false;
  /** True where a line has more than the five fields. */
  trailing = false;
  private readonly scanner = new FieldScanner();

  constructor(
    private readonly path: string,
    private readonly orbitals: number,
  ) {}

  /** @returns false for a blank line. @throws InputError naming the line. */
  parse(bytes: Uint8Array, start: number, end: number, line: number): boolean {
    const { scanner } = this;
    scanner.reset(bytes, start, end);
    const first = scanner.peek();
    if (first < 0) return false;
    this.complex = first === 40;
    if (this.complex) {
      scanner.skip();
      this.re = this.number(line);
      this.im = this.number(line);
      if (scanner.peek() !== 41) {
        throw this.problem('bad-number', line, `"${scanner.text()}" without ")"`, 'a complex value (re,im)');
      }
      scanner.skip();
    } else {
      this.re = this.number(line);
      this.im = 0;
    }
    this.i = this.index(line);
    this.j = this.index(line);
    this.k = this.index(line);
    this.l = this.index(line);
    this.trailing = scanner.peek() >= 0;
    if (this.l !== 0 && this.k !== 0 && this.j !== 0 && this.i !== 0) this.kind = 'two-electron';
    else if (this.k !== 0 || this.l !== 0 || (this.i === 0 && this.j !== 0)) {
      const found = `indices ${this.i} ${this.j} ${this.k} ${this.l}`;
      throw this.problem('bad-indices', line, found, 'i j k l, i j 0 0, i 0 0 0 or 0 0 0 0');
    } else if (this.j !== 0) this.kind = 'one-electron';
    else this.kind = this.i !== 0 ? 'orbital-energy' : 'constant';
    return true;
  }

  private number(line: number): number {
    const { scanner } = this;
    const outcome = scanner.number();
    if (outcome === FIELD.ok) return scanner.value;
    if (outcome === FIELD.missing) throw this.short(line);
    if (outcome === FIELD.notFinite) {
      throw this.problem('not-finite', line, `"${scanner.text()}"`, 'a finite number');
    }
    throw this.problem('bad-number', line, `"${scanner.text()}"`, 'a number');
  }

  private index(line: number): number {
    const { scanner } = this;
    const outcome = scanner.integer();
    if (outcome === FIELD.missing) throw this.short(line);
    if (outcome !== FIELD.ok) {
      throw this.problem('bad-index', line, `"${scanner.text()}"`, 'a whole number as index');
    }
    if (scanner.value < 0 || scanner.value > this.orbitals) {
      const expected = `an index from 1 to NORB=${this.orbitals}, or 0 for none`;
      throw this.problem('index-out-of-range', line, `index ${scanner.text()}`, expected);
    }
    return scanner.value;
  }

  private short(line: number): InputError {
    return this.problem('too-few-fields', line, 'too few fields', 'a value and four indices');
  }

  private problem(code: string, line: number, found: string, expected: string): InputError {
    const mend = MENDS[code] ?? (found.startsWith('"**') ? TOO_NARROW : CUT_SHORT);
    return new InputError({ code, where: `${this.path}:${line}`, found, expected, mend });
  }
}

import { InputError } from '../../job';
import { type ElementType, isReadable } from './elements';
import { excerpt } from './namelist';

/** What the header of an `.npy` file says. */
export interface NpyHeader {
  readonly type: ElementType;
  readonly fortranOrder: boolean;
  readonly shape: readonly number[];
}

type Literal = string | boolean | number | Literal[];

/**
 * The header dictionary of an `.npy` file: a Python literal with the keys descr, fortran_order and shape
 * (NumPy Enhancement Proposal 1). It is read as a literal, never evaluated.
 */
export function parseNpyHeader(where: string, text: string): NpyHeader {
  const problem = (found: string, expected: string, mend: string): InputError =>
    new InputError({ code: 'bad-header', where, found, expected, mend });
  const literal = new LiteralParser(text);
  const keys = literal.dictionary();
  const descr = keys?.get('descr');
  const fortranOrder = keys?.get('fortran_order');
  const shape = keys?.get('shape');
  if (
    typeof fortranOrder !== 'boolean' ||
    descr === undefined ||
    !Array.isArray(shape) ||
    !shape.every((extent) => typeof extent === 'number' && Number.isSafeInteger(extent) && extent >= 0)
  ) {
    throw problem(
      `the header ${excerpt(text)}`,
      "{'descr': '<f8', 'fortran_order': False, 'shape': (…)}",
      'The file is damaged: save the array again with numpy.save.',
    );
  }
  const type = typeof descr === 'string' ? elementType(descr) : null;
  if (type === null) {
    const object = typeof descr === 'string' && descr.includes('O');
    throw new InputError({
      code: object ? 'object-array' : 'bad-element-type',
      where,
      found: object
        ? 'an object array (pickled Python objects)'
        : `elements of type ${excerpt(typeof descr === 'string' ? descr : 'structure')}`,
      expected: 'float64, float32, complex128, complex64 or integers',
      mend: 'Convert it before saving: numpy.save(name, array.astype(numpy.float64)).',
    });
  }
  return { type, fortranOrder, shape: shape as number[] };
}

function elementType(descr: string): ElementType | null {
  const match = /^([<>|=])([fciub])(\d{1,2})$/.exec(descr);
  if (match === null) return null;
  const kinds = { f: 'float', c: 'complex', i: 'signed', u: 'unsigned', b: 'unsigned' } as const;
  const type: ElementType = {
    kind: kinds[match[2] as keyof typeof kinds],
    bytes: Number(match[3]),
    littleEndian: match[1] !== '>',
  };
  return isReadable(type) ? type : null;
}

/** Strings, True, False, integers, tuples and lists, in a dictionary with string keys. */
class LiteralParser {
  private at = 0;

  constructor(private readonly text: string) {}

  dictionary(): Map<string, Literal> | null {
    const keys = new Map<string, Literal>();
    if (!this.take('{')) return null;
    while (!this.take('}')) {
      const key = this.value(0);
      if (typeof key !== 'string' || !this.take(':')) return null;
      const value = this.value(0);
      if (value === null) return null;
      keys.set(key, value);
      if (!this.take(',') && !this.see('}')) return null;
    }
    return this.text.slice(this.at).trim() === '' ? keys : null;
  }

  private value(depth: number): Literal | null {
    this.blanks();
    const match = /^(?:'([^'\\]*)'|"([^"\\]*)"|(True|False)\b|(\d{1,18})L?)/.exec(this.text.slice(this.at));
    if (match !== null) {
      this.at += match[0].length;
      if (match[3] !== undefined) return match[3] === 'True';
      if (match[4] !== undefined) return Number(match[4]);
      return match[1] ?? match[2];
    }
    const close = this.take('(') ? ')' : this.take('[') ? ']' : null;
    if (close === null || depth > 8) return null;
    const items: Literal[] = [];
    while (!this.take(close)) {
      const item = this.value(depth + 1);
      if (item === null) return null;
      items.push(item);
      if (!this.take(',') && !this.see(close)) return null;
    }
    return items;
  }

  private blanks(): void {
    while (/\s/.test(this.text[this.at] ?? '')) this.at++;
  }

  private see(mark: string): boolean {
    this.blanks();
    return this.text[this.at] === mark;
  }

  private take(mark: string): boolean {
    const seen = this.see(mark);
    if (seen) this.at++;
    return seen;
  }
}

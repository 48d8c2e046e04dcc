/** What a field's text means, or why it means nothing. */
export type Parsed<T> = { readonly value: T } | { readonly problem: string };

/** A text field that keeps its last sound value while the user is typing something else. */
export class Field<T> {
  text = $state('');
  problem = $state<string | null>(null);
  #value = $state.raw() as T;
  readonly #parse: (text: string) => Parsed<T>;

  constructor(text: string, parse: (text: string) => Parsed<T>) {
    this.text = text;
    this.#parse = parse;
    const parsed = parse(text);
    if ('problem' in parsed) throw new Error(`the initial text is unsound: ${parsed.problem}`);
    this.#value = parsed.value;
  }

  get value(): T {
    return this.#value;
  }

  edit(text: string): void {
    this.text = text;
    const parsed = this.#parse(text);
    if ('problem' in parsed) {
      this.problem = parsed.problem;
    } else {
      this.problem = null;
      this.#value = parsed.value;
    }
  }
}

/** Reads a plain number; a comma is a decimal sign, spaces group digits. */
export function parseNumber(text: string): number {
  const plain = text
    .trim()
    .replace(/[\s\u202f\u00a0]/g, '')
    .replace(',', '.');
  return /^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i.test(plain) ? Number(plain) : Number.NaN;
}

/** A number in a range, said in words where it is not. */
export function numberIn(low: number, high: number, what: string): (text: string) => Parsed<number> {
  return (text) => {
    const value = parseNumber(text);
    return value >= low && value <= high ? { value } : { problem: `expected ${what}` };
  };
}

import { HIGH, LOW, MAX_POWER, MIN_POWER } from './powers-of-ten';

/** Outcome of reading one field. */
export const FIELD = { ok: 0, missing: 1, malformed: 2, notFinite: 3 } as const;

const SPLITTER = 2 ** 27 + 1;
const EXACT_POWERS = Float64Array.from({ length: 23 }, (_, q) => Number(`1e${q}`));

const isBlank = (c: number): boolean => c === 32 || c === 9 || c === 13 || c === 44;
const isDigit = (c: number): boolean => c >= 48 && c <= 57;
/** Bytes after which a field has ended: blanks, comma, parentheses. */
const isEnd = (c: number): boolean => isBlank(c) || c === 40 || c === 41;

/**
 * Reads numbers from the bytes of one line, without making strings. Fields are separated by blanks or commas.
 * `number()` leaves its result in `value`, `integer()` too; both return one of {@link FIELD}.
 */
export class FieldScanner {
  bytes: Uint8Array = new Uint8Array(0);
  position = 0;
  end = 0;
  value = 0;
  /** Where the last field began, for messages. */
  start = 0;

  reset(bytes: Uint8Array, start: number, end: number): void {
    this.bytes = bytes;
    this.position = start;
    this.end = end;
  }

  /** Moves to the next byte that is neither blank nor comma and returns it, or −1 at the end of the line. */
  peek(): number {
    const { bytes, end } = this;
    let at = this.position;
    while (at < end && isBlank(bytes[at])) at++;
    this.position = at;
    return at < end ? bytes[at] : -1;
  }

  /** Steps over one byte that `peek` has shown. */
  skip(): void {
    this.position++;
  }

  /** The last field as text for a message: at most 40 characters, only printable ones. */
  text(): string {
    const { bytes, end, start } = this;
    let stop = start;
    while (stop < end && !(stop > start ? isEnd(bytes[stop]) : isBlank(bytes[stop]))) stop++;
    const clipped = bytes.subarray(start, Math.min(stop, start + 40));
    const shown = Array.from(clipped, (c) =>
      c >= 32 && c < 127 ? String.fromCharCode(c) : `\\x${c.toString(16).padStart(2, '0')}`,
    ).join('');
    return stop - start > 40 ? `${shown}…` : shown;
  }

  /** A decimal integer, optionally signed. */
  integer(): number {
    if (this.peek() < 0) return FIELD.missing;
    const { bytes, end } = this;
    let at = this.position;
    this.start = at;
    const negative = bytes[at] === 45;
    if (negative || bytes[at] === 43) at++;
    const first = at;
    let value = 0;
    while (at < end && isDigit(bytes[at])) value = value * 10 + (bytes[at++] - 48);
    this.position = at;
    if (at === first || (at < end && !isEnd(bytes[at]))) return FIELD.malformed;
    this.value = negative ? -value : value;
    return FIELD.ok;
  }

  /**
   * A decimal number as C or Fortran writes it: exponent letter E, D or Q in either case, or none before a
   * signed exponent (`1.5-101`). The result is the nearest double, as `Number()` gives it.
   */
  number(): number {
    if (this.peek() < 0) return FIELD.missing;
    const { bytes, end } = this;
    let at = this.position;
    this.start = at;
    const negative = bytes[at] === 45;
    if (negative || bytes[at] === 43) at++;
    // Up to 15 + 15 significant digits, in two integers that doubles hold exactly.
    let high = 0;
    let low = 0;
    let digits = 0;
    let dropped = false;
    let exponent = 0;
    let any = false;
    let point = false;
    for (; at < end; at++) {
      const c = bytes[at];
      if (c >= 48 && c <= 57) {
        any = true;
        if (digits < 15) {
          high = high * 10 + (c - 48);
          if (high !== 0) digits++;
          if (point) exponent--;
        } else if (digits < 30) {
          low = low * 10 + (c - 48);
          digits++;
          if (point) exponent--;
        } else {
          dropped = dropped || c !== 48;
          if (!point) exponent++;
        }
      } else if (c === 46 && !point) point = true;
      else break;
    }
    if (!any) return this.notANumber(at);
    if (at < end && !isEnd(bytes[at])) {
      const letter = bytes[at] | 32;
      const hasLetter = letter === 101 || letter === 100 || letter === 113;
      if (hasLetter) at++;
      const sign = at < end ? bytes[at] : 0;
      if (sign === 43 || sign === 45) at++;
      else if (!hasLetter) return this.notANumber(at);
      const first = at;
      let power = 0;
      while (at < end && isDigit(bytes[at])) power = Math.min(99999, power * 10 + (bytes[at++] - 48));
      if (at === first || (at < end && !isEnd(bytes[at]))) return this.notANumber(at);
      exponent += sign === 45 ? -power : power;
    }
    this.position = at;
    let magnitude: number;
    if (high === 0) magnitude = 0;
    else if (digits <= 15 && exponent >= -22 && exponent <= 22) {
      // Both operands are exact doubles, so the one rounding of IEEE 754 is the right one.
      magnitude = exponent < 0 ? high / EXACT_POWERS[-exponent] : high * EXACT_POWERS[exponent];
    } else {
      magnitude = dropped ? Number.NaN : scale(high, low, digits > 15 ? digits - 15 : 0, exponent);
      // NaN: the quick way could not decide the last bit.
      if (Number.isNaN(magnitude)) magnitude = this.exactly(at);
    }
    if (magnitude === Number.POSITIVE_INFINITY) return FIELD.notFinite;
    this.value = negative ? -magnitude : magnitude;
    return FIELD.ok;
  }

  private exactly(end: number): number {
    let text = '';
    for (let i = this.start; i < end; i++) text += String.fromCharCode(this.bytes[i]);
    const plain = text.replace(/^[+-]/, '').replace(/[dq]/i, 'e');
    return Number(/e/i.test(plain) ? plain : plain.replace(/[+-]/, 'e$&'));
  }

  private notANumber(at: number): number {
    this.position = at;
    const word = this.text().toLowerCase();
    return /^\(?[+-]?(nan|inf)/.test(word) ? FIELD.notFinite : FIELD.malformed;
  }
}

/**
 * The double nearest to (high·10^n + low)·10^q, or NaN where this arithmetic cannot decide it.
 * High, low: integers below 10^15; 0 ≤ n ≤ 15.
 *
 * The integer W = high·10^n + low < 2^100 is held exactly as s + t, |t| ≤ 2^-52·s. Times HIGH + LOW of 10^q:
 * the product s·HIGH is split exactly (Dekker), the rest is computed in doubles. What is lost adds up to less
 * than 2^-102 of the product (each of the six roundings and the omitted t·LOW is at most 2^-104). Rounding is
 * monotonic: if both ends of an interval 2^-98 wide around the computed value round to r, the true value does.
 */
function scale(high: number, low: number, n: number, q: number): number {
  if (q < MIN_POWER || q > MAX_POWER) return Number.NaN;
  let s = high;
  let t = 0;
  if (n > 0) {
    const ten = EXACT_POWERS[n];
    const p = high * ten;
    const a = SPLITTER * high;
    const ah = a - (a - high);
    const al = high - ah;
    const b = SPLITTER * ten;
    const bh = b - (b - ten);
    const bl = ten - bh;
    const e = al * bl - (p - ah * bh - al * bh - ah * bl);
    s = p + low;
    // Two-sum of p ≥ low ≥ 0 or of any order: Knuth's six operations.
    const v = s - p;
    t = p - (s - v) + (low - v) + e;
  }
  const ph = HIGH[q - MIN_POWER];
  const x = s * ph;
  const a = SPLITTER * s;
  const ah = a - (a - s);
  const al = s - ah;
  const b = SPLITTER * ph;
  const bh = b - (b - ph);
  const bl = ph - bh;
  const y = al * bl - (x - ah * bh - al * bh - ah * bl);
  const z = y + (s * LOW[q - MIN_POWER] + t * ph);
  const r = x + z;
  const u = z - (r - x);
  const slack = r * 2 ** -98;
  return r + (u + slack) === r && r + (u - slack) === r ? r : Number.NaN;
}

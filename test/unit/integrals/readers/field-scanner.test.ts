import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { FIELD, FieldScanner } from '../../../../core/integrals/readers/field-scanner';
import { HIGH, LOW, MAX_POWER, MIN_POWER } from '../../../../core/integrals/readers/powers-of-ten';

const encoder = new TextEncoder();
function scan(text: string): { outcome: number; value: number } {
  const bytes = encoder.encode(text);
  const scanner = new FieldScanner();
  scanner.reset(bytes, 0, bytes.length);
  const outcome = scanner.number();
  return { outcome, value: scanner.value };
}

/** A double as an exact fraction times a power of two. */
function exactDecimal(numerator: bigint, power: number): string {
  // numerator · 2^power, printed exactly: a negative power p gives p decimals of numerator · 5^p.
  if (power >= 0) return (numerator * 2n ** BigInt(power)).toString();
  const digits = (numerator * 5n ** BigInt(-power)).toString().padStart(-power + 1, '0');
  return `${digits.slice(0, power)}.${digits.slice(power)}`;
}

describe('FieldScanner.number', () => {
  it.each([
    ['0.1', 0.1],
    ['-.5', -0.5],
    ['+3.', 3],
    ['1', 1],
    ['1.5D-03', 1.5e-3],
    ['1.5d+03', 1500],
    ['2.5q2', 250],
    ['0.123456789012345678-101', 1.2345678901234568e-102],
    ['1.25+02', 125],
    ['4.8538046261037243E-01', 4.8538046261037243e-1],
    ['9007199254740993', 9007199254740992],
    ['9007199254740995', 9007199254740996],
    ['0.000000000000000000000000000000000000000001', 1e-42],
    ['123456789012345678901234567890123456789012', 1.2345678901234568e41],
    ['123456789012345678901234567890.00000001', 1.2345678901234568e29],
    ['1e-320', 1e-320],
    ['1e-999', 0],
  ])('reads %s', (text, value) => {
    expect(scan(text)).toEqual({ outcome: FIELD.ok, value });
  });

  it('keeps the sign of zero', () => {
    expect(Object.is(scan('-0.0').value, -0)).toBe(true);
  });

  it.each(['', 'x', '1.2.3', '1e', '1e+', '--1', '.', '-', '1,5x', '0x10', '1_0'])('refuses %j', (text) => {
    const outcome = text === '1,5x' ? FIELD.ok : text === '' ? FIELD.missing : FIELD.malformed;
    expect(scan(text).outcome).toBe(outcome); // a comma ends a field, so 1,5x is 1 and then 5x
  });

  it.each(['NaN', '-inf', 'Infinity', '1e999', '-1D+400'])('calls %s not finite', (text) => {
    expect(scan(text).outcome).toBe(FIELD.notFinite);
  });

  it('gives the nearest double of any printed double, as Number() does', () => {
    const printed = fc
      .tuple(fc.double({ noNaN: true, noDefaultInfinity: true }), fc.integer({ min: 0, max: 25 }), fc.nat(3))
      .map(([x, digits, how]) => {
        if (how === 0) return String(x);
        if (how === 1) return x.toPrecision(Math.max(1, digits));
        if (how === 2) return x.toExponential(digits);
        return Math.abs(x) < 1e20 ? x.toFixed(digits) : String(x);
      });
    fc.assert(
      fc.property(printed, (text) => {
        fc.pre(Number.isFinite(Number(text))); // rounded up beyond the largest double
        expect(scan(text).value).toBe(Number(text));
        expect(scan(text.replace('e', 'D')).value).toBe(Number(text));
      }),
      { numRuns: 5000 },
    );
  });

  it('decides decimals on and beside the midpoint of two doubles, as Number() does', () => {
    // The hardest inputs: (2m+1)·2^(p-1), exactly between m·2^p and (m+1)·2^p, and one unit of the last digit off.
    const mantissa = fc.bigInt({ min: 2n ** 52n, max: 2n ** 53n - 1n });
    fc.assert(
      fc.property(mantissa, fc.integer({ min: -45, max: 30 }), (m, power) => {
        const midpoint = exactDecimal(2n * m + 1n, power);
        // A decimal fraction ends in 5, an odd multiple of a power of ½; an integer gets decimals.
        const fraction = midpoint.includes('.');
        const above = fraction ? `${midpoint}1` : `${midpoint}.1`;
        const below = fraction ? `${midpoint.slice(0, -1)}49` : `${BigInt(midpoint) - 1n}.9`;
        for (const text of [midpoint, above, below]) {
          expect(scan(text).value, text).toBe(Number(text));
          // Cut to the digits that the quick way takes, still next to the midpoint.
          const cut = text.includes('.') ? text.slice(0, 31) : text;
          expect(scan(cut).value, cut).toBe(Number(cut));
        }
      }),
      { numRuns: 3000 },
    );
  });

  it('reads random digit strings of 1 to 40 digits with any exponent, as Number() does', () => {
    const text = fc
      .tuple(fc.stringMatching(/^[0-9]{1,40}$/), fc.nat(40), fc.integer({ min: -330, max: 300 }))
      .map(([digits, point, exponent]) => `${digits.slice(0, point)}.${digits.slice(point)}0e${exponent}`);
    fc.assert(
      fc.property(text, (t) => {
        const value = Number(t);
        const read = scan(t);
        if (value === Number.POSITIVE_INFINITY) expect(read.outcome).toBe(FIELD.notFinite);
        else expect(read.value, t).toBe(value);
      }),
      { numRuns: 5000 },
    );
  });
});

describe('the table of powers of ten', () => {
  it('holds 10^q to a relative 2^-106, checked with exact integers', () => {
    const scaled = (x: number): bigint => {
      // x · 2^1000, exact for every |x| ≥ 2^-948 of at most 53 bits.
      let m = Math.abs(x);
      let power = 1000;
      while (!Number.isInteger(m)) {
        m *= 2;
        power--;
      }
      return (x < 0 ? -1n : 1n) * BigInt(m) * 2n ** BigInt(power);
    };
    for (let q = MIN_POWER; q <= MAX_POWER; q++) {
      const sum = scaled(HIGH[q - MIN_POWER]) + scaled(LOW[q - MIN_POWER]);
      // Compare sum / 2^1000 with 10^q without rounding.
      const left = q < 0 ? sum * 10n ** BigInt(-q) : sum;
      const right = (q < 0 ? 1n : 10n ** BigInt(q)) * 2n ** 1000n;
      const error = left > right ? left - right : right - left;
      expect(error * 2n ** 106n <= right, `10^${q}`).toBe(true);
    }
  });
});

describe('FieldScanner.integer', () => {
  it('reads signed integers and leaves words alone', () => {
    const bytes = encoder.encode(' 12,-3\t+4 x 5.0');
    const scanner = new FieldScanner();
    scanner.reset(bytes, 0, bytes.length);
    const seen: number[] = [];
    for (let i = 0; i < 3; i++) {
      expect(scanner.integer()).toBe(FIELD.ok);
      seen.push(scanner.value);
    }
    expect(seen).toEqual([12, -3, 4]);
    expect(scanner.integer()).toBe(FIELD.malformed);
    expect(scanner.text()).toBe('x');
  });
});

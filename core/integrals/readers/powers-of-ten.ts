/** Smallest and largest decimal exponent of the table. Anything outside takes the slow, exact route. */
export const MIN_POWER = -100;
export const MAX_POWER = 60;

/**
 * 10^q as an unevaluated sum of two doubles, `HIGH + LOW`: HIGH is 10^q correctly rounded, LOW the correctly
 * rounded rest, so the relative error is at most 2^-106.
 */
export const HIGH = new Float64Array(MAX_POWER - MIN_POWER + 1);
export const LOW = new Float64Array(MAX_POWER - MIN_POWER + 1);

/** A finite positive double as mantissa × 2^exponent with an integer mantissa. */
function decompose(x: number): { mantissa: bigint; exponent: number } {
  let exponent = 0;
  let m = x;
  while (!Number.isInteger(m)) {
    m *= 2;
    exponent--;
  }
  return { mantissa: BigInt(m), exponent };
}

/** Correctly rounded a / b for positive b; the quotient must lie far from the ends of the double range. */
function divide(a: bigint, b: bigint): number {
  if (a === 0n) return 0;
  const negative = a < 0n;
  const numerator = negative ? -a : a;
  // Scaled so that the integer quotient has over 60 bits; a sticky bit then makes Number() round correctly.
  const shift = Math.max(0, 64 - (numerator.toString(2).length - b.toString(2).length));
  const scaled = numerator << BigInt(shift);
  const quotient = (scaled / b) * 2n + (scaled % b === 0n ? 0n : 1n);
  const value = Number(quotient) * 2 ** -(shift + 1);
  return negative ? -value : value;
}

for (let q = MIN_POWER; q <= MAX_POWER; q++) {
  const high = Number(`1e${q}`);
  const { mantissa, exponent } = decompose(high);
  const unit = 1n << BigInt(-exponent);
  const ten = 10n ** BigInt(Math.abs(q));
  // 10^q − high over a common denominator, exactly.
  const rest = q >= 0 ? ten * unit - mantissa : unit - mantissa * ten;
  HIGH[q - MIN_POWER] = high;
  LOW[q - MIN_POWER] = divide(rest, q >= 0 ? unit : unit * ten);
}

/**
 * How figures are written for people: in the terminal, in the window and in reports alike. Files for programs
 * (JSON, CSV) never use these: they carry full precision and no grouping.
 */

/** Between groups of three digits. */
const THIN_SPACE = '\u202f';
const MINUS = '\u2212';
/** Not applicable. */
export const NOT_APPLICABLE = '–';

const SUPERSCRIPTS = '⁰¹²³⁴⁵⁶⁷⁸⁹';

/** `1234567` → `1 234 567` with narrow no-break spaces; also for the digits before a decimal point. */
function grouped(digits: string): string {
  return digits.replace(/\B(?=(\d{3})+(?!\d))/g, THIN_SPACE);
}

const signed = (value: number, text: string): string => (value < 0 ? `${MINUS}${text}` : text);

/** A count: exact up to 999 999, beyond it three digits as `1.23×10⁹`. */
export function formatCount(value: number): string {
  const size = Math.abs(Math.round(value));
  if (size <= 999_999) return signed(value, grouped(String(size)));
  const [mantissa, exponent] = size.toExponential(2).split('e') as [string, string];
  const power = [...String(Number(exponent))].map((digit) => SUPERSCRIPTS[Number(digit)]).join('');
  return signed(value, `${mantissa}×10${power}`);
}

/** A count with all its digits. */
export function formatExactCount(value: number): string {
  return signed(value, grouped(String(Math.abs(Math.round(value)))));
}

/** `value` with `digits` significant digits, never in exponent form between 1e-4 and 1e6. */
export function formatSignificant(value: number, digits: number): string {
  if (value === 0) return '0';
  const size = Math.abs(value);
  if (size < 1e-4 || size >= 1e6) {
    const [mantissa, exponent] = size.toExponential(digits - 1).split('e') as [string, string];
    const power = [...String(Math.abs(Number(exponent)))]
      .map((digit) => SUPERSCRIPTS[Number(digit)])
      .join('');
    return signed(value, `${mantissa}×10${Number(exponent) < 0 ? '⁻' : ''}${power}`);
  }
  const text = Number(size.toPrecision(digits));
  const decimals = Math.max(0, digits - 1 - Math.floor(Math.log10(text)));
  const [whole, fraction] = text.toFixed(decimals).split('.') as [string, string | undefined];
  return signed(value, fraction === undefined ? grouped(whole) : `${grouped(whole)}.${fraction}`);
}

/** A one-norm with its unit: four digits, in mEh below 0.1 Eh. `hartree` in hartree. */
export function formatOneNorm(hartree: number): string {
  if (hartree === 0) return '0 Eh';
  return Math.abs(hartree) < 0.1
    ? `${formatSignificant(hartree * 1e3, 4)} mEh`
    : `${formatSignificant(hartree, 4)} Eh`;
}

/** A quotient of two like quantities: two decimals; {@link NOT_APPLICABLE} where the divisor was zero. */
export function formatRatio(value: number | null): string {
  return value === null || !Number.isFinite(value)
    ? NOT_APPLICABLE
    : signed(value, Math.abs(value).toFixed(2));
}

/** Relative change as signed percent with one decimal; a change too small to show is said to be so. */
export function formatChange(from: number, to: number): string {
  if (from === to) return '0 %';
  if (from === 0) return NOT_APPLICABLE;
  const percent = (100 * (to - from)) / Math.abs(from);
  const size = Math.abs(percent);
  const sign = percent < 0 ? MINUS : '+';
  return size < 0.1 ? `${sign}< 0.1 %` : `${sign}${grouped(size.toFixed(1))} %`;
}

/** A share of a whole, 0…1, as percent with one decimal. */
export function formatShare(share: number): string {
  if (share === 0) return '0 %';
  return share < 0.001 ? '< 0.1 %' : `${(100 * share).toFixed(1)} %`;
}

/** A duration with the unit that suits it. */
export function formatDuration(seconds: number): string {
  if (seconds < 60) return `${formatSignificant(seconds, 2)} s`;
  if (seconds < 3600) return `${(seconds / 60).toFixed(1)} min`;
  if (seconds < 48 * 3600) return `${(seconds / 3600).toFixed(1)} h`;
  const days = seconds / 86_400;
  return days < 3650
    ? `${formatSignificant(days, days < 100 ? 3 : 4)} days`
    : `${formatSignificant(days / 365.25, 3)} years`;
}

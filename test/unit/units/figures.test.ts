import { describe, expect, it } from 'vitest';
import {
  formatChange,
  formatCount,
  formatDuration,
  formatExactCount,
  formatOneNorm,
  formatRatio,
  formatShare,
  formatSignificant,
} from '../../../core/units';

// Expected texts follow the rules of the figures themselves (SI Brochure 9th ed., 5.4.4: digits in groups of
// three by a thin space; U+2212 for minus), written out by hand.
describe('figures for people', () => {
  it.each([
    [0, '0'],
    [999, '999'],
    [1000, '1\u202f000'],
    [999_999, '999\u202f999'],
    [1_000_000, '1.00×10⁶'],
    [10_073_183_463, '1.01×10¹⁰'],
    [-2856, '\u22122\u202f856'],
  ])('count %d', (value, text) => expect(formatCount(value)).toBe(text));

  it('keeps every digit of an exact count', () => {
    expect(formatExactCount(10_073_183_463)).toBe('10\u202f073\u202f183\u202f463');
  });

  it.each([
    [16.4585, 4, '16.46'],
    [0.0008234, 4, '0.0008234'],
    [9.9999, 3, '10.0'],
    [12345.6, 4, '12\u202f350'],
    [3.2e-9, 2, '3.2×10⁻⁹'],
    [-1.5, 2, '\u22121.5'],
  ])('%d to %d digits', (value, digits, text) => expect(formatSignificant(value, digits)).toBe(text));

  it('writes one-norms in mEh below 0.1 Eh', () => {
    expect(formatOneNorm(16.45853)).toBe('16.46 Eh');
    expect(formatOneNorm(0.00113312)).toBe('1.133 mEh');
  });

  it.each([
    [100, 85.8, '\u221214.2 %'],
    [100, 100, '0 %'],
    [1e6, 1e6 + 1, '+< 0.1 %'],
    [0, 5, '–'],
  ])('change from %d to %d', (from, to, text) => expect(formatChange(from, to)).toBe(text));

  it('writes ratios, shares and durations', () => {
    expect(formatRatio(1.7183)).toBe('1.72');
    expect(formatRatio(null)).toBe('–');
    expect(formatShare(0.0004)).toBe('< 0.1 %');
    expect(formatShare(0.527)).toBe('52.7 %');
    expect(formatDuration(30)).toBe('30 s');
    expect(formatDuration(90)).toBe('1.5 min');
    expect(formatDuration(7200)).toBe('2.0 h');
    expect(formatDuration(4 * 86_400)).toBe('4.00 days');
  });
});

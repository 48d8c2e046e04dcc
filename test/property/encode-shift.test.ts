import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { countAbove, median, shiftedNorm } from '../../core/encode/shift';

const values = fc
  .array(fc.double({ min: -50, max: 50, noNaN: true }), { minLength: 1, maxLength: 12 })
  .map((list) => Float64Array.from(list).sort());

describe('median shift', () => {
  it('makes Σ|ε − c| least', () => {
    fc.assert(
      fc.property(values, fc.double({ min: -60, max: 60, noNaN: true }), (eps, c) => {
        const best = shiftedNorm(eps, 0, eps.length, median(eps));
        expect(best).toBeLessThanOrEqual(shiftedNorm(eps, 0, eps.length, c) + 1e-12);
      }),
    );
  });

  it('moves with the spectrum and changes sign with it', () => {
    fc.assert(
      fc.property(values, fc.integer({ min: -9, max: 9 }), (eps, c) => {
        expect(median(eps.map((x) => x + c))).toBeCloseTo(median(eps) + c, 10);
        expect(median(eps.map((x) => -x).reverse())).toBeCloseTo(-median(eps), 12);
      }),
    );
  });

  it('takes the midpoint of the two middle values, and leaves a row of an odd spectrum without weight', () => {
    expect(median(Float64Array.of(1, 2, 4, 9))).toBe(3);
    const odd = Float64Array.of(-1, 2, 5);
    expect(countAbove(odd, 0, 3, median(odd), 1e-9)).toBe(2);
    expect(median(new Float64Array(0))).toBe(0);
  });
});

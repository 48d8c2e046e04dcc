import { describe, expect, it } from 'vitest';
import { logicalError, patchQubits, SURFACE_CODE_DEFAULTS, surfaceCode } from '../../../core/estimate';

const WORK = { toffoli: 1e9, t: 0 };

describe('surface code', () => {
  // 0.1 (100 p)^((d+1)/2) at p = 1e-3, d = 29: 0.1 · 10^−15; 2 · 30² = 1800.
  it('follows the error and footprint formulas', () => {
    expect(logicalError(1e-3, 29)).toBeCloseTo(1e-16, 25);
    expect(patchQubits(29)).toBe(1800);
  });

  it('takes the least odd distance that keeps the failure probability', () => {
    const { distance, hours } = surfaceCode(1000, WORK, SURFACE_CODE_DEFAULTS);
    const failure = (d: number) => 1000 * (1e9 * 5.5 * d) * 0.25 * logicalError(1e-3, d);
    expect(distance % 2).toBe(1);
    expect(failure(distance)).toBeLessThanOrEqual(0.01);
    expect(failure(distance - 2)).toBeGreaterThan(0.01);
    expect(hours).toBeCloseTo((1e9 * 5.5 * distance) / 4 / 3.6e9, 9);
  });

  it('is limited by reactions once factories abound', () => {
    const many = { ...SURFACE_CODE_DEFAULTS, factories: 1000 };
    expect(surfaceCode(1000, WORK, many).hours).toBeCloseTo((1e9 * 10) / 3.6e9, 12);
  });

  it('makes two T states of one CCZ state', () => {
    const toffoli = surfaceCode(1000, WORK, SURFACE_CODE_DEFAULTS);
    const t = surfaceCode(1000, { toffoli: 0, t: 2e9 }, SURFACE_CODE_DEFAULTS);
    expect(t.hours).toBe(toffoli.hours);
  });

  it('refuses assumptions outside the formula', () => {
    const at = (change: object) => () => surfaceCode(10, WORK, { ...SURFACE_CODE_DEFAULTS, ...change });
    expect(at({ physicalError: 0.02 })).toThrow(/physicalError: 0.02; expected a rate/);
    expect(at({ factories: 0 })).toThrow(/factories: 0/);
    expect(at({ physicalError: 0.0099 })).toThrow(/no distance/);
    expect(at({ failure: 1 })).toThrow(/failure/);
  });
});

import { describe, expect, it } from 'vitest';
import { whatif } from '../../../core/estimate';

const DF = {
  method: 'double-factorised',
  spinOrbitals: 108,
  lambda: 294.8,
  factors: 360,
  rows: 13031,
  target: 1e-3,
} as const;

describe('whatif', () => {
  it('compares with a published row only where every parameter is the published one', () => {
    expect(whatif(DF).published!.stepToffoli).toBe(21753);
    expect(whatif({ ...DF, rows: 13030 }).published).toBeNull();
    expect(whatif({ ...DF, keepBits: 11 }).difference).toBeNull();
  });

  it('uses the published block for sparse and lets it be changed', () => {
    const sparse = {
      method: 'sparse',
      spinOrbitals: 108,
      lambda: 2135.3,
      coefficients: 705831,
      target: 1e-3,
    } as const;
    const published = whatif(sparse);
    const cheapest = whatif({ ...sparse, lookupBlock: 'auto' });
    expect(cheapest.step.toffoli).toBeLessThan(published.step.toffoli);
    expect(cheapest.logicalQubits).toBeGreaterThan(3 * published.logicalQubits);
    expect(published.bits).toEqual({ keep: 10, rotation: 0 });
  });

  it('accounts for both sparse rows without a remainder', () => {
    for (const [spinOrbitals, lambda, coefficients] of [
      [108, 2135.3, 705831],
      [152, 1547.3, 440501],
    ] as const) {
      const { difference } = whatif({ method: 'sparse', spinOrbitals, lambda, coefficients, target: 1e-3 });
      expect(difference!.stepToffoli.because.every((reason) => reason.basis !== 'unexplained')).toBe(true);
    }
  });

  it('names the parameter that is missing or wrong', () => {
    const { rows: _, ...withoutRows } = DF;
    expect(() => whatif(withoutRows)).toThrow(
      /whatif rows: nothing; expected .*double-factorised needs factors and rows/,
    );
    expect(() => whatif({ ...DF, spinOrbitals: 107 })).toThrow(/spinOrbitals: 107; expected an even number/);
    expect(() => whatif({ ...DF, lambda: -1 })).toThrow(/lambda: -1/);
    expect(() => whatif({ ...DF, lookupBlock: 12 })).toThrow(/lookupBlock: 12; expected a power of two/);
    expect(() => whatif({ ...DF, method: 'magic' as 'sparse' })).toThrow(/one of double-factorised/);
  });
});

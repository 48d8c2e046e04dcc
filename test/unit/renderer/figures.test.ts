import { describe, expect, it } from 'vitest';
import {
  energyUnderHead,
  formatBytes,
  normUnderHead,
  signedCount,
  targetWords,
  timeUnderHead,
  timeUnit,
} from '../../../renderer/figures/figures';

describe('figures under a row head', () => {
  it('leaves the unit out where the head says Eh, and gives mEh beside the figure', () => {
    expect(normUnderHead(18.9401)).toBe('18.94');
    expect(normUnderHead(0.0058)).toBe('5.800 mEh');
  });

  it('prints energies two digits below the last place of the target', () => {
    const cm1 = { value: 5, unit: 'cm-1' as const };
    const hartree = 1 / 219474.6313632; // one cm⁻¹, CODATA 2018
    expect(energyUnderHead(0.3123 * hartree, cm1)).toBe('0.31');
    expect(energyUnderHead(12.3456 * hartree, cm1)).toBe('12.35');
    expect(energyUnderHead(0.3123 * hartree, { ...cm1, value: 0.5 })).toBe('0.312');
    expect(energyUnderHead(0.001 * hartree, cm1)).toBe('<\u200a0.01');
    expect(energyUnderHead(0, cm1)).toBe('0');
  });

  it('chooses a unit of time in which the figure has at least two', () => {
    expect(timeUnit(244.8)).toBe('days');
    expect(timeUnderHead(244.8, 'days')).toBe('10.2');
    expect(timeUnit(47)).toBe('h');
    expect(timeUnit(0.5)).toBe('min');
    expect(timeUnit(0.001)).toBe('s');
    expect(timeUnderHead(1e-9, 's')).toBe('<\u200a0.1');
  });

  it('writes signed counts with a real minus and narrow spaces', () => {
    expect(signedCount(-2856)).toBe('−2\u202f856');
    expect(signedCount(132)).toBe('+132');
    expect(signedCount(0)).toBe('0');
  });

  it('writes targets and sizes as people do', () => {
    expect(targetWords({ value: 5, unit: 'cm-1' })).toBe('5 cm⁻¹');
    expect(formatBytes(999)).toBe('999 B');
    expect(formatBytes(20_311_496)).toBe('20.3 MB');
  });
});

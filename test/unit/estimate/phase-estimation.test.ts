import { describe, expect, it } from 'vitest';
import {
  confidenceFactor,
  errorBudget,
  meanRuns,
  runsForConfidence,
  sineWindowConfidence,
  targetRequest,
  walkSteps,
} from '../../../core/estimate';

/**
 * Read-out distribution of a phase register of M states with sine-window amplitudes, by direct summation of its
 * Fourier transform, averaged over where the phase lies between two grid points. Errors in units of π/M.
 */
function registerDistribution(size: number, offsets: number): { error: number; probability: number }[] {
  const amplitudes = Array.from(
    { length: size },
    (_, n) => Math.sqrt(2 / (size + 1)) * Math.sin((Math.PI * (n + 1)) / (size + 1)),
  );
  const outcomes = [];
  for (let k = 0; k < offsets; k++) {
    for (let j = -size / 2; j < size / 2; j++) {
      const phase = (2 * Math.PI * (j + (k + 0.5) / offsets)) / size;
      let re = 0;
      let im = 0;
      amplitudes.forEach((amplitude, n) => {
        re += amplitude * Math.cos(n * phase);
        im += amplitude * Math.sin(n * phase);
      });
      outcomes.push({ error: (phase * size) / Math.PI, probability: (re * re + im * im) / size / offsets });
    }
  }
  return outcomes;
}

describe('sine window by direct summation', () => {
  const outcomes = registerDistribution(128, 16);
  const within = (multiple: number) =>
    outcomes.reduce((sum, o) => sum + (Math.abs(o.error) <= multiple ? o.probability : 0), 0);

  it('is a distribution', () => {
    expect(within(Number.POSITIVE_INFINITY)).toBeCloseTo(1, 12);
  });

  // Phase deviation π/M; two phases ±arccos(E/λ) a walk step make it πλ/(2M) in energy: Babbush et al. 2018.
  it('has standard deviation π/M', () => {
    const variance = outcomes.reduce((sum, o) => sum + o.probability * o.error ** 2, 0);
    expect(Math.sqrt(variance)).toBeGreaterThan(0.98);
    expect(Math.sqrt(variance)).toBeLessThan(1.001);
  });

  it('stays within 1, 2, 3 deviations as often as the integral for many steps says', () => {
    for (const [multiple, expected] of [
      [1, 0.71],
      [2, 0.97],
      [3, 0.995],
    ] as const) {
      expect(within(multiple)).toBeCloseTo(expected, 1.7);
      expect(Math.abs(sineWindowConfidence(multiple) - within(multiple))).toBeLessThan(0.008);
    }
    expect(sineWindowConfidence(400)).toBeCloseTo(1, 6);
  });
});

describe('walk steps and accuracy', () => {
  // ⌈π · 294.8 / (2 · 0.001)⌉ = ⌈463070.8⌉: Lee et al. 2021, from memory.
  it('rounds πλ/2ε up', () => {
    expect(walkSteps(294.8, 1e-3)).toBe(463071);
    expect(walkSteps(1e-9, 1)).toBe(1);
  });

  it('triples the steps for 99 %, doubles them for 95 %, leaves a standard deviation alone', () => {
    expect(confidenceFactor({ kind: 'rms' })).toBe(1);
    expect(confidenceFactor({ kind: 'confidence', probability: 0.95 })).toBe(2);
    expect(confidenceFactor({ kind: 'confidence', probability: 0.99 })).toBe(3);
  });

  it('divides a splitting between two independent levels, but not its systematic errors', () => {
    const level = errorBudget(targetRequest(1e-3), 1);
    const splitting = errorBudget(targetRequest(1e-3, { meaning: 'splitting' }), 1);
    expect(level.walk).toBeCloseTo(0.9e-3, 15);
    expect(splitting.walk).toBeCloseTo(0.9e-3 / Math.SQRT2, 15);
    expect(splitting.prepare).toBe(level.prepare);
    expect(splitting.rotation + splitting.prepare + splitting.truncation).toBeCloseTo(1e-4, 15);
  });

  it('repeats 1/p times on average and ⌈ln(1−P)/ln(1−p)⌉ times for a confidence', () => {
    const { levels } = targetRequest(1e-3, { meaning: 'splitting', overlap: 0.8 });
    expect(meanRuns(levels)).toBeCloseTo(2.5, 12);
    // Two tosses of a fair coin miss with probability 1/4, four with 1/16, five with 1/32 ≤ 5 %.
    expect(runsForConfidence(0.5, 0.95)).toBe(5);
    expect(runsForConfidence(1, 0.999)).toBe(1);
  });

  it('refuses what cannot be', () => {
    expect(() => meanRuns([{ label: 'state', overlap: 0 }])).toThrow(/overlap of state: 0/);
    expect(() => walkSteps(1, 0)).toThrow(/positive target/);
    expect(() => confidenceFactor({ kind: 'confidence', probability: 1 })).toThrow(/between 0 and 1/);
  });
});

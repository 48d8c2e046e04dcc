import { describe, expect, it } from 'vitest';
import {
  PUBLISHED_ROWS,
  PUBLISHED_TARGET,
  SURFACE_CODE_DEFAULTS,
  walkSteps,
  whatif,
} from '../../core/estimate';

// J. Lee et al., PRX Quantum 2, 030305 (2021), iron–molybdenum cofactor benchmarks. All figures quoted from memory;
// that each published total is a whole multiple of its step cost is a check on the memory.
describe('published totals', () => {
  it.each(PUBLISHED_ROWS)('$system $method: total = ⌈πλ/2ε⌉ × step', (row) => {
    expect(walkSteps(row.lambda, PUBLISHED_TARGET) * row.stepToffoli).toBe(row.totalToffoli);
  });
});

// Relative tolerances in Toffoli and qubits: double factorisation is composed from the same components.
const TOLERANCE = {
  'double-factorised': [0.001, 0.02],
  sparse: [0.03, 0.03],
  'single-factorised': [0.03, 0.03],
  hypercontracted: [0.03, 0.03],
} as const;

describe('whatif against the published rows', () => {
  it.each(PUBLISHED_ROWS)('$system $method', (row) => {
    const { method, spinOrbitals, lambda, keepBits } = row;
    const rotationBits = row.rotationBits || 16;
    const result = whatif({
      method,
      spinOrbitals,
      lambda,
      keepBits,
      rotationBits,
      target: PUBLISHED_TARGET,
      ...row.sizes,
    });
    const [toffoli, qubits] = TOLERANCE[method];
    expect(Math.abs(result.step.toffoli / row.stepToffoli - 1)).toBeLessThan(toffoli);
    expect(Math.abs(result.logicalQubits / row.logicalQubits - 1)).toBeLessThan(qubits);
    expect(result.published).toBe(row);
    for (const figure of [result.difference!.stepToffoli, result.difference!.logicalQubits]) {
      const reasons = figure.because.reduce((sum, reason) => sum + reason.amount, 0);
      expect(reasons).toBe(figure.difference);
      expect(figure.ours - figure.published).toBe(figure.difference);
    }
  });

  it('gives double factorisation of A the composition worked out by hand', () => {
    const result = whatif({
      method: 'double-factorised',
      spinOrbitals: 108,
      lambda: 294.8,
      factors: 360,
      rows: 13031,
      target: 1e-3,
    });
    expect(result.step.toffoli).toBe(21751);
    expect(result.logicalQubits).toBe(3734);
    expect(result.walkSteps).toBe(463071);
  });
});

describe('surface code', () => {
  // Lee et al. 2021, abstract: "about four million physical qubits and under 4 days of runtime, assuming 1-μs cycle
  // times and physical gate-error rates no worse than 0.1%". Their layout treats factories and routing in more
  // detail; ours has no routing, so the check is on the size, not on digits.
  it('sizes hypercontraction A at about 4 million physical qubits and under four days', () => {
    const options = {
      method: 'hypercontracted',
      spinOrbitals: 108,
      lambda: 306.3,
      rank: 350,
      target: 1e-3,
    } as const;
    const { physical } = whatif(options, { ...SURFACE_CODE_DEFAULTS, failure: 0.1 });
    expect(physical!.qubits).toBeGreaterThan(3.5e6);
    expect(physical!.qubits).toBeLessThan(4.5e6);
    expect(physical!.hours).toBeLessThan(96);
    expect(physical!.hours).toBeGreaterThan(24);
    // Ten times less accepted failure costs one step in distance.
    const strict = whatif(options, SURFACE_CODE_DEFAULTS).physical!;
    expect(strict.distance).toBe(physical!.distance + 2);
    expect(strict.qubits).toBeLessThan(5e6);
    expect(strict.hours).toBeLessThan(96);
  });
});

import { describe, expect, it } from 'vitest';
import {
  blockFront,
  costOverCaps,
  costOverTargets,
  type EstimateInput,
  estimateVariant,
  SURFACE_CODE_DEFAULTS,
  targetRequest,
} from '../../../core/estimate';
import { toHartree } from '../../../core/units';

const INPUT: EstimateInput = {
  shape: {
    kind: 'triplet',
    orbitals: 8,
    factors: 124,
    rows: 2062,
    pairRows: 700,
    oneBodyRows: 20,
    oneBodyPairRows: 12,
    maxRowsPerFactor: 28,
    spinDependent: true,
  },
  lambda: { oneBody: 4.258929644, twoBody: 3.902829962, total: 8.161759606 },
  variant: { spin: 'swap-layers', lookup: 'clean' },
  target: {
    ...targetRequest(toHartree(5, 'cm-1'), { meaning: 'splitting' }),
    levels: [
      { label: '1A1', overlap: 0.81 },
      { label: '3A2', overlap: 0.78 },
    ],
  },
};

describe('estimate of a variant', () => {
  const cost = estimateVariant(INPUT);

  // ⌈π · 8.161759606 · √2 / (2 · 0.9 · 5/219474.6313632)⌉ = 884282, worked out apart from the code.
  it('takes the steps of one run at one level of the splitting', () => {
    expect(cost.walkSteps).toBe(884282);
  });

  it('multiplies out', () => {
    expect(cost.totalToffoli).toBe(cost.walkSteps * cost.step.toffoli);
    expect(cost.totalT).toBe(cost.walkSteps * cost.step.t);
    expect(cost.repetitions).toBeCloseTo(1 / 0.81 + 1 / 0.78, 12);
    expect(cost.campaignToffoli).toBe(Math.round(cost.repetitions * cost.totalToffoli));
    expect(cost.peak.registers.reduce((sum, register) => sum + register.qubits, 0)).toBe(cost.logicalQubits);
    expect(cost.physical).toBeNull();
  });

  it('sizes the machine when asked', () => {
    const { physical } = estimateVariant({ ...INPUT, options: { surfaceCode: SURFACE_CODE_DEFAULTS } });
    expect(physical!.qubits).toBeGreaterThan(cost.logicalQubits * 1000);
  });

  it('lets bits be given', () => {
    const given = estimateVariant({ ...INPUT, options: { keepBits: 17, rotationBits: 18 } });
    expect(given.bits).toEqual({ keep: 17, rotation: 18 });
    expect(given.step.parts['select.rotations']).toBe(8 * 7 * 16);
  });

  it('says when the cap cannot be kept', () => {
    const tight = estimateVariant({ ...INPUT, options: { qubitsMax: 100 } });
    expect(tight.overCap).toBe(true);
    expect(tight.logicalQubits).toBeGreaterThan(100);
    expect(estimateVariant({ ...INPUT, options: { qubitsMax: 2000 } }).overCap).toBe(false);
  });

  it('refuses options that make no circuit', () => {
    const at = (options: object) => () => estimateVariant({ ...INPUT, options });
    expect(at({ lookupBlock: 3 })).toThrow(/look-up block: 3; expected a power of two/);
    expect(at({ keepBits: 2 })).toThrow(/keep bits: 2/);
    expect(at({ qubitsMax: 0 })).toThrow(/qubit cap: 0/);
  });
});

describe('sensitivity', () => {
  it('costs in proportion to 1/target up to the bits', () => {
    const [wide, fine] = costOverTargets(INPUT, [1e-3, 1e-4]);
    const ratio = fine!.totalToffoli / wide!.totalToffoli;
    expect(fine!.bits.rotation).toBeGreaterThan(wide!.bits.rotation);
    expect(ratio).toBeGreaterThan(10);
    expect(ratio).toBeLessThan(16);
  });

  it('holds the automatic choice among the efficient blocks', () => {
    const front = blockFront(INPUT);
    const cost = estimateVariant(INPUT);
    const least = Math.min(...front.map((point) => point.totalToffoli));
    // A block of one's own for each of the angle tables can only be better than one for all.
    expect(cost.totalToffoli).toBeLessThanOrEqual(least);
    const efficient = front.filter((point) => point.efficient);
    expect(efficient.length).toBeGreaterThan(1);
    for (const point of efficient) {
      for (const other of efficient) {
        if (other.stepToffoli < point.stepToffoli) {
          expect(other.logicalQubits).toBeGreaterThan(point.logicalQubits);
        }
      }
    }
  });

  it('never gets dearer as the cap rises', () => {
    const points = costOverCaps(INPUT, [300, 500, 700, 900, 1200, 2000]);
    for (let i = 1; i < points.length; i++) {
      expect(points[i]!.totalToffoli).toBeLessThanOrEqual(points[i - 1]!.totalToffoli);
    }
    for (const point of points) {
      if (!point.overCap) expect(point.logicalQubits).toBeLessThanOrEqual(point.qubitsMax);
    }
  });
});

import type { VariantEstimate } from '../../../core/plan/comparison';

/** Estimates with invented figures, for tests of what the window makes of them. */
export function estimate(name: string, change: Partial<VariantEstimate> = {}): VariantEstimate {
  const [factorisation, grouping, spin, shift, lookup] = name.split('/') as [
    string,
    string,
    string,
    string,
    string,
  ];
  const swap = spin === 'swap-layers';
  const parts = {
    prepare: 3720,
    'select.lookup': 9574,
    'select.rotations': swap ? 2856 : 5712,
    'select.swaps': swap ? 132 : 0,
    'select.other': 0,
    reflections: 146,
    control: 2,
  };
  const toffoli = Object.values(parts).reduce((a, b) => a + b, 0);
  const walkSteps = 1_450_000;
  return {
    name,
    terms: ['sf', 'so1', 'so2'],
    factorisation,
    grouping,
    spinInSelect: swap ? 'swap-layers' : 'index',
    shift,
    lookup,
    lambda: {
      oneBody: 3.6258,
      twoBody: 15.3143,
      total: 18.9401,
      parts: { coulomb: 15.3088, 'one-body': 3.6258, 'same-orbit': 0.0019, 'other-orbit': 0.0036 },
    },
    spectralFloor: { value: 11.86, kind: 'exact', sector: 'eta', low: null, high: null },
    constant: -100,
    factors: 148,
    rows: 7210,
    residual: { frobenius: 1e-6, oneNormBound: 1.9e-6, energyEstimate: null, lowStates: null },
    bits: { keep: 19, rotation: 18 },
    step: { toffoli, t: swap ? 176 : 352, parts },
    logicalQubits: 1872,
    walkSteps,
    totalToffoli: walkSteps * toffoli,
    repetitions: 1,
    campaignToffoli: walkSteps * toffoli,
    physical: {
      distance: 27,
      qubits: 3_000_000,
      hours: swap ? 244.8 : 285.6,
      assumptions: {
        physicalError: 1e-3,
        cycleMicroseconds: 1,
        reactionMicroseconds: 10,
        factories: 4,
        failure: 0.01,
      },
    },
    ...change,
  };
}

import type { VariantEstimate } from '../../../core/plan';

/** A variant's figures for tests of what is made from them; the numbers are made up. */
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
    prepare: 200,
    'select.lookup': 500,
    'select.rotations': swap ? 100 : 200,
    'select.swaps': swap ? 10 : 0,
    'select.other': 30,
    reflections: 8,
    control: 2,
  };
  const toffoli = Object.values(parts).reduce((a, b) => a + b);
  const walkSteps = 1_000_000;
  return {
    name,
    terms: ['sf'],
    factorisation,
    grouping,
    spinInSelect: swap ? 'swap-layers' : 'index',
    shift,
    lookup,
    lambda: { oneBody: 4, twoBody: 4, total: 8, parts: {} },
    spectralFloor: { value: 4, kind: 'exact', sector: 'eta', low: 4, high: 4 },
    constant: -100,
    factors: 50,
    rows: 1234,
    residual: { frobenius: 0, oneNormBound: 0, energyEstimate: null, lowStates: null },
    bits: { keep: 12, rotation: 16 },
    step: { toffoli, t: 64, parts },
    logicalQubits: 900,
    walkSteps,
    totalToffoli: walkSteps * toffoli,
    repetitions: 1,
    campaignToffoli: walkSteps * toffoli,
    physical: null,
    ...change,
  };
}

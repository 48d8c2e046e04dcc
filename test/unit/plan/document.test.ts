import { describe, expect, it } from 'vitest';
import { comparisonDocument } from '../../../core/plan';
import { estimate } from './estimates';

/** Paths of all keys of a document in the order they are printed. */
function keyPaths(value: unknown, path = ''): string[] {
  if (Array.isArray(value)) return value.flatMap((item) => keyPaths(item, `${path}[]`));
  if (typeof value !== 'object' || value === null) return [];
  return Object.entries(value).flatMap(([key, item]) => [
    `${path}.${key}`,
    ...keyPaths(item, `${path}.${key}`),
  ]);
}

describe('the JSON document of a comparison', () => {
  const physical = {
    assumptions: {
      physicalError: 1e-3,
      cycleMicroseconds: 1,
      reactionMicroseconds: 10,
      factories: 4,
      failure: 0.01,
    },
    hours: 1,
    qubits: 2,
    distance: 3,
  };
  const variant = estimate('triplet/joint/swap-layers/median/clean', { physical });
  const document = comparisonDocument({
    recommendation: { reasons: ['r'], variant: variant.name },
    // Mixed on purpose: the document must not depend on the order of the data.
    variants: [{ ...Object.fromEntries(Object.entries(variant).reverse()), extra: 1 } as never],
    target: { hartree: 1, unit: 'hartree', value: 1 },
    hamiltonian: { terms: [{ maxAbs: 1, oneNorm: 2, name: 'sf' }], constant: 0, electrons: 2, orbitals: 2 },
    schema: 'spinwright-comparison/1',
  });

  it('has exactly the keys of the published schema, in their order', () => {
    // Transcribed by hand from the manual's schema.
    expect(keyPaths(document).filter((path) => !path.includes('.assumptions.'))).toEqual([
      '.schema',
      '.hamiltonian',
      ...['orbitals', 'electrons', 'constant', 'terms'].map((key) => `.hamiltonian.${key}`),
      ...['name', 'oneNorm', 'maxAbs'].map((key) => `.hamiltonian.terms[].${key}`),
      '.target',
      ...['value', 'unit', 'hartree'].map((key) => `.target.${key}`),
      '.variants',
      ...['name', 'terms', 'factorisation', 'grouping', 'spinInSelect', 'shift', 'lookup', 'lambda'].map(
        (key) => `.variants[].${key}`,
      ),
      ...['oneBody', 'twoBody', 'total', 'parts'].map((key) => `.variants[].lambda.${key}`),
      '.variants[].spectralFloor',
      ...['value', 'kind', 'sector', 'low', 'high'].map((key) => `.variants[].spectralFloor.${key}`),
      ...['constant', 'factors', 'rows', 'residual'].map((key) => `.variants[].${key}`),
      ...['frobenius', 'oneNormBound', 'energyEstimate', 'lowStates'].map(
        (key) => `.variants[].residual.${key}`,
      ),
      '.variants[].bits',
      '.variants[].bits.keep',
      '.variants[].bits.rotation',
      '.variants[].step',
      ...['toffoli', 't', 'parts'].map((key) => `.variants[].step.${key}`),
      ...[
        'prepare',
        'select.lookup',
        'select.rotations',
        'select.swaps',
        'select.other',
        'reflections',
        'control',
      ].map((key) => `.variants[].step.parts.${key}`),
      ...['logicalQubits', 'walkSteps', 'totalToffoli', 'repetitions', 'campaignToffoli', 'physical'].map(
        (key) => `.variants[].${key}`,
      ),
      ...['distance', 'qubits', 'hours', 'assumptions'].map((key) => `.variants[].physical.${key}`),
      '.recommendation',
      '.recommendation.variant',
      '.recommendation.reasons',
    ]);
  });
});

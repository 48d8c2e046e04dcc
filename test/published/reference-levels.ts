import { describe, expect, it } from 'vitest';
import { buildHamiltonian } from '../../core/hamiltonian';
import { inlineContext } from '../../core/job';
import { exactSpectrum, REFERENCE_LEVELS, referenceEigenvalues } from '../../core/verify';
import { findSet, loadSet, readJson } from './data-set';

/**
 * The matrix of the product form against `reference.json` of a set, for each of its seven term selections: all
 * listed eigenvalues to 1e-8 Eh. They are from the independent program that made the integrals, whose CI was
 * checked there against a general quantum-chemistry program to 5e-13 Eh.
 */
export function describeReferenceLevels(name: string): void {
  describe(`${name}: the matrix of the product form has the reference eigenvalues`, () => {
    const folder = findSet(name);

    it.skipIf(folder === null).each(REFERENCE_LEVELS)('$name', async ({ terms }) => {
      const expected = referenceEigenvalues(readJson(folder!, 'reference.json'), terms)!;
      const hamiltonian = buildHamiltonian(await loadSet(folder!), { terms });
      const found = await exactSpectrum(hamiltonian, { states: expected.length }, inlineContext());
      expect(found.values).toHaveLength(expected.length);
      const worst = Math.max(...expected.map((value, i) => Math.abs(value - found.values[i]!)));
      expect(worst).toBeLessThan(1e-8);
    });
  });
}

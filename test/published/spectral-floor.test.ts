import { describe, expect, it } from 'vitest';
import { buildHamiltonian } from '../../core/hamiltonian';
import { inlineContext } from '../../core/job';
import { spectralRange } from '../../core/verify';
import { findSet, loadSet } from './data-set';

// Three digits from the project's design notes, computed there by other code.
describe.each([
  ['ch2_sto3g', 2.05],
  ['oh_sto3g', 1.49],
  ['ch2o_sto3g_8o', 4.75],
])('half the spectral range of %s, spin-free', (name, expected) => {
  const folder = findSet(name);

  it.skipIf(folder === null)(`is ${expected} Eh in the sector of its electrons`, async () => {
    const hamiltonian = buildHamiltonian(await loadSet(folder!), { terms: ['sf'] });
    const context = inlineContext();
    const exact = await spectralRange(hamiltonian, 'eta', {}, context);
    expect(exact.kind).toBe('exact');
    expect(Math.abs(exact.value! - expected)).toBeLessThan(0.005);
    const bracket = await spectralRange(hamiltonian, 'eta', { maxDeterminants: 1 }, context);
    expect(bracket.low).toBeLessThan(exact.value!);
    // Determinants alone reach most of it in a basis of molecular orbitals.
    expect(bracket.low).toBeGreaterThan(0.75 * exact.value!);
  });
});

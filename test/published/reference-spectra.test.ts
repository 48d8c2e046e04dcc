import { describe, expect, it } from 'vitest';
import { buildHamiltonian } from '../../core/hamiltonian';
import { inlineContext } from '../../core/job';
import { exactSpectrum, REFERENCE_LEVELS, referenceEigenvalues } from '../../core/verify';
import { findSet, loadSet, readJson } from './data-set';

// Source: reference.json of each set, eigenvalues by the independent program that made the integrals (its CI was
// checked there against a general quantum-chemistry program to 5e-13 Eh).
const SETS = [
  'f_sto3g_2p',
  'c_631g_2p',
  'br_def2svp_4p',
  'oh_sto3g',
  'ch2_sto3g',
  'h2se_def2svp_6o',
  'ch2o_sto3g_8o',
];

describe.each(SETS)('%s: the matrix of the product form has the reference eigenvalues', (name) => {
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

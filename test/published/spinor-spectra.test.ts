import { describe, expect, it } from 'vitest';
import { buildHamiltonian } from '../../core/hamiltonian';
import { inlineContext } from '../../core/job';
import { exactSpectrum } from '../../core/verify';
import { findSet, loadSet, readJson } from './data-set';

// Source: spinor_fcidump/reference.json. The files were written by BAGEL 1.2.2 (four-component Dirac–Coulomb and
// Dirac–Coulomb–Breit, full valence); "own_ci" are eigenvalues of an independent program, "bagel" those that the
// writing program itself printed, with eight decimals.
interface Reference {
  readonly nelec: number;
  readonly norb_spinors: number;
  readonly own_ci_eigenvalues: readonly number[];
  readonly bagel_zfci_energies_printed?: readonly number[];
}

describe('four-component spinor files', () => {
  const folder = findSet('spinor_fcidump');
  const cases =
    folder === null ? [] : Object.entries(readJson(folder, 'reference.json') as Record<string, Reference>);

  it.skipIf(folder === null)('are there', () => {
    expect(cases.map(([, { norb_spinors }]) => norb_spinors)).toEqual([10, 10, 16, 16]);
  });

  it.each(cases)('%s gives the listed eigenvalues', async (file, reference) => {
    const hamiltonian = buildHamiltonian(await loadSet(folder!, [file]));
    expect(hamiltonian.electrons).toBe(reference.nelec);
    const expected = reference.own_ci_eigenvalues;
    const found = await exactSpectrum(hamiltonian, { states: expected.length }, inlineContext());
    for (const [i, value] of expected.entries()) {
      expect(Math.abs(found.values[i]! - value)).toBeLessThan(1e-7);
    }
    for (const [i, value] of (reference.bagel_zfci_energies_printed ?? []).entries()) {
      // Half a unit of the last printed digit, and the entries below 1e-9 that the file leaves out.
      expect(Math.abs(found.values[i]! - value)).toBeLessThan(5e-9 + 2e-8);
    }
  });
});

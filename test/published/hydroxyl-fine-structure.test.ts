import { describe, expect, it } from 'vitest';
import { buildHamiltonian } from '../../core/hamiltonian';
import { inlineContext } from '../../core/job';
import { fromHartree } from '../../core/units';
import { exactSpectrum, REFERENCE_LEVELS } from '../../core/verify';
import { multiplets } from './atomic-multiplets';
import { findSet, loadSet } from './data-set';

const folder = findSet('oh_sto3g');

async function levels(terms: (typeof REFERENCE_LEVELS)[number]['terms']) {
  const hamiltonian = buildHamiltonian(await loadSet(folder!), { terms });
  // All 120: the pairs at the cut of a shorter list would be torn apart.
  return (await exactSpectrum(hamiltonian, { states: 120 }, inlineContext())).values;
}

describe.skipIf(folder === null)('hydroxyl radical, seven electrons', () => {
  it.each(REFERENCE_LEVELS)('$name: every level is a Kramers pair to 1e-9 Eh', async ({ terms }) => {
    // H. A. Kramers, Proc. Acad. Amsterdam 33, 959 (1930).
    const values = await levels(terms);
    for (let i = 0; i < 120; i += 2) expect(values[i + 1]! - values[i]!).toBeLessThan(1e-9);
  });

  it('ground state ²Π is fourfold without spin–orbit coupling, ²Σ⁺ twofold', async () => {
    const [pi, sigma] = multiplets(await levels(['sf']), 1e-8);
    expect([pi!.degeneracy, sigma!.degeneracy]).toEqual([4, 2]);
    expect(pi!.spread).toBeLessThan(1e-9);
  });

  it('²Π splits in two, by 20 to 35 % too little, as a contracted minimal basis leads to expect', async () => {
    // A = −139.21 cm⁻¹ (K. P. Huber & G. Herzberg, Constants of Diatomic Molecules (1979)), quoted from memory: the
    // Ω = 3/2 and Ω = 1/2 components are |A| apart. The same operators give 130.8 in an uncontracted basis.
    const [lower, upper] = multiplets(await levels(['sf', 'so1', 'somf', 'so2']), 1e-8);
    expect([lower!.degeneracy, upper!.degeneracy]).toEqual([2, 2]);
    const splitting = fromHartree(upper!.energy - lower!.energy, 'cm-1');
    expect(1 - splitting / 139.21).toBeGreaterThan(0.2);
    expect(1 - splitting / 139.21).toBeLessThan(0.35);
  });

  it('four-component Dirac–Coulomb–Breit agrees with spin–same- and –other-orbit together', async () => {
    // 102.53 cm⁻¹ from the Breit file of the same basis and core (spinor_fcidump/reference.json, printed by BAGEL
    // 1.2.2): −74.42350709 and −74.42303992 Eh. Breit–Pauli neglects higher orders of α² only.
    const [lower, upper] = multiplets(await levels(['sf', 'so1', 'somf', 'so2']), 1e-8);
    const breit = fromHartree(-74.42303992 + 74.42350709, 'cm-1');
    const splitting = fromHartree(upper!.energy - lower!.energy, 'cm-1');
    expect(Math.abs(splitting - breit)).toBeLessThan(0.5);
  });
});

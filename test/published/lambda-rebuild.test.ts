import { describe, expect, it } from 'vitest';
import { buildEncoding, type Encoding, parseVariant } from '../../core/encode';
import { factorise } from '../../core/factor';
import { buildHamiltonian, type SpatialHamiltonian } from '../../core/hamiltonian';
import { inlineContext } from '../../core/job';
import { fockMatrix } from '../../core/verify';
import { difference, matrixOf, operatorNorm, restrict } from '../unit/encode/fock-space';
import { findSet, loadSet } from './data-set';

// Real p shells of atoms: the 64×64 matrix of the files' own (normal-ordered) form on Fock space is the judge. Its
// eigenvalues are those of reference.json, see reference-spectra.test.ts.
const ctx = inlineContext();
const FORMS = [
  'triplet/joint',
  'triplet/separate',
  'spinor/joint',
  'spinor/separate',
  'sparse/-',
  'sparse/joint',
];
const TERMS = ['sf', 'so1', 'somf', 'so2', 'ss', 'scalar', 'ssc'] as const;

describe.each(['f_sto3g_2p', 'c_631g_2p', 'br_def2svp_4p'])('%s with all terms', (name) => {
  const folder = findSet(name);

  async function encode(
    h: SpatialHamiltonian,
    form: string,
    shift: string,
    threshold = 0,
  ): Promise<Encoding> {
    const variant = parseVariant(`${form}/index/${shift}/clean`);
    const { grouping } = variant;
    const f =
      variant.factorisation === 'sparse' || grouping === '-'
        ? null
        : await factorise(h, { grouping, threshold, occupations: HALF }, ctx);
    return buildEncoding(h, f, variant, { threshold }, ctx);
  }
  const HALF = [1, 0.5, 0.5];

  async function load(): Promise<SpatialHamiltonian> {
    const h = buildHamiltonian(await loadSet(folder!), { terms: TERMS });
    if (h.kind !== 'spatial') throw new Error('spatial set expected');
    return h;
  }

  it.skipIf(folder === null).each(FORMS)('%s: H from its factors is H from the files', async (form) => {
    const h = await load();
    const exact = fockMatrix(h, 'stored');
    const full = await encode(h, form, 'none');
    expect(full.residual.oneNormBound).toBeLessThan(1e-12);
    expect(operatorNorm(difference(matrixOf(full.rebuild()), exact))).toBeLessThan(1e-10);
    if (form.startsWith('sparse')) return;
    const shifted = matrixOf((await encode(h, form, 'median')).rebuild());
    const inside = difference(restrict(shifted, h.electrons), restrict(exact, h.electrons));
    expect(operatorNorm(inside)).toBeLessThan(1e-9);
    const outside = difference(restrict(shifted, h.electrons + 1), restrict(exact, h.electrons + 1));
    expect(operatorNorm(outside)).toBeGreaterThan(1e-3);
  });

  it.skipIf(folder === null).each(FORMS)('%s: truncation keeps to its bound', async (form) => {
    const h = await load();
    const exact = fockMatrix(h, 'stored');
    let dropped = 0;
    for (const threshold of [2e-5, 1e-3]) {
      const { residual, rebuild } = await encode(h, form, 'none', threshold);
      const moved = operatorNorm(difference(matrixOf(rebuild()), exact));
      expect(moved).toBeLessThanOrEqual(residual.oneNormBound + 1e-10);
      expect(residual.oneNormBound).toBeLessThanOrEqual(threshold);
      dropped += residual.dropped;
    }
    expect(dropped).toBeGreaterThan(0);
  });
});

import { describe, expect, it } from 'vitest';
import { buildEncoding, parseVariant } from '../../core/encode';
import { compressFactors, type Factorisation, factorise, type Grouping } from '../../core/factor';
import { buildHamiltonian, type SpatialHamiltonian } from '../../core/hamiltonian';
import { inlineContext } from '../../core/job';
import { fockMatrix } from '../../core/verify';
import { difference, matrixOf, operatorNorm, restrict } from '../unit/encode/fock-space';
import { findSet, loadSet } from './data-set';

// The 64×64 matrix of the files' own (normal-ordered) form on Fock space is the judge of mixed factors.
const ctx = inlineContext(3);
const HALF = [1, 0.5, 0.5];

async function load(folder: string, terms: 'all' | readonly ('sf' | 'so1' | 'somf' | 'so2')[]) {
  const h = buildHamiltonian(await loadSet(folder), { terms });
  if (h.kind !== 'spatial') throw new Error('spatial set expected');
  return h;
}

function encode(h: SpatialHamiltonian, f: Factorisation, form: string, shift: string) {
  return buildEncoding(h, f, parseVariant(`${form}/index/${shift}/clean`), {}, ctx);
}

describe.each(['f_sto3g_2p', 'c_631g_2p', 'br_def2svp_4p'])('%s with all terms', (name) => {
  const folder = findSet(name);
  const groupings: readonly Grouping[] = ['separate', 'joint'];

  it.skipIf(folder === null).each(groupings)('%s: mixed factors are still H', async (grouping) => {
    const h = await load(folder!, 'all');
    const exact = fockMatrix(h, 'stored');
    const given = await factorise(h, { grouping, occupations: HALF }, ctx);
    const mixed = await compressFactors(h, given, {}, ctx);
    const plain = await encode(h, mixed, `triplet/${grouping}`, 'none');
    expect(operatorNorm(difference(matrixOf(plain.rebuild()), exact))).toBeLessThan(1e-10);
    const shifted = await encode(h, mixed, `compressed/${grouping}`, 'optimised');
    const matrix = matrixOf(shifted.rebuild());
    expect(
      operatorNorm(difference(restrict(matrix, h.electrons), restrict(exact, h.electrons))),
    ).toBeLessThan(1e-9);
    expect(
      operatorNorm(difference(restrict(matrix, h.electrons + 1), restrict(exact, h.electrons + 1))),
    ).toBeGreaterThan(1e-3);
    const median = await encode(h, given, `triplet/${grouping}`, 'median');
    expect(shifted.lambda.total).toBeLessThan(median.lambda.total);
  });

  it.skipIf(folder === null).each(groupings)(
    '%s: truncated and mixed keeps to its bound',
    async (grouping) => {
      const h = await load(folder!, 'all');
      const exact = fockMatrix(h, 'stored');
      const given = await factorise(h, { grouping, occupations: HALF, threshold: 1e-3 }, ctx);
      expect(given.residual.dropped).toBeGreaterThan(0);
      const mixed = await compressFactors(h, given, {}, ctx);
      expect(mixed.residual).toEqual(given.residual);
      const plain = await encode(h, mixed, `triplet/${grouping}`, 'none');
      const moved = operatorNorm(difference(matrixOf(plain.rebuild()), exact));
      expect(moved).toBeLessThanOrEqual(given.residual.oneNormBound + 1e-10);
    },
  );

  it.skipIf(folder === null).each(groupings)(
    '%s: a given number of factors, mixed, keeps to its bound',
    async (grouping) => {
      const h = await load(folder!, 'all');
      const exact = fockMatrix(h, 'stored');
      const most = 4;
      const options = { grouping, occupations: HALF, principal: true };
      const whole = await factorise(h, options, ctx);
      const given = await factorise(h, { ...options, most }, ctx);
      expect(given.blocks.map((block) => block.count)).toEqual(
        whole.blocks.map((block) => Math.min(most, block.count)),
      );
      expect(given.residual.oneNormBound).toBeGreaterThan(1e-6);
      expect(given.notes.join()).toContain(`at most ${most} factors a block`);
      expect(whole.notes.join()).not.toContain('at most');
      const mixed = await compressFactors(h, given, { factors: most }, ctx);
      expect(mixed.residual).toEqual(given.residual);
      const plain = await encode(h, mixed, `triplet/${grouping}`, 'none');
      const moved = operatorNorm(difference(matrixOf(plain.rebuild()), exact));
      expect(moved).toBeGreaterThan(1e-8);
      expect(moved).toBeLessThanOrEqual(given.residual.oneNormBound + 1e-10);
    },
  );
});

describe('formaldehyde, 8 orbitals', () => {
  const folder = findSet('ch2o_sto3g_8o');

  it.skipIf(folder === null)(
    'eigenvectors leave less than Cholesky columns with as many factors',
    async () => {
      const h = await load(folder!, ['sf']);
      const options = { grouping: 'separate', most: 24 } as const;
      const columns = (await factorise(h, options, ctx)).residual;
      const principal = (await factorise(h, { ...options, principal: true }, ctx)).residual;
      expect(principal.dropped).toBe(columns.dropped);
      expect(principal.frobenius).toBeLessThan(columns.frobenius);
      expect(principal.oneNormBound).toBeLessThan(columns.oneNormBound);
    },
  );

  it.skipIf(folder === null)('mixing changes no element of the two-electron tensor', async () => {
    const h = await load(folder!, ['sf', 'so1', 'somf', 'so2']);
    for (const grouping of ['separate', 'joint'] as const) {
      const given = await factorise(h, { grouping }, ctx);
      const mixed = await compressFactors(h, given, {}, ctx);
      const before = (await encode(h, given, `triplet/${grouping}`, 'median')).lambda;
      const after = (await encode(h, mixed, `compressed/${grouping}`, 'optimised')).lambda;
      expect(after.total).toBeLessThan(0.93 * before.total);
      const rebuilt = (await encode(h, mixed, `triplet/${grouping}`, 'none')).rebuild();
      if (rebuilt.kind !== 'spatial') throw new Error('spatial form expected');
      const pairs = [
        [rebuilt.g.charge!, h.g.charge!],
        [rebuilt.g.spinOrbit!.same, h.g.spinOrbit!.same],
        [rebuilt.k.planes, h.k.planes],
      ] as const;
      for (const [a, b] of pairs) {
        expect(a.length).toBe(b.length);
        let largest = 0;
        for (let i = 0; i < a.length; i++) largest = Math.max(largest, Math.abs(a[i]! - b[i]!));
        expect(largest).toBeLessThan(1e-10);
      }
    }
  });
});

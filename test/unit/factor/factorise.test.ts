import { describe, expect, it } from 'vitest';
import { buildEncoding, parseVariant } from '../../../core/encode';
import { factorise, jointDimensions, jointRefusal, lcuNorms, type SquareFactors } from '../../../core/factor';
import { canonicalVectors } from '../../../core/factor/clusters';
import { fromStoredForm, type SpatialHamiltonian, spinOrbitMeanField } from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';
import {
  ALL_KINDS,
  largestDifference,
  randomArray,
  randomHamiltonian,
  uniform,
} from '../hamiltonian/random-hamiltonian';

const ctx = inlineContext();

/** Random positive semidefinite charge part. */
function withCoulomb(h: SpatialHamiltonian, seed: number): SpatialHamiltonian {
  const npair = (h.orbitals * (h.orbitals + 1)) / 2;
  const random = uniform(seed);
  const charge = new Float64Array((npair * (npair + 1)) / 2);
  for (let t = 0; t < npair; t++) {
    const v = randomArray(npair, random);
    for (let p = 0, i = 0; p < npair; p++)
      for (let r = 0; r <= p; r++, i++) charge[i]! += v[p]! * v[r]! * 0.5 ** t;
  }
  return fromStoredForm({ ...h, g: { ...h.g, charge } });
}

describe('degenerate levels', () => {
  it('take the same vectors whatever basis the solver chose', () => {
    // Two levels of three vectors each in six dimensions, from a Householder reflection.
    const n = 6;
    const a = randomArray(n, uniform(3));
    const norm = a.reduce((sum, x) => sum + x * x, 0);
    const basis = Float64Array.from({ length: n * n }, (_, i) => {
      const [p, q] = [Math.floor(i / n), i % n];
      return (p === q ? 1 : 0) - (2 * a[p]! * a[q]!) / norm;
    });
    const values = Float64Array.of(-2e-7, -2e-7, -2e-7, 1, 1, 1);
    const turned = basis.slice();
    const [c, s] = [Math.cos(0.7), Math.sin(0.7)];
    for (const [x, y] of [
      [0, 1],
      [1, 2],
      [3, 4],
      [4, 5],
    ] as const) {
      for (let k = 0; k < n; k++) {
        const [u, v] = [turned[x * n + k]!, turned[y * n + k]!];
        turned[x * n + k] = c * u - s * v;
        turned[y * n + k] = s * u + c * v;
      }
    }
    const one = canonicalVectors(values, basis, n);
    const other = canonicalVectors(values, turned, n);
    expect(largestDifference(basis, turned)).toBeGreaterThan(0.1);
    expect(largestDifference(one.vectors, other.vectors)).toBeLessThan(1e-12);
  });

  it('do not swallow small weights that differ', () => {
    // 1e-8 of the largest weight is more than these differ by; of their own size it is not.
    const values = Float64Array.of(1e-9, 2e-9, 1);
    const basis = Float64Array.of(0.6, 0.8, 0, -0.8, 0.6, 0, 0, 0, 1);
    const { weights, vectors } = canonicalVectors(values, basis, 3);
    expect([...weights]).toEqual([1e-9, 2e-9, 1]);
    expect([...vectors]).toEqual([...basis]);
  });
});

describe('charge part', () => {
  it('is split into raw Cholesky columns where it is positive semidefinite', async () => {
    const h = withCoulomb(randomHamiltonian(3, 31, { charge: true, spinOrbit: 'none', spinSpin: false }), 5);
    const f = await factorise(h, { grouping: 'separate' }, ctx);
    expect(f.notes).toEqual([]);
    const { vectors, dim } = f.blocks[0] as SquareFactors;
    // Raw columns are not orthogonal: eigenvectors would be.
    let overlap = 0;
    for (let i = 0; i < dim; i++) overlap += vectors[i]! * vectors[dim + i]!;
    expect(Math.abs(overlap)).toBeGreaterThan(1e-3);
  });

  it('takes eigenvectors where it is indefinite, and says so', async () => {
    const h = randomHamiltonian(3, 32, { charge: true, spinOrbit: 'none', spinSpin: false });
    const f = await factorise(h, { grouping: 'separate' }, ctx);
    expect(f.notes).toHaveLength(1);
    expect(f.notes[0]).toContain('indefinite');
    const { weights } = f.blocks[0] as SquareFactors;
    expect(Math.min(...weights)).toBeLessThan(0);
  });

  it('notices an indefinite part whose diagonal is positive', async () => {
    const h = withCoulomb(randomHamiltonian(2, 33, { charge: true, spinOrbit: 'none', spinSpin: false }), 6);
    // (00|00) = (11|11) = 1 and (00|11) = 2: eigenvalues 3 and −1.
    const charge = Float64Array.of(1, 0, 0.1, 2, 0, 1);
    const f = await factorise(fromStoredForm({ ...h, g: { ...h.g, charge } }), { grouping: 'separate' }, ctx);
    expect(f.notes).toHaveLength(1);
  });
});

describe('time reversal', () => {
  it('keeps joint factors within their sector', async () => {
    const f = await factorise(randomHamiltonian(3, 34, ALL_KINDS), { grouping: 'joint' }, ctx);
    expect(f.blocks.map((block) => (block as SquareFactors).sector)).toEqual(['even', 'odd']);
    // Even sector: rank of [[C, W],[Wᵀ, 0]] ≤ 2·npair; odd with spin–spin: its full dimension.
    expect(f.blocks[0]!.count).toBeLessThanOrEqual(12);
    expect(f.blocks[1]!.count).toBeLessThanOrEqual(21);
  });
});

describe('truncation', () => {
  const h = withCoulomb(
    randomHamiltonian(4, 35, { charge: true, spinOrbit: 'multiple', spinSpin: false }),
    7,
  );

  it('drops the lightest factors of all blocks together, as many as the threshold allows', async () => {
    // Joint: Cholesky, which may leave a hundredth of the threshold out by itself, has no part in it.
    const all = await factorise(h, { grouping: 'joint' }, ctx);
    const norms = all.blocks.flatMap((block) => [...lcuNorms(block)]).sort((a, b) => a - b);
    for (const threshold of [0.1, 1, 5]) {
      const f = await factorise(h, { grouping: 'joint', threshold }, ctx);
      let sum = 0;
      let fits = 0;
      while (fits < norms.length && sum + norms[fits]! <= threshold) sum += norms[fits++]!;
      expect(f.residual.dropped).toBe(fits);
      expect(f.residual.oneNormBound).toBeCloseTo(sum, 10);
      const kept = f.blocks.flatMap((block) => [...lcuNorms(block)]);
      expect(Math.min(...kept)).toBeCloseTo(norms[fits]!, 10);
    }
  });

  it('counts what Cholesky leaves out against the threshold', async () => {
    for (const threshold of [0.1, 1, 5]) {
      const f = await factorise(h, { grouping: 'separate', threshold }, ctx);
      expect(f.residual.dropped).toBeGreaterThan(0);
      expect(f.residual.oneNormBound).toBeLessThanOrEqual(threshold * (1 + 1e-12));
    }
  });

  it('leaves the mean field of the reference where all two-electron spin–orbit goes', async () => {
    const occupations = [2, 1.5, 0.5, 0];
    const bare = fromStoredForm({ ...h, g: { ...h.g, charge: null } });
    const f = await factorise(bare, { grouping: 'separate', threshold: 1e6, occupations }, ctx);
    expect(f.blocks.every(({ count }) => count === 0)).toBe(true);
    const encoding = await buildEncoding(bare, f, parseVariant('triplet/separate/index/none/clean'), {}, ctx);
    const rebuilt = encoding.rebuild();
    if (rebuilt.kind !== 'spatial') throw new Error('spatial form expected');
    // Independent route: normal ordering of the stored tensor (core/hamiltonian), not of the factors.
    const expected = spinOrbitMeanField(4, h.g.spinOrbit!, occupations).map(
      (x, i) => x + bare.h.planes[16 + i]!,
    );
    expect(largestDifference(rebuilt.h.planes.subarray(16), expected)).toBeLessThan(1e-12);
    expect(rebuilt.constant).toBeCloseTo(bare.constant, 12);
  });

  it('with joint factors leaves the same mean field', async () => {
    const occupations = [1, 0.5, 0.5, 2];
    const bare = fromStoredForm({ ...h, g: { ...h.g, charge: null } });
    const f = await factorise(bare, { grouping: 'joint', threshold: 1e6, occupations }, ctx);
    expect(f.blocks.every(({ count }) => count === 0)).toBe(true);
    const folded = f.foldedMeanField as SpatialHamiltonian['k'];
    const k = folded.planes.map((x, i) => x + bare.k.planes[i]!).subarray(16);
    const expected = spinOrbitMeanField(4, h.g.spinOrbit!, occupations).map(
      (x, i) => x + bare.h.planes[16 + i]!,
    );
    expect(largestDifference(k, expected)).toBeLessThan(1e-12);
  });

  it('refuses a threshold that is no number ≥ 0, and occupations that do not fit', async () => {
    await expect(factorise(h, { grouping: 'joint', threshold: -1 }, ctx)).rejects.toMatchObject({
      code: 'bad-threshold',
    });
    await expect(factorise(h, { grouping: 'joint', occupations: [2, 2] }, ctx)).rejects.toMatchObject({
      code: 'bad-occupations',
    });
  });
});

describe('the joint grouping of large sets', () => {
  const shell = (orbitals: number, spinOrbit: boolean, spinSpin: boolean) => {
    const some = new Float64Array(0);
    const g = {
      charge: some,
      spinOrbit: spinOrbit ? { same: some, other: { timesSame: 2 } } : null,
      spinSpin: spinSpin ? some : null,
    };
    return { ...randomHamiltonian(1, 1), orbitals, g };
  };

  it('needs 2550 instead of 4950 dimensions for 50 orbitals', () => {
    expect(jointDimensions(shell(50, true, false))).toEqual({ even: 2550, odd: 2450 });
    expect(jointRefusal(shell(50, true, false))).toBeNull();
    expect(jointDimensions(shell(50, false, false))).toEqual({ even: 1275, odd: 0 });
  });

  it('is refused with the reason where a sector exceeds 3000', async () => {
    expect(jointRefusal(shell(41, true, true))).toContain('3403');
    expect(jointRefusal(shell(55, true, false))).toContain('even sector');
    await expect(factorise(shell(41, true, true), { grouping: 'joint' }, ctx)).rejects.toMatchObject({
      code: 'sector-too-large',
    });
  });
});

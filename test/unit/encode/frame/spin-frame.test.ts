import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { buildEncoding, parseVariant } from '../../../../core/encode';
import { rotationOf, spinFrame, vectorOf } from '../../../../core/encode/frame/spin';
import { factorise, spinOrbitCores, spinOrbitTriples, triplesOfCore } from '../../../../core/factor';
import { rotateSpin } from '../../../../core/hamiltonian';
import { Cancelled, inlineContext } from '../../../../core/job';
import { multiply } from '../../../../core/linalg';
import { largestDifference, randomHamiltonian, uniform } from '../../hamiltonian/random-hamiltonian';

const ctx = inlineContext();
const seeds = fc.integer({ min: 0, max: 2 ** 31 });
const KINDS = { charge: true, spinOrbit: 'multiple', spinSpin: true } as const;
const VARIANTS = [
  'triplet/joint/index/none/clean',
  'triplet/joint/index/median/clean',
  'triplet/separate/index/none/clean',
  'triplet/separate/index/median/clean',
];

/** λ of the form in axes turned by R, from a decomposition of the turned Hamiltonian. */
async function lambdaIn(
  hamiltonian: ReturnType<typeof randomHamiltonian>,
  name: string,
  rotation: Float64Array,
) {
  const variant = parseVariant(name);
  const turned = rotateSpin(hamiltonian, rotation);
  const grouping = variant.grouping === 'joint' ? 'joint' : 'separate';
  const factors = await factorise(turned, { grouping }, ctx);
  return (await buildEncoding(turned, factors, variant, {}, ctx)).lambda.total;
}

describe('rotation vectors', () => {
  it('and rotations are each other', () => {
    fc.assert(
      fc.property(seeds, fc.double({ min: 0, max: Math.PI - 1e-6, noNaN: true }), (seed, angle) => {
        const random = uniform(seed);
        const axis = [random(), random(), random()];
        const norm = Math.hypot(...axis);
        const x = axis.map((value) => (angle * value) / norm);
        const r = rotationOf(x);
        const gram = multiply(r, r, 3, 3, 3, { transposeB: true });
        expect(largestDifference(gram, [1, 0, 0, 0, 1, 0, 0, 0, 1])).toBeLessThan(1e-14);
        expect(largestDifference(rotationOf(vectorOf(r)), r)).toBeLessThan(1e-7);
      }),
    );
    for (const axis of [
      [1, 0, 0],
      [0, 1, 0],
      [0, 0.6, -0.8],
    ]) {
      const half = rotationOf(axis.map((x) => Math.PI * x));
      expect(largestDifference(rotationOf(vectorOf(half)), half)).toBeLessThan(1e-12);
    }
  });
});

describe('spin frame', () => {
  it.each(VARIANTS)('%s: lowers the λ of the turned Hamiltonian, decomposed anew', async (name) => {
    for (const seed of [11, 12]) {
      const hamiltonian = randomHamiltonian(3, seed, KINDS);
      const variant = parseVariant(name);
      const grouping = variant.grouping === 'joint' ? 'joint' : 'separate';
      const factors = await factorise(hamiltonian, { grouping }, ctx);
      const frame = await spinFrame(hamiltonian, factors, variant, ctx);
      const given = await lambdaIn(hamiltonian, name, rotationOf([0, 0, 0]));
      expect(frame.lambda.before / given).toBeCloseTo(1, 12);
      expect(frame.lambda.after / (await lambdaIn(hamiltonian, name, frame.rotation))).toBeCloseTo(1, 9);
      // Arrays without any symmetry: there are better axes than the given ones.
      expect(frame.lambda.after).toBeLessThan(frame.lambda.before);
      // And better than a scan that knows nothing of how the frame was found.
      for (let i = 0; i < 27; i++) {
        const angles = [i % 3, Math.floor(i / 3) % 3, Math.floor(i / 9)].map((j) => 0.5 * (j - 1));
        expect(await lambdaIn(hamiltonian, name, rotationOf(angles))).toBeGreaterThan(
          0.995 * frame.lambda.after,
        );
      }
    }
  });

  it('is the same for the same seed, and leaves a Hamiltonian without spin alone', async () => {
    const variant = parseVariant(VARIANTS[3]!);
    const hamiltonian = randomHamiltonian(3, 5, KINDS);
    const factors = await factorise(hamiltonian, { grouping: 'separate' }, ctx);
    const frame = await spinFrame(hamiltonian, factors, variant, inlineContext(3));
    expect(await spinFrame(hamiltonian, factors, variant, inlineContext(3))).toEqual(frame);
    const plain = randomHamiltonian(3, 5, { charge: true, spinOrbit: 'none', spinSpin: false });
    const planes = plain.h.planes.map((x, i) => (i < 9 ? x : 0));
    const spinFree = { ...plain, h: { ...plain.h, planes }, k: { ...plain.k, planes } };
    const alone = await spinFrame(
      spinFree,
      await factorise(spinFree, { grouping: 'separate' }, ctx),
      variant,
      ctx,
    );
    expect(Array.from(alone.rotation)).toEqual([1, 0, 0, 0, 1, 0, 0, 0, 1]);
  });

  it('finds the axes of the molecule again, and with them the symmetry of its rows', async () => {
    const { loadSet, findSet } = await import('../../../published/data-set');
    const { buildHamiltonian } = await import('../../../../core/hamiltonian');
    const set = await loadSet(findSet('ch2o_sto3g_8o')!);
    const hamiltonian = buildHamiltonian(set, { terms: ['sf', 'so1', 'somf', 'so2'] });
    if (hamiltonian.kind !== 'spatial') throw new Error('spatial orbitals expected');
    const variant = parseVariant('triplet/separate/index/median/clean');
    const encoded = async (h: typeof hamiltonian) => {
      const factors = await factorise(h, { grouping: 'separate' }, ctx);
      return { factors, encoding: await buildEncoding(h, factors, variant, {}, ctx) };
    };
    const aligned = (await encoded(hamiltonian)).encoding;
    const askew = rotateSpin(hamiltonian, rotationOf([0.3, 0.5, -0.9]));
    const before = await encoded(askew);
    expect(before.encoding.lambda.total).toBeGreaterThan(aligned.lambda.total + 1e-4);
    const frame = await spinFrame(askew, before.factors, variant, ctx);
    const after = (await encoded(rotateSpin(askew, frame.rotation))).encoding;
    expect(after.lambda.total).toBeCloseTo(aligned.lambda.total, 8);
    expect(after.shape.rows).toBeLessThan(before.encoding.shape.rows);
  });

  it('stops on request', async () => {
    const hamiltonian = randomHamiltonian(3, 5, KINDS);
    const factors = await factorise(hamiltonian, { grouping: 'separate' }, ctx);
    let checkpoints = 0;
    const stopping = {
      ...inlineContext(),
      checkpoint: async () => {
        if (++checkpoints > 20) throw new Cancelled();
      },
    };
    await expect(spinFrame(hamiltonian, factors, parseVariant(VARIANTS[3]!), stopping)).rejects.toThrow(
      Cancelled,
    );
  });
});

describe('common directions of the spin–orbit part', () => {
  it('hold the share that they say, in any axes', async () => {
    await fc.assert(
      fc.asyncProperty(seeds, async (seed) => {
        const hamiltonian = randomHamiltonian(4, seed, { ...KINDS, spinOrbit: 'independent' });
        const random = uniform(seed + 1);
        const rotation = rotationOf([random(), random(), random()]);
        // 6 antisymmetric and 10 symmetric pairs: three components span all of the first, and need not all of the second.
        const cores = await spinOrbitCores(hamiltonian, 6, ctx);
        const exact = await spinOrbitTriples(rotateSpin(hamiltonian, rotation), ctx);
        for (const [i, core] of cores.entries()) {
          expect(core.share).toBeGreaterThan(0.4);
          expect(core.share).toBeLessThanOrEqual(1 + 1e-12);
          const triples = await triplesOfCore(core, rotation, ctx);
          const square = (s: Float64Array) => s.reduce((sum, x) => sum + x * x, 0);
          expect(square(triples.strengths) / square(exact[i]!.strengths)).toBeCloseTo(core.share, 10);
        }
      }),
      { numRuns: 8 },
    );
  });
});

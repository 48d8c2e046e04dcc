import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { buildEncoding, parseVariant } from '../../../../core/encode';
import { majoranaNorm, selfRepulsion, spinFreePart } from '../../../../core/encode/frame/majorana-norm';
import { orbitalFrame } from '../../../../core/encode/frame/orbital';
import { factorise } from '../../../../core/factor';
import { rotateOrbitals, tensorElement } from '../../../../core/hamiltonian';
import { Cancelled, inlineContext } from '../../../../core/job';
import { matrixExponential, multiply } from '../../../../core/linalg';
import { fockMatrix } from '../../../../core/verify';
import { randomArray, randomHamiltonian, uniform } from '../../hamiltonian/random-hamiltonian';
import { pauliNorm } from './pauli-norm';

const ctx = inlineContext();
const SPIN_FREE = { charge: true, spinOrbit: 'none', spinSpin: false } as const;
const seeds = fc.integer({ min: 0, max: 2 ** 31 });

/** A random Hamiltonian without spin. */
function spinFree(n: number, seed: number) {
  const full = randomHamiltonian(n, seed, SPIN_FREE);
  const planes = full.h.planes.map((x, i) => (i < n * n ? x : 0));
  return {
    ...full,
    h: { ...full.h, planes },
    k: { ...full.k, planes: full.k.planes.map((x, i) => (i < n * n ? x : 0)) },
  };
}

describe('one-norm of the merged Majorana strings of a spin-free Hamiltonian', () => {
  it('is that of the Pauli strings of its Fock-space matrix', async () => {
    await fc.assert(
      fc.asyncProperty(seeds, fc.integer({ min: 1, max: 3 }), async (seed, n) => {
        const hamiltonian = spinFree(n, seed);
        const { lambda } = await majoranaNorm(spinFreePart(hamiltonian)!, 0, false, ctx);
        expect(lambda / pauliNorm(fockMatrix(hamiltonian, 'stored'))).toBeCloseTo(1, 11);
      }),
      { numRuns: 12 },
    );
  });

  it('self-repulsion has the gradient that finite differences give', async () => {
    const n = 4;
    const hamiltonian = spinFree(n, 77);
    const x = antisymmetric(n, 78);
    const at = async (t: number) => {
      const turned = await rotateOrbitals(
        hamiltonian,
        matrixExponential(
          x.map((v) => t * v),
          n,
        ),
        ctx,
      );
      return (await selfRepulsion(spinFreePart(turned)!, ctx)).lambda;
    };
    const { gradient, lambda } = await selfRepulsion(spinFreePart(hamiltonian)!, ctx);
    let diagonal = 0;
    for (let p = 0; p < n; p++) diagonal -= tensorElement(hamiltonian.g, n, 0, 0, p, p, p, p)[0];
    expect(lambda).toBeCloseTo(diagonal, 13);
    const slope = gradient!.reduce((sum, g, i) => sum + 0.5 * g * x[i]!, 0);
    expect(((await at(1e-4)) - (await at(-1e-4))) / 2e-4).toBeCloseTo(slope, 5);
    expect(Math.abs(slope)).toBeGreaterThan(1e-3);
  });

  it('has the gradient that finite differences of turned orbitals give', async () => {
    await fc.assert(
      fc.asyncProperty(seeds, fc.integer({ min: 2, max: 5 }), async (seed, n) => {
        const hamiltonian = spinFree(n, seed);
        const epsilon = 0.05;
        const { gradient } = await majoranaNorm(spinFreePart(hamiltonian)!, epsilon, true, ctx);
        const x = antisymmetric(n, seed + 1);
        const at = async (t: number) => {
          const u = matrixExponential(
            x.map((value) => t * value),
            n,
          );
          const turned = await rotateOrbitals(hamiltonian, u, ctx);
          return (await majoranaNorm(spinFreePart(turned)!, epsilon, false, ctx)).lambda;
        };
        const step = 1e-4;
        // Fourth-order central difference.
        const difference =
          (8 * ((await at(step)) - (await at(-step))) - ((await at(2 * step)) - (await at(-2 * step)))) /
          (12 * step);
        let slope = 0;
        let scale = 0;
        for (let i = 0; i < n * n; i++) {
          slope += gradient![i]! * x[i]! * 0.5;
          scale += Math.abs(gradient![i]! * x[i]! * 0.5);
        }
        expect(Math.abs(difference - slope)).toBeLessThan(1e-6 * (1 + scale));
        expect(scale).toBeGreaterThan(0);
      }),
      { numRuns: 15 },
    );
  });
});

function antisymmetric(n: number, seed: number): Float64Array {
  const random = randomArray(n * n, uniform(seed));
  return random.map((value, i) => 0.5 * (value - random[(i % n) * n + Math.floor(i / n)]!));
}

describe('orbital frame', () => {
  it('is orthogonal, lowers the norm it says it lowers, and is the same for the same seed', async () => {
    for (const n of [2, 4]) {
      const hamiltonian = spinFree(n, 31 + n);
      const frame = (await orbitalFrame(hamiltonian, {}, inlineContext(7)))!;
      const again = (await orbitalFrame(hamiltonian, {}, inlineContext(7)))!;
      expect(again.rotation).toEqual(frame.rotation);
      const gram = multiply(frame.rotation, frame.rotation, n, n, n, { transposeB: true });
      gram.forEach((x, i) => {
        expect(x).toBeCloseTo(i % (n + 1) === 0 ? 1 : 0, 13);
      });
      const turned = await rotateOrbitals(hamiltonian, frame.rotation, ctx);
      expect((await majoranaNorm(spinFreePart(turned)!, 0, false, ctx)).lambda).toBeCloseTo(
        frame.norm.after,
        10,
      );
      expect((await majoranaNorm(spinFreePart(hamiltonian)!, 0, false, ctx)).lambda).toBe(frame.norm.before);
      expect(frame.norm.after).toBeLessThan(frame.norm.before);
    }
  });

  it('finds the orbitals in which a turned diagonal Hamiltonian is diagonal', async () => {
    // ½ Σ_p U (pp|pp) with nothing else: in other orbitals its norm is larger.
    const n = 3;
    const plain = spinFree(n, 5);
    const charge = new Float64Array(plain.g.charge!.length);
    for (let p = 0; p < n; p++) {
      const pp = (p * (p + 1)) / 2 + p;
      charge[(pp * (pp + 1)) / 2 + pp] = 1;
    }
    const diagonal = {
      ...plain,
      h: { ...plain.h, planes: new Float64Array(4 * n * n) },
      g: { ...plain.g, charge },
    };
    const least = (await majoranaNorm(spinFreePart(diagonal)!, 0, false, ctx)).lambda;
    const u = matrixExponential(antisymmetric(n, 8), n);
    const turned = await rotateOrbitals(diagonal, u, ctx);
    const frame = (await orbitalFrame(turned, { steps: 200 }, ctx))!;
    expect(frame.norm.before).toBeGreaterThan(1.2 * least);
    expect(frame.norm.after).toBeLessThan(1.001 * least);
    expect(frame.norm.after).toBeGreaterThan(least - 1e-9);
  });

  it('stops on request', async () => {
    let checkpoints = 0;
    const stopping = {
      ...inlineContext(),
      checkpoint: async () => {
        if (++checkpoints > 3) throw new Cancelled();
      },
    };
    await expect(orbitalFrame(spinFree(4, 3), {}, stopping)).rejects.toThrow(Cancelled);
  });

  it('is not to be had without a charge part', async () => {
    const hamiltonian = spinFree(3, 1);
    expect(await orbitalFrame({ ...hamiltonian, g: { ...hamiltonian.g, charge: null } }, {}, ctx)).toBeNull();
  });
});

describe('turned orbitals', () => {
  it.each(['none', 'median'])('leave λ of joint triplet and spinor factors, %s shift', async (shift) => {
    const n = 3;
    const hamiltonian = randomHamiltonian(n, 41);
    const turned = await rotateOrbitals(hamiltonian, matrixExponential(antisymmetric(n, 9), n), ctx);
    for (const form of ['triplet', 'spinor']) {
      const variant = parseVariant(`${form}/joint/index/${shift}/clean`);
      const lambda = async (h: typeof hamiltonian) =>
        (await buildEncoding(h, await factorise(h, { grouping: 'joint' }, ctx), variant, {}, ctx)).lambda
          .total;
      const [before, after] = [await lambda(hamiltonian), await lambda(turned)];
      expect(Math.abs(after / before - 1)).toBeLessThan(1e-10);
    }
  });
});

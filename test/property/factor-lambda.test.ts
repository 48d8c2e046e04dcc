import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { buildEncoding, parseVariant } from '../../core/encode';
import { factorise } from '../../core/factor';
import { fromStoredForm, type SpatialHamiltonian } from '../../core/hamiltonian';
import { inlineContext } from '../../core/job';
import { rotated, rotation } from '../unit/factor/rotate';
import { randomHamiltonian } from '../unit/hamiltonian/random-hamiltonian';

const ctx = inlineContext();
const KINDS = { charge: true, spinOrbit: 'multiple', spinSpin: false } as const;
const N = 3;
const PLANES = [
  [0, 1],
  [1, 2],
  [0, 2],
] as const;
const IDENTITY = rotation(3, [], 0);

async function lambda(h: SpatialHamiltonian, name: string): Promise<number> {
  const variant = parseVariant(name);
  const grouping = variant.grouping as 'joint' | 'separate';
  const f = await factorise(h, { grouping }, ctx);
  return (await buildEncoding(h, f, variant, {}, ctx)).lambda.total;
}

const seed = fc.integer({ min: 1, max: 2 ** 30 });
const shift = fc.constantFrom('none', 'median');
const close = (a: number, b: number) => expect(Math.abs(a - b)).toBeLessThan(1e-9 * Math.abs(b));

// Random tensors have no degenerate factors: what holds here holds by the mathematics of nuclear norms.
describe('λ', () => {
  it('does not depend on the orbital basis: ‖U L Uᵀ‖_* = ‖L‖_*', async () => {
    await fc.assert(
      fc.asyncProperty(seed, seed, shift, fc.constantFrom('triplet', 'spinor'), async (a, b, s, form) => {
        const h = randomHamiltonian(N, a, KINDS, 2);
        const name = `${form}/joint/index/${s}/clean`;
        close(await lambda(rotated(h, rotation(N, PLANES, b), IDENTITY), name), await lambda(h, name));
      }),
      { numRuns: 12 },
    );
  });

  it('of the spinor form does not depend on the spin frame', async () => {
    await fc.assert(
      fc.asyncProperty(seed, seed, shift, async (a, b, s) => {
        const h = randomHamiltonian(N, a, KINDS, 2);
        const name = `spinor/joint/index/${s}/clean`;
        close(await lambda(rotated(h, IDENTITY, rotation(3, PLANES, b)), name), await lambda(h, name));
      }),
      { numRuns: 12 },
    );
  });

  it('scales with the Hamiltonian: λ(cH) = |c| λ(H), also for c < 0 where Coulomb becomes indefinite', async () => {
    await fc.assert(
      fc.asyncProperty(
        seed,
        shift,
        fc.constantFrom('triplet/joint', 'spinor/joint', 'triplet/separate', 'spinor/separate'),
        fc.constantFrom(-1, 0.01, 3, 219474.6),
        async (a, s, form, c) => {
          const h = randomHamiltonian(N, a, KINDS, 2);
          const { charge, spinOrbit } = h.g;
          const scaled = fromStoredForm({
            ...h,
            h: { ...h.h, planes: h.h.planes.map((x) => c * x) },
            g: {
              charge: charge!.map((x) => c * x),
              spinOrbit: { same: spinOrbit!.same.map((x) => c * x), other: spinOrbit!.other },
              spinSpin: null,
            },
          });
          const name = `${form}/index/${s}/clean`;
          close(await lambda(scaled, name), Math.abs(c) * (await lambda(h, name)));
        },
      ),
      { numRuns: 16 },
    );
  });
});

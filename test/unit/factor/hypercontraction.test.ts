import { describe, expect, it } from 'vitest';
import {
  type Hypercontraction,
  hypercontract,
  hypercontractedHamiltonian,
  hypercontractedNorm,
  hypercontractedOneBody,
} from '../../../core/factor';
import { normalOrder, type SpatialHamiltonian } from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';
import type { ComplexMatrix } from '../../../core/linalg';
import { multiply } from '../../../core/linalg';
import { oneBodyFockMatrix } from '../../../core/verify';
import { difference, matrixOf, operatorNorm, restrict } from '../encode/fock-space';
import { randomHamiltonian, randomNumbers } from './hypercontraction-problem';

const context = inlineContext();

/** Σ_pq m_pq T_pq on the Fock space, from an n×n matrix. */
function chargeOperator(m: Float64Array, n: number, spins: readonly number[] = [0, 1]): ComplexMatrix {
  const re = new Float64Array(4 * n * n);
  for (let p = 0; p < n; p++) {
    for (let q = 0; q < n; q++) for (const s of spins) re[(2 * p + s) * 2 * n + 2 * q + s] = m[p * n + q]!;
  }
  return oneBodyFockMatrix({ n: 2 * n, re, im: new Float64Array(re.length) });
}

const outer = (u: Float64Array) =>
  Float64Array.from({ length: u.length ** 2 }, (_, i) => u[Math.floor(i / u.length)]! * u[i % u.length]!);
const plusIdentity = (a: ComplexMatrix, x: number): ComplexMatrix => ({
  ...a,
  re: a.re.map((v, i) => (i % (a.n + 1) === 0 ? v + x : v)),
});
const product = (a: ComplexMatrix, b: ComplexMatrix): Float64Array => multiply(a.re, b.re, a.n, a.n, a.n);

/** constant + κ·T + ½ Σ ζ_mn M_m M_n, every operator a Fock-space matrix. */
function encoded(h: SpatialHamiltonian, fit: Hypercontraction): ComplexMatrix {
  const { n, count, vectors, zeta } = fit.block;
  const { kappa, constant } = hypercontractedOneBody(h, fit.block, fit);
  const sum = plusIdentity(chargeOperator(kappa, n), constant);
  const ms = Array.from({ length: count }, (_, m) =>
    plusIdentity(chargeOperator(outer(vectors.subarray(m * n, (m + 1) * n)), n), -1),
  );
  const re = Float64Array.from(sum.re);
  for (let i = 0; i < count; i++) {
    for (let j = 0; j < count; j++) {
      const both = product(ms[i]!, ms[j]!);
      for (let k = 0; k < re.length; k++) re[k]! += 0.5 * zeta[i * count + j]! * both[k]!;
    }
  }
  return { ...sum, re };
}

describe('the operators of a hypercontraction', () => {
  const u = Float64Array.of(0.48, -0.6, 0.64);
  const v = Float64Array.of(0.8, 0.36, -0.48);
  const reflections = (w: Float64Array) =>
    [0, 1].map((s) => {
      const number = chargeOperator(outer(w), 3, [s]);
      return plusIdentity({ ...number, re: number.re.map((x) => 2 * x) }, -1);
    });

  it('are half the sum of two reflections, beside the identity', () => {
    const [up, down] = reflections(u) as [ComplexMatrix, ComplexMatrix];
    const t = chargeOperator(outer(u), 3);
    for (let i = 0; i < t.re.length; i++) {
      const one = i % (t.n + 1) === 0 ? 1 : 0;
      expect(t.re[i]).toBeCloseTo(one + 0.5 * (up.re[i]! + down.re[i]!), 13);
    }
    for (const p of [up, down]) {
      product(p, p).forEach((x, i) => {
        expect(x).toBeCloseTo(i % (p.n + 1) === 0 ? 1 : 0, 13);
      });
    }
    // ½ζM² = ¼ζ(1 + P↑P↓), and P↑P↓ is a reflection: LCU norm ¼|ζ|.
    const m = plusIdentity(t, -1);
    const square = product(m, m);
    const both = product(up, down);
    square.forEach((x, i) => {
      expect(x).toBeCloseTo(0.5 * ((i % (t.n + 1) === 0 ? 1 : 0) + both[i]!), 13);
    });
  });

  it('give |ζ| for a pair of vectors and ¼|ζ| for one with itself', () => {
    const vectors = Float64Array.of(...u, ...v);
    const zeta = Float64Array.of(0.4, -0.3, -0.3, -0.8);
    const norm = hypercontractedNorm({
      kind: 'hypercontracted',
      part: 'coulomb',
      n: 3,
      count: 2,
      vectors,
      zeta,
      shift: null,
    });
    expect(norm).toBeCloseTo(0.3 + 0.1 + 0.2, 14);
    // No operator is larger than its LCU norm; here the parts ½ζM² without their identities.
    const ms = [u, v].map((w) => plusIdentity(chargeOperator(outer(w), 3), -1));
    const re = new Float64Array(64 * 64);
    for (let i = 0; i < 2; i++)
      for (let j = 0; j < 2; j++)
        product(ms[i]!, ms[j]!).forEach((x, k) => {
          re[k]! += 0.5 * zeta[2 * i + j]! * x;
        });
    const whole = plusIdentity({ n: 64, re, im: new Float64Array(re.length) }, -0.25 * (0.4 - 0.8));
    expect(operatorNorm(whole)).toBeLessThanOrEqual(norm + 1e-12);
  });
});

describe('hypercontraction in Fock space', () => {
  const cases = [
    { n: 2, electrons: 2, shift: false, indefinite: false },
    { n: 3, electrons: 4, shift: false, indefinite: true },
    { n: 3, electrons: 4, shift: true, indefinite: false },
    { n: 3, electrons: 2, shift: true, indefinite: true },
  ];

  it.each(cases)('stands for H to its one-norm bound: %o', async ({ n, electrons, shift, indefinite }) => {
    const h = randomHamiltonian(n, electrons, randomNumbers(11 + n), indefinite);
    const occupations = Float64Array.from({ length: n }, (_, p) => (2 * p < electrons ? 2 : 0));
    const wide = await hypercontract(
      h,
      { rank: n, shift, occupations, residualTarget: 0.2, steps: 200 },
      context,
    );
    const close = await hypercontract(
      h,
      { shift, emphasis: 0, occupations, residualTarget: 1e-5, steps: 3000 },
      context,
    );
    const bounds: number[] = [];
    for (const fit of [wide, close]) {
      const gap = difference(encoded(h, fit), matrixOf(h));
      const inside = operatorNorm(restrict(gap, electrons));
      expect(inside).toBeLessThanOrEqual(fit.residual.oneNormBound + 1e-10);
      bounds.push(inside);
      if (!shift) expect(operatorNorm(gap)).toBeLessThanOrEqual(fit.residual.oneNormBound + 1e-10);
      else expect(operatorNorm(restrict(gap, electrons + 1))).toBeGreaterThan(1e-3);
      // The approximate tensor without shift is the same operator.
      const kept = hypercontractedHamiltonian(h, fit.block, fit);
      const same = restrict(difference(encoded(h, fit), matrixOf(kept)), electrons);
      expect(operatorNorm(same)).toBeLessThan(1e-10);
    }
    expect(close.notes).toEqual([]);
    expect(close.residual.frobenius).toBeLessThan(1.2e-5);
    expect(bounds[1]).toBeLessThan(1e-4);
    expect(bounds[0]).toBeGreaterThan(1e-3);
  });

  it('leaves energy and Fock operator of the reference as they are', async () => {
    const h = randomHamiltonian(4, 4, randomNumbers(5));
    const occupations = [2, 1.5, 0.5, 0];
    const fit = await hypercontract(h, { rank: 5, occupations, residualTarget: 0.3, steps: 100 }, context);
    expect(fit.residual.frobenius).toBeGreaterThan(1e-2);
    const half = occupations.map((x) => x / 2);
    const [exact, kept] = [h, hypercontractedHamiltonian(h, fit.block, fit)].map((x) =>
      normalOrder(x, half, half),
    );
    expect(kept!.energy).toBeCloseTo(exact!.energy, 11);
    exact!.even.planes.forEach((x, i) => {
      expect(kept!.even.planes[i]).toBeCloseTo(x, 11);
    });
  });
});

describe('hypercontract', () => {
  const h = randomHamiltonian(4, 4, randomNumbers(3));
  const residualTarget = 0.05;

  it('keeps to the residual target with unit vectors and a symmetric ζ, and lowers λ by the shift', async () => {
    const [plain, shifted] = await Promise.all(
      [false, true].map((shift) => hypercontract(h, { shift, emphasis: 0, residualTarget }, context)),
    );
    for (const { block, residual, notes } of [plain!, shifted!]) {
      expect(notes).toEqual([]);
      expect(residual.frobenius).toBeLessThanOrEqual(1.02 * residualTarget);
      const { n, count, vectors, zeta } = block;
      for (let m = 0; m < count; m++) {
        expect(Math.hypot(...vectors.subarray(m * n, (m + 1) * n))).toBeCloseTo(1, 12);
        for (let k = 0; k < m; k++) expect(zeta[m * count + k]).toBe(zeta[k * count + m]);
      }
    }
    expect(plain!.block.shift).toBeNull();
    expect(shifted!.lambda.total).toBeLessThan(plain!.lambda.total);
  });

  it('lowers λ by looking at the orbitals near the Fermi level', async () => {
    const [even, near] = await Promise.all(
      [0, 1].map((emphasis) => hypercontract(h, { emphasis, residualTarget }, context)),
    );
    expect(even!.weighted).toBeCloseTo(even!.residual.frobenius, 12);
    expect(near!.weighted).toBeLessThanOrEqual(1.02 * residualTarget);
    expect(near!.residual.frobenius).toBeGreaterThan(residualTarget);
    expect(near!.lambda.total).toBeLessThan(even!.lambda.total);
  });

  it('tells of better points, of falling λ, and goes on from one', async () => {
    const seen: number[] = [];
    let last = null;
    const first = await hypercontract(
      h,
      {
        residualTarget,
        steps: 120,
        onBest: (point, lambda) => {
          seen.push(lambda);
          last = point;
        },
      },
      context,
    );
    expect(seen.length).toBeGreaterThan(1);
    for (let i = 1; i < seen.length; i++) expect(seen[i]).toBeLessThan(seen[i - 1]!);
    expect(first.lambda.total).toBeCloseTo(seen.at(-1)!, 9);
    const again = await hypercontract(h, { residualTarget, steps: 300, start: last! }, context);
    expect(again.lambda.total).toBeLessThanOrEqual(first.lambda.total + 1e-9);
  });

  it('gives the same numbers each time', async () => {
    const run = () => hypercontract(h, { rank: 6, residualTarget, steps: 40 }, inlineContext(Math.random()));
    expect((await run()).block).toEqual((await run()).block);
  });

  it('says so where the rank is too small', async () => {
    const { notes, residual } = await hypercontract(h, { rank: 2, residualTarget: 1e-3, steps: 50 }, context);
    expect(residual.frobenius).toBeGreaterThan(1e-3);
    expect(notes.join()).toMatch(/more vectors/);
  });

  it.each([
    ['bad-rank', { rank: 11 }],
    ['bad-rank', { rank: 2.5 }],
    ['bad-residual-target', { residualTarget: 0 }],
    ['bad-emphasis', { emphasis: -1 }],
    ['bad-occupations', { occupations: [2, 2, 3, 0] }],
    [
      'bad-start',
      {
        shift: true,
        start: { count: 1, vectors: new Float64Array(4), zeta: new Float64Array(1), shift: null },
      },
    ],
  ] as const)('refuses with %s', async (code, options) => {
    await expect(hypercontract(h, options, context)).rejects.toMatchObject({ code });
  });

  it('refuses a Hamiltonian without a charge part', async () => {
    const none = { ...h, g: { charge: null, spinOrbit: null, spinSpin: null } };
    await expect(hypercontract(none, {}, context)).rejects.toMatchObject({ code: 'no-charge-part' });
  });
});

import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { buildEncoding, parseVariant } from '../../../core/encode';
import {
  fromStoredForm,
  type SpatialHamiltonian,
  type SpinHamiltonian,
  tensorElement,
} from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';
import { hermitianEigenvalues } from '../../../core/linalg';
import { randomHamiltonian } from '../hamiltonian/random-hamiltonian';
import { difference, matrixOf, operatorNorm, restrict } from './fock-space';

const ctx = inlineContext();
type Grouping = '-' | 'joint';
const encode = (h: SpatialHamiltonian, threshold = 0, grouping: Grouping = '-') =>
  buildEncoding(h, null, parseVariant(`sparse/${grouping}/index/none/clean`), { threshold }, ctx);
type Mu = 0 | 1 | 2 | 3;
const MUS = [0, 1, 2, 3] as const;

/**
 * Coefficients of H over all products of Majorana operators, tr(γ_S H)/4^N for every set S, by the definition on the
 * dense matrix. Every product is a permutation of the determinants with phases: γ_{m0} = a + a†, γ_{m1} = −i(a − a†).
 */
function majoranaCoefficients(h: SpatialHamiltonian): { constant: number; norms: Map<number, number[]> } {
  const matrix = matrixOf(h);
  const { n: dim } = matrix;
  const modes = 2 * h.orbitals;
  const norms = new Map<number, number[]>();
  let constant = 0;
  const visit = (from: number, size: number, target: Uint32Array, phase: Uint8Array) => {
    let [re, im] = [0, 0];
    // γ_S takes j to i^phase[j] |target[j]⟩; tr(γ_S H) = Σ_j i^phase[j] H_{j,target[j]}.
    for (let j = 0; j < dim; j++) {
      const at = j * dim + target[j]!;
      const [x, y] = [matrix.re[at]!, matrix.im[at]!];
      const turned = [x, -y, -x, y][phase[j]!]!;
      re += turned;
      im += [y, x, -y, -x][phase[j]!]!;
    }
    if (size === 0) constant = re / dim;
    else norms.set(size, [...(norms.get(size) ?? []), Math.hypot(re, im) / dim]);
    if (size === 4) return;
    for (let g = from; g < 2 * modes; g++) {
      const [mode, kind] = [g >> 1, g & 1];
      const nextTarget = new Uint32Array(dim);
      const nextPhase = new Uint8Array(dim);
      for (let j = 0; j < dim; j++) {
        const state = target[j]!;
        let sign = 0;
        for (let below = 0; below < mode; below++) if ((state >> below) & 1) sign += 2;
        const isFull = (state >> mode) & 1;
        // −i a on a full mode, +i a† on an empty one.
        const own = kind === 0 ? 0 : isFull ? 3 : 1;
        nextTarget[j] = state ^ (1 << mode);
        nextPhase[j] = (phase[j]! + sign + own) % 4;
      }
      visit(g + 1, size + 1, nextTarget, nextPhase);
    }
  };
  visit(
    0,
    0,
    Uint32Array.from({ length: dim }, (_, j) => j),
    new Uint8Array(dim),
  );
  return { constant, norms };
}

const sum = (values: readonly number[]) => values.reduce((a, b) => a + b, 0);

/**
 * The closed one-norm of a spin-free Hamiltonian over Majorana products, E. Koridon et al., Phys. Rev. Research 3, 033127
 * (2021), quoted from memory; its prefactors are checked against Fock space below.
 */
function closedNorm(h: SpatialHamiltonian): { oneBody: number; twoBody: number } {
  const n = h.orbitals;
  const g = (p: number, q: number, r: number, s: number) => tensorElement(h.g, n, 0, 0, p, q, r, s)[0];
  let [oneBody, different, all] = [0, 0, 0];
  for (let p = 0; p < n; p++) {
    for (let q = 0; q < n; q++) {
      let element = h.h.planes[p * n + q]!;
      for (let r = 0; r < n; r++) element += g(p, q, r, r) - 0.5 * g(p, r, r, q);
      oneBody += Math.abs(element);
      for (let r = 0; r < n; r++) {
        for (let s = 0; s < n; s++) {
          all += Math.abs(g(p, q, r, s));
          if (p > r && s > q) different += Math.abs(g(p, q, r, s) - g(p, s, r, q));
        }
      }
    }
  }
  return { oneBody, twoBody: 0.5 * different + 0.25 * all };
}

function spinFree(n: number, seed: number): SpatialHamiltonian {
  const h = randomHamiltonian(n, seed, { charge: true, spinOrbit: 'none', spinSpin: false });
  h.h.planes.fill(0, n * n);
  return fromStoredForm(h);
}

/**
 * λ from all N⁴ elements of the full tensor: the (anti)symmetric parts of each pair are taken apart first, since T_pq
 * and T_qp together make one Hermitian row operator.
 */
function literalLambda(h: SpatialHamiltonian): { oneBody: number; twoBody: number } {
  const n = h.orbitals;
  const g = (mu: Mu, nu: Mu, p: number, q: number, r: number, s: number) =>
    tensorElement(h.g, n, mu, nu, p, q, r, s);
  let oneBody = 0;
  let twoBody = 0;
  for (let p = 0; p < n; p++) {
    for (let q = 0; q < n; q++) {
      for (const mu of MUS) {
        let kappa = h.k.planes[(mu * n + p) * n + q]!;
        for (let r = 0; r < n; r++) {
          const value = g(mu, 0, p, q, r, r);
          kappa += mu === 0 ? value[0] : value[1];
        }
        oneBody += Math.abs(kappa);
        for (const nu of MUS) {
          for (let r = 0; r < n; r++) {
            for (let s = 0; s < n; s++) {
              for (const [a, b] of [
                [1, 1],
                [1, -1],
                [-1, 1],
                [-1, -1],
              ] as const) {
                const part = (x: 0 | 1) =>
                  (g(mu, nu, p, q, r, s)[x] +
                    a * g(mu, nu, q, p, r, s)[x] +
                    b * g(mu, nu, p, q, s, r)[x] +
                    a * b * g(mu, nu, q, p, s, r)[x]) /
                  4;
                twoBody += 0.5 * Math.hypot(part(0), part(1));
              }
            }
          }
        }
      }
    }
  }
  return { oneBody, twoBody };
}

describe('sparse form, joined', () => {
  it.each([2, 3])(
    'spin-free, %d orbitals: the closed one-norm, the Fock-space one and the rows agree',
    async (n) => {
      const h = spinFree(n, 30 + n);
      const { lambda, constant } = await encode(h, 0, 'joint');
      const closed = closedNorm(h);
      const { norms, constant: identity } = majoranaCoefficients(h);
      expect(closed.oneBody).toBeCloseTo(sum(norms.get(2)!), 10);
      expect(closed.twoBody).toBeCloseTo(sum(norms.get(4)!), 10);
      expect(lambda.oneBody).toBeCloseTo(closed.oneBody, 10);
      expect(lambda.twoBody).toBeCloseTo(closed.twoBody, 10);
      expect(constant).toBeCloseTo(identity, 10);
    },
  );

  it('spin-free, six orbitals: λ is the closed one-norm', async () => {
    const h = spinFree(6, 36);
    const { lambda } = await encode(h, 0, 'joint');
    expect(lambda.oneBody).toBeCloseTo(closedNorm(h).oneBody, 9);
    expect(lambda.twoBody).toBeCloseTo(closedNorm(h).twoBody, 9);
  });

  it.each([
    ['one spin–orbit array', { charge: true, spinOrbit: 'multiple', spinSpin: false }],
    ['two spin–orbit arrays', { charge: false, spinOrbit: 'independent', spinSpin: false }],
    ['spin–spin', { charge: false, spinOrbit: 'none', spinSpin: true }],
    ['all terms', { charge: true, spinOrbit: 'independent', spinSpin: true }],
  ] as const)('%s: λ is the one-norm over all Majorana products of H on Fock space', async (_, kinds) => {
    // Four orbitals are needed for products over four different ones.
    for (const n of [2, 3, 4]) {
      const h = randomHamiltonian(n, 50 + n, kinds);
      const { lambda, constant, shape, rebuild } = await encode(h, 0, 'joint');
      const { norms, constant: identity } = majoranaCoefficients(h);
      expect(
        norms
          .get(1)!
          .concat(norms.get(3)!)
          .every((x) => x < 1e-12),
      ).toBe(true);
      expect(lambda.oneBody).toBeCloseTo(sum(norms.get(2)!), 9);
      expect(lambda.twoBody).toBeCloseTo(sum(norms.get(4)!), 9);
      expect(constant).toBeCloseTo(identity, 10);
      if (n === 4) {
        const sector = (g: SpinHamiltonian) => restrict(matrixOf(g), 3);
        expect(operatorNorm(difference(sector(rebuild()), sector(h)))).toBeLessThan(1e-9);
        const grouped = await encode(h, 1, '-');
        const moved = operatorNorm(difference(sector(grouped.rebuild()), sector(h)));
        expect(moved).toBeLessThanOrEqual(grouped.residual.oneNormBound + 1e-10);
      }
      // A row stands for at least one product, and at most for eight.
      const products = norms.get(4)!.filter((x) => x > 1e-10).length;
      const twoBody = shape.rows - shape.oneBodyRows;
      expect(8 * twoBody).toBeGreaterThanOrEqual(products);
      expect(twoBody).toBeLessThanOrEqual(products);
    }
  });

  it('every row keeps the electron number and time reversal, whatever is dropped', async () => {
    const h = randomHamiltonian(3, 61, { charge: true, spinOrbit: 'independent', spinSpin: true });
    for (const threshold of [2, 20]) {
      const { residual, rebuild } = await encode(h, threshold, 'joint');
      expect(residual.dropped).toBeGreaterThan(0);
      const energies = hermitianEigenvalues(restrict(matrixOf(rebuild()), 1));
      // Kramers pairs of one electron.
      for (let i = 0; i < energies.length; i += 2) expect(energies[i]).toBeCloseTo(energies[i + 1]!, 9);
    }
  });
});

describe('sparse form', () => {
  it.each([
    ['spin-free', { charge: true, spinOrbit: 'none', spinSpin: false }],
    ['one spin–orbit array for both parts', { charge: true, spinOrbit: 'multiple', spinSpin: false }],
    ['all terms', { charge: true, spinOrbit: 'independent', spinSpin: true }],
  ] as const)(
    'λ of κ and of spin is the sum over all elements, that of charge is less: %s',
    async (_, kinds) => {
      const h = randomHamiltonian(3, 41, kinds);
      const { lambda } = await encode(h);
      const expected = literalLambda(h);
      expect(lambda.oneBody).toBeCloseTo(expected.oneBody, 10);
      const alone = { ...h, g: { ...h.g, spinOrbit: null, spinSpin: null } };
      const products = literalLambda(alone).twoBody;
      const charge = lambda.parts.coulomb!;
      expect(lambda.twoBody - charge).toBeCloseTo(expected.twoBody - products, 9);
      expect(charge).toBeLessThan(products);
      expect(charge).toBeGreaterThanOrEqual(closedNorm(alone).twoBody - 1e-10);
    },
  );

  it('joins charge rows only where that is worth them', async () => {
    const h = spinFree(6, 62);
    const [grouped, joint] = [await encode(h), await encode(h, 0, 'joint')];
    expect(joint.lambda.total).toBeLessThan(grouped.lambda.total);
    expect(grouped.lambda.total).toBeLessThan(literalLambda(h).oneBody + literalLambda(h).twoBody);
    expect(grouped.shape.rows).toBeLessThan(joint.shape.rows);
  });

  it('counts every unique coefficient of κ and of spin once', async () => {
    const n = 3;
    const npair = 6;
    const nanti = 3;
    const triangle = (npair * (npair + 1)) / 2;
    const oneBody = npair + 3 * nanti;
    const { shape } = await encode(
      randomHamiltonian(n, 42, { charge: true, spinOrbit: 'multiple', spinSpin: true }),
    );
    expect(shape.oneBodyRows).toBe(oneBody);
    const charge = shape.rows - oneBody - 3 * nanti * npair - 6 * triangle;
    // Between one row for each set of four orbitals and all joined ones.
    const joined = await encode(spinFree(n, 42), 0, 'joint');
    expect(charge).toBeGreaterThanOrEqual(15);
    expect(charge).toBeLessThanOrEqual(joined.shape.rows - joined.shape.oneBodyRows);
    const independent = await encode(
      randomHamiltonian(n, 42, { charge: true, spinOrbit: 'independent', spinSpin: true }),
    );
    expect(independent.shape.rows - shape.rows).toBe(3 * nanti * npair);
  });

  it.each(['-', 'joint'] as const)(
    '%s: drops the lightest rows, as many as the threshold allows',
    async (grouping) => {
      const h = randomHamiltonian(3, 43, { charge: true, spinOrbit: 'independent', spinSpin: true });
      const exact = matrixOf(h);
      const full = await encode(h, 0, grouping);
      let previous = 0;
      for (const threshold of [1e-3, 0.1, 1, 10]) {
        const { lambda, residual, shape, rebuild, sparseProgram } = await encode(h, threshold, grouping);
        expect(residual.oneNormBound).toBeLessThanOrEqual(threshold);
        const lightest = Math.min(...sparseProgram!().weights);
        if (grouping === 'joint') {
          expect(lambda.total + residual.oneNormBound).toBeCloseTo(full.lambda.total, 9);
          expect(shape.rows + residual.dropped).toBe(full.shape.rows);
          const next = full.sparseProgram!().weights.filter((weight) => Math.abs(weight - lightest) < 1e-12);
          expect(residual.oneNormBound + sum([...next])).toBeGreaterThan(threshold);
        }
        expect(residual.oneNormBound + lightest * 8).toBeGreaterThan(threshold);
        expect(residual.dropped).toBeGreaterThanOrEqual(previous);
        previous = residual.dropped;
        expect(operatorNorm(difference(matrixOf(rebuild()), exact))).toBeLessThanOrEqual(
          residual.oneNormBound + 1e-10,
        );
      }
      expect(previous).toBeGreaterThan(20);
    },
  );

  it('reports the Frobenius norm of the dropped part of g', async () => {
    const h = randomHamiltonian(3, 44, { charge: false, spinOrbit: 'multiple', spinSpin: true });
    const { residual, rebuild } = await encode(h, 8);
    const rebuilt = rebuild();
    if (rebuilt.kind !== 'spatial') throw new Error('spatial form expected');
    let square = 0;
    for (const mu of MUS) {
      for (const nu of MUS) {
        for (let i = 0; i < 81; i++) {
          const [p, q, r, s] = [
            Math.floor(i / 27),
            Math.floor(i / 9) % 3,
            Math.floor(i / 3) % 3,
            i % 3,
          ] as const;
          const a = tensorElement(h.g, 3, mu, nu, p, q, r, s);
          const b = tensorElement(rebuilt.g, 3, mu, nu, p, q, r, s);
          square += (a[0] - b[0]) ** 2 + (a[1] - b[1]) ** 2;
        }
      }
    }
    expect(square).toBeGreaterThan(0.01);
    expect(residual.frobenius).toBeCloseTo(Math.sqrt(square), 10);
  });

  it('joined: the same over spin orbitals, where every σ^μ has four times its square', async () => {
    const h = randomHamiltonian(3, 45, { charge: true, spinOrbit: 'independent', spinSpin: true });
    const whole = (await encode(h, 0, 'joint')).rebuild();
    for (const threshold of [2, 20]) {
      const { residual, rebuild } = await encode(h, threshold, 'joint');
      const left = rebuild();
      if (whole.kind !== 'spinor' || left.kind !== 'spinor') throw new Error('spinor form expected');
      let square = 0;
      for (let i = 0; i < whole.g.re.length; i++) {
        square += (whole.g.re[i]! - left.g.re[i]!) ** 2 + (whole.g.im[i]! - left.g.im[i]!) ** 2;
      }
      expect(square).toBeGreaterThan(0.01);
      expect(residual.frobenius).toBeCloseTo(Math.sqrt(square / 4), 10);
    }
  });

  it('any parts, ratio and threshold: H within the bound, λ between the joined norm and that of all products', async () => {
    await fc.assert(
      fc.asyncProperty(
        fc.record({
          charge: fc.boolean(),
          spinOrbit: fc.constantFrom('none' as const, 'multiple' as const, 'independent' as const),
          spinSpin: fc.boolean(),
        }),
        fc.constantFrom(2, -0.7, 0),
        fc.constantFrom(0, 0.3, 5),
        fc.integer({ min: 0, max: 1000 }),
        async (kinds, timesSame, threshold, seed) => {
          const random = randomHamiltonian(2, seed, kinds);
          const spinOrbit =
            kinds.spinOrbit === 'multiple'
              ? { ...random.g.spinOrbit!, other: { timesSame } }
              : random.g.spinOrbit;
          const h = fromStoredForm({ ...random, g: { ...random.g, spinOrbit } });
          const exact = matrixOf(h);
          const [grouped, joint] = await Promise.all([encode(h, threshold), encode(h, threshold, 'joint')]);
          for (const { residual, rebuild } of [grouped, joint]) {
            expect(residual.oneNormBound).toBeLessThanOrEqual(threshold);
            const moved = operatorNorm(difference(matrixOf(rebuild()), exact));
            expect(moved).toBeLessThanOrEqual(residual.oneNormBound + 1e-10);
          }
          const { oneBody, twoBody } = literalLambda(h);
          expect(joint.lambda.total).toBeLessThanOrEqual(
            grouped.lambda.total + grouped.residual.oneNormBound + 1e-10,
          );
          expect(grouped.lambda.total).toBeLessThanOrEqual(oneBody + twoBody + 1e-10);
        },
      ),
      { numRuns: 40, seed: 7 },
    );
  });
});

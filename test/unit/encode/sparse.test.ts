import { describe, expect, it } from 'vitest';
import { buildEncoding, parseVariant } from '../../../core/encode';
import { type SpatialHamiltonian, tensorElement } from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';
import { randomHamiltonian } from '../hamiltonian/random-hamiltonian';
import { difference, matrixOf, operatorNorm } from './fock-space';

const ctx = inlineContext();
const SPARSE = parseVariant('sparse/-/index/none/clean');
const encode = (h: SpatialHamiltonian, threshold = 0) => buildEncoding(h, null, SPARSE, { threshold }, ctx);
type Mu = 0 | 1 | 2 | 3;
const MUS = [0, 1, 2, 3] as const;

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

describe('sparse form', () => {
  it.each([
    ['spin-free', { charge: true, spinOrbit: 'none', spinSpin: false }],
    ['one spin–orbit array for both parts', { charge: true, spinOrbit: 'multiple', spinSpin: false }],
    ['all terms', { charge: true, spinOrbit: 'independent', spinSpin: true }],
  ] as const)('λ is the sum over all elements of the full tensor: %s', async (_, kinds) => {
    const h = randomHamiltonian(3, 41, kinds);
    const { lambda } = await encode(h);
    const expected = literalLambda(h);
    expect(lambda.oneBody).toBeCloseTo(expected.oneBody, 10);
    expect(lambda.twoBody).toBeCloseTo(expected.twoBody, 10);
  });

  it('counts every unique coefficient once', async () => {
    const n = 3;
    const npair = 6;
    const nanti = 3;
    const triangle = (npair * (npair + 1)) / 2;
    const oneBody = npair + 3 * nanti;
    const { shape } = await encode(
      randomHamiltonian(n, 42, { charge: true, spinOrbit: 'multiple', spinSpin: true }),
    );
    expect(shape.oneBodyRows).toBe(oneBody);
    expect(shape.rows).toBe(oneBody + triangle + 3 * nanti * npair + 6 * triangle);
    const independent = await encode(
      randomHamiltonian(n, 42, { charge: true, spinOrbit: 'independent', spinSpin: true }),
    );
    expect(independent.shape.rows - shape.rows).toBe(3 * nanti * npair);
  });

  it('drops the lightest coefficients, as many as the threshold allows', async () => {
    const h = randomHamiltonian(3, 43, { charge: true, spinOrbit: 'independent', spinSpin: true });
    const exact = matrixOf(h);
    const full = await encode(h);
    let previous = 0;
    for (const threshold of [1e-3, 0.1, 1, 10]) {
      const { lambda, residual, shape, rebuild } = await encode(h, threshold);
      expect(residual.oneNormBound).toBeLessThanOrEqual(threshold);
      expect(lambda.total + residual.oneNormBound).toBeCloseTo(full.lambda.total, 9);
      expect(shape.rows + residual.dropped).toBe(full.shape.rows);
      expect(residual.dropped).toBeGreaterThanOrEqual(previous);
      previous = residual.dropped;
      expect(operatorNorm(difference(matrixOf(rebuild()), exact))).toBeLessThanOrEqual(
        residual.oneNormBound + 1e-10,
      );
    }
    expect(previous).toBeGreaterThan(20);
  });

  it('reports the Frobenius norm of the dropped part of g', async () => {
    const h = randomHamiltonian(3, 44, { charge: true, spinOrbit: 'multiple', spinSpin: true });
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
});

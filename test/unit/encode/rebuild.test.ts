import { describe, expect, it } from 'vitest';
import { buildEncoding, parseVariant } from '../../../core/encode';
import { factorise, type Grouping } from '../../../core/factor';
import { fromStoredForm, type SpatialHamiltonian, type SpinHamiltonian } from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';
import { hermitianEigenvalues } from '../../../core/linalg';
import { randomHamiltonian } from '../hamiltonian/random-hamiltonian';
import { difference, matrixOf, operatorNorm, restrict } from './fock-space';

const ctx = inlineContext();

async function encode(h: SpinHamiltonian, name: string, threshold = 0, occupations?: number[]) {
  const variant = parseVariant(name);
  const { grouping } = variant;
  const factorisation =
    variant.factorisation === 'sparse' || grouping === '-'
      ? null
      : await factorise(h, { grouping, threshold, ...(occupations ? { occupations } : {}) }, ctx);
  return buildEncoding(h, factorisation, variant, { threshold }, ctx);
}

function spinFree(): SpatialHamiltonian {
  const h = randomHamiltonian(3, 11, { charge: true, spinOrbit: 'none', spinSpin: false }, 2);
  h.h.planes.fill(0, 9);
  return fromStoredForm(h);
}

const HAMILTONIANS = {
  'spin-free': spinFree(),
  'one spin–orbit array': randomHamiltonian(
    3,
    12,
    { charge: true, spinOrbit: 'multiple', spinSpin: false },
    2,
  ),
  'two spin–orbit arrays': randomHamiltonian(
    3,
    13,
    { charge: true, spinOrbit: 'independent', spinSpin: false },
    4,
  ),
  'all terms': randomHamiltonian(3, 14, { charge: true, spinOrbit: 'independent', spinSpin: true }, 4),
  'spin–spin alone': randomHamiltonian(2, 15, { charge: false, spinOrbit: 'none', spinSpin: true }, 1),
};
const FORMS = [
  'triplet/joint/index/none/clean',
  'triplet/separate/index/none/clean',
  'spinor/joint/index/none/clean',
  'spinor/separate/index/none/clean',
  'sparse/-/index/none/clean',
  'sparse/joint/index/none/clean',
];

// The random tensors are indefinite, so the charge part takes eigenvectors here; Cholesky columns are checked on real
// sets in test/published/lambda.test.ts.
describe.each(Object.entries(HAMILTONIANS))('H rebuilt from its encoding: %s', (_, h) => {
  const exact = matrixOf(h);

  it.each(FORMS)('%s gives H on the whole Fock space', async (name) => {
    const encoding = await encode(h, name);
    expect(encoding.residual.dropped).toBe(0);
    expect(operatorNorm(difference(matrixOf(encoding.rebuild()), exact))).toBeLessThan(1e-10);
  });

  it.each(FORMS)('%s: λ and the constant bound the spectrum, |E − c| ≤ λ', async (name) => {
    const { lambda, constant } = await encode(h, name);
    const energies = hermitianEigenvalues(exact);
    const reach = Math.max(constant - energies[0]!, energies.at(-1)! - constant);
    expect(reach).toBeLessThanOrEqual(lambda.total * (1 + 1e-12));
    const sum = Object.values(lambda.parts).reduce((a, b) => a + b, 0);
    expect(sum).toBeCloseTo(lambda.total, 10);
  });

  it.each([0.2, 4])('truncation at %d Eh moves no eigenvalue by more than the bound', async (threshold) => {
    for (const name of FORMS) {
      for (const occupations of [undefined, [2, 0.5, 1.5].slice(0, h.kind === 'spatial' ? h.orbitals : 0)]) {
        const encoding = await encode(h, name, threshold, occupations);
        const shift = operatorNorm(difference(matrixOf(encoding.rebuild()), exact));
        expect(shift).toBeLessThanOrEqual(encoding.residual.oneNormBound + 1e-10);
        if (encoding.residual.dropped === 0) expect(shift).toBeLessThan(1e-10);
        // Without a reference of its own the replacement costs nothing.
        if (!occupations) expect(encoding.residual.oneNormBound).toBeLessThanOrEqual(threshold * (1 + 1e-12));
      }
    }
  });
});

describe('median shift', () => {
  const shiftable = ['triplet/joint', 'triplet/separate', 'spinor/joint', 'spinor/separate'];
  it.each(shiftable)('%s: the same operator for η electrons, another one elsewhere', async (form) => {
    for (const h of [HAMILTONIANS['all terms'], HAMILTONIANS['one spin–orbit array']]) {
      const exact = matrixOf(h);
      const encoding = await encode(h, `${form}/index/median/clean`);
      const shifted = matrixOf(encoding.rebuild());
      for (let electrons = 0; electrons <= 6; electrons++) {
        const distance = operatorNorm(difference(restrict(shifted, electrons), restrict(exact, electrons)));
        if (electrons === h.electrons) expect(distance).toBeLessThan(1e-9);
        else expect(distance).toBeGreaterThan(1e-3);
      }
      const energies = hermitianEigenvalues(shifted);
      const reach = Math.max(encoding.constant - energies[0]!, energies.at(-1)! - encoding.constant);
      expect(reach).toBeLessThanOrEqual(encoding.lambda.total * (1 + 1e-12));
    }
  });
});

describe('spinor and triplet one-norms of the same factors', () => {
  const groupings: Grouping[] = ['joint', 'separate'];
  it.each(groupings)('%s: the spinor norm is never larger, and equal without spin', async (grouping) => {
    for (const [kind, h] of Object.entries(HAMILTONIANS)) {
      const factorisation = await factorise(h, { grouping }, ctx);
      for (const shift of ['none', 'median']) {
        const [triplet, spinor] = await Promise.all(
          ['triplet', 'spinor'].map((form) =>
            buildEncoding(
              h,
              factorisation,
              parseVariant(`${form}/${grouping}/index/${shift}/clean`),
              {},
              ctx,
            ),
          ),
        );
        for (const part of Object.keys(triplet!.lambda.parts)) {
          // One-body charge and spin are a split of one norm; only their sum is comparable.
          if (part.startsWith('one-body')) continue;
          const bound = triplet!.lambda.parts[part]! * (1 + 1e-12);
          expect(spinor!.lambda.parts[part]).toBeLessThanOrEqual(bound);
        }
        expect(spinor!.lambda.oneBody).toBeLessThanOrEqual(triplet!.lambda.oneBody * (1 + 1e-12));
        if (kind === 'spin-free') expect(spinor!.lambda.total).toBeCloseTo(triplet!.lambda.total, 11);
      }
    }
  });
});

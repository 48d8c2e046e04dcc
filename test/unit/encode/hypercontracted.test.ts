import { describe, expect, it } from 'vitest';
import { buildEncoding, parseVariant } from '../../../core/encode';
import {
  approximateCharge,
  type Factorisation,
  factorise,
  type HypercontractedFactors,
} from '../../../core/factor';
import { fromProductForm, type SpatialHamiltonian, shiftedHamiltonian } from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';
import { programLambda, programOperator } from '../circuit/majorana-algebra';
import { randomNumbers } from '../circuit/triplet-support';
import { randomHamiltonian } from '../hamiltonian/random-hamiltonian';
import { difference, matrixOf, operatorNorm, restrict } from './fock-space';

const ctx = inlineContext();

/** Any vectors and any symmetric ζ stand for some charge tensor. */
function randomBlock(n: number, count: number, seed: number, shifted: boolean): HypercontractedFactors {
  const random = randomNumbers(seed);
  const vectors = Float64Array.from({ length: count * n }, random);
  for (let m = 0; m < count; m++) {
    const norm = Math.hypot(...vectors.subarray(m * n, (m + 1) * n));
    for (let p = 0; p < n; p++) vectors[m * n + p]! /= norm;
  }
  const symmetric = (size: number) => {
    const out = new Float64Array(size * size);
    for (let i = 0; i < size; i++)
      for (let j = 0; j <= i; j++) out[i * size + j] = out[j * size + i] = random();
    return out;
  };
  const zeta = symmetric(count);
  return {
    kind: 'hypercontracted',
    part: 'coulomb',
    n,
    count,
    vectors,
    zeta,
    shift: shifted ? symmetric(n) : null,
  };
}

/** A Hamiltonian whose charge part is what the block stands for exactly, and its factorisation. */
async function contracted(h: SpatialHamiltonian, block: HypercontractedFactors) {
  const hamiltonian = fromProductForm({ ...h, g: { ...h.g, charge: approximateCharge(block) } });
  const spin = await factorise(hamiltonian, { grouping: 'separate', withoutCoulomb: true }, ctx);
  expect(spin.blocks.every(({ part }) => part !== 'coulomb')).toBe(true);
  const factorisation: Factorisation = { ...spin, blocks: [block, ...spin.blocks] };
  return { hamiltonian, factorisation };
}

const SPIN = { charge: true, spinOrbit: 'multiple', spinSpin: false } as const;
const CASES = [
  ['2 orbitals', randomHamiltonian(2, 31, SPIN, 3), 4],
  [
    '2 orbitals, all terms',
    randomHamiltonian(2, 32, { ...SPIN, spinOrbit: 'independent', spinSpin: true }, 1),
    3,
  ],
  ['3 orbitals', randomHamiltonian(3, 33, SPIN, 2), 5],
] as const;

describe.each(CASES)('hypercontracted charge part: %s', (_, h, count) => {
  it('is rebuilt on the whole Fock space, and its rows and products add up to it', async () => {
    const { hamiltonian, factorisation } = await contracted(h, randomBlock(h.orbitals, count, 5, false));
    const variant = parseVariant('hypercontracted/separate/index/none/clean');
    const encoding = await buildEncoding(hamiltonian, factorisation, variant, {}, ctx);
    const exact = matrixOf(hamiltonian);
    expect(operatorNorm(difference(matrixOf(encoding.rebuild()), exact))).toBeLessThan(1e-10);

    const program = encoding.program!();
    expect(programLambda(program)).toBeCloseTo(encoding.lambda.total, 10);
    const sum = programOperator(program);
    for (let i = 0; i < sum.n; i++) sum.re[i * sum.n + i]! += encoding.constant;
    expect(operatorNorm(difference(sum, exact))).toBeLessThan(1e-10);
    expect(program.items.length + program.products!.lambda.length).toBe(encoding.shape.factors);
    expect(encoding.shape.items!.products).toEqual({ count: (count * (count + 1)) / 2, vectors: count });
  });

  it('with the shift of the fit: H in the sector, H + ξ(N − η) everywhere', async () => {
    const block = randomBlock(h.orbitals, count, 6, true);
    const { hamiltonian, factorisation } = await contracted(h, block);
    const variant = parseVariant('hypercontracted/separate/swap-layers/optimised/clean');
    const encoding = await buildEncoding(hamiltonian, factorisation, variant, {}, ctx);
    const exact = matrixOf(hamiltonian);
    const program = programOperator(encoding.program!());
    for (let i = 0; i < program.n; i++) program.re[i * program.n + i]! += encoding.constant;
    const rebuilt = matrixOf(encoding.rebuild());
    expect(operatorNorm(difference(program, rebuilt))).toBeLessThan(1e-10);
    const { electrons } = hamiltonian;
    expect(operatorNorm(difference(restrict(rebuilt, electrons), restrict(exact, electrons)))).toBeLessThan(
      1e-10,
    );
    expect(operatorNorm(difference(rebuilt, exact))).toBeGreaterThan(0.1);
    const shifted = matrixOf(shiftedHamiltonian(hamiltonian, encoding.symmetryShift!()));
    expect(operatorNorm(difference(rebuilt, shifted))).toBeLessThan(1e-10);
  });
});

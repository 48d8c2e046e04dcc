import { expect, it } from 'vitest';
import { encodedProgram, tripletTables } from '../../../core/circuit';
import { buildEncoding, parseVariant } from '../../../core/encode';
import { GUARD_BITS, roundingError } from '../../../core/estimate';
import { factorise, type HypercontractedFactors } from '../../../core/factor';
import { inlineContext } from '../../../core/job';
import { programOperator } from '../circuit/majorana-algebra';
import { randomNumbers } from '../circuit/triplet-support';
import { difference, operatorNorm } from '../encode/fock-space';
import { randomHamiltonian } from '../hamiltonian/random-hamiltonian';

const ctx = inlineContext();
const [N, M] = [3, 8];

function block(seed: number): HypercontractedFactors {
  const random = randomNumbers(seed);
  const vectors = Float64Array.from({ length: M * N }, random);
  for (let m = 0; m < M; m++) {
    const size = Math.hypot(...vectors.subarray(m * N, (m + 1) * N));
    for (let p = 0; p < N; p++) vectors[m * N + p]! /= size;
  }
  const zeta = new Float64Array(M * M);
  for (let m = 0; m < M; m++) for (let k = 0; k <= m; k++) zeta[m * M + k] = zeta[k * M + m] = random();
  return { kind: 'hypercontracted', part: 'coulomb', n: N, count: M, vectors, zeta, shift: null };
}

// Literal Majorana matrices of the rounded rows against sizes and λ alone.
it.each([1, 2, 3])(
  'rounding of products: bounded, and estimated to the guard bits, seed %i',
  async (seed) => {
    const kinds = { charge: true, spinOrbit: 'none', spinSpin: false } as const;
    const h = randomHamiltonian(N, seed, kinds, 3);
    const spin = await factorise(h, { grouping: 'separate', withoutCoulomb: true }, ctx);
    const variant = parseVariant('hypercontracted/separate/index/none/clean');
    const factors = { ...spin, blocks: [block(seed), ...spin.blocks] };
    const encoding = await buildEncoding(h, factors, variant, {}, ctx);
    const program = encoding.program!();
    const exact = programOperator(program);
    for (const [keep, rotation] of [
      [30, 8],
      [30, 11],
      [8, 24],
      [11, 24],
    ] as const) {
      const encoded = encodedProgram(program, tripletTables(program, { keep, innerKeep: keep, rotation }));
      const norm = operatorNorm(difference(programOperator(encoded), exact));
      const { rigorous, estimate } = roundingError(encoding.shape, encoding.lambda, { keep, rotation });
      expect(norm).toBeGreaterThan(0);
      expect(norm).toBeLessThan(rigorous);
      expect(norm).toBeLessThan(2 ** GUARD_BITS * estimate);
    }
  },
);

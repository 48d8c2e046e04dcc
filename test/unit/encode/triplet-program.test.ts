import { describe, expect, it } from 'vitest';
import { buildEncoding, parseVariant } from '../../../core/encode';
import { factorise } from '../../../core/factor';
import { inlineContext } from '../../../core/job';
import { programLambda, programOperator } from '../circuit/majorana-algebra';
import { randomHamiltonian } from '../hamiltonian/random-hamiltonian';
import { difference, matrixOf, operatorNorm } from './fock-space';

const ctx = inlineContext();
const HAMILTONIANS = [
  randomHamiltonian(2, 21, { charge: true, spinOrbit: 'multiple', spinSpin: false }, 3),
  randomHamiltonian(2, 22, { charge: true, spinOrbit: 'independent', spinSpin: true }, 1),
];
const THREE_ORBITALS = randomHamiltonian(3, 23, { charge: true, spinOrbit: 'multiple', spinSpin: false }, 2);

// programOperator adds up literal T^μ_pq matrices row by row; it knows nothing of factors, κ or shifts.
describe('rows of a triplet encoding', () => {
  it.each(['joint', 'separate'])('%s: add up to H − c, with weights that add up to λ', async (grouping) => {
    for (const h of grouping === 'joint' ? HAMILTONIANS : [...HAMILTONIANS, THREE_ORBITALS]) {
      for (const shift of h.orbitals === 2 ? ['none', 'median'] : ['median']) {
        const variant = parseVariant(`triplet/${grouping}/swap-layers/${shift}/clean`);
        const factors = await factorise(h, { grouping: grouping as 'joint' }, ctx);
        const encoding = await buildEncoding(h, factors, variant, {}, ctx);
        const program = encoding.program!();
        expect(programLambda(program)).toBeCloseTo(encoding.lambda.total, 9);
        const sum = programOperator(program);
        for (let i = 0; i < sum.n; i++) sum.re[i * sum.n + i]! += encoding.constant;
        expect(operatorNorm(difference(sum, matrixOf(encoding.rebuild())))).toBeLessThan(1e-9);

        const rows = program.items.flatMap((item) => item.rows);
        expect(rows.length).toBe(encoding.shape.rows);
        expect(rows.filter((row) => row.kind === 'A').length).toBe(encoding.shape.pairRows);
        expect(program.items.length).toBe(encoding.shape.factors);
        expect(program.oneBody.length).toBe(encoding.shape.oneBodyRows);
      }
    }
  });
});

import { expect, it } from 'vitest';
import { buildEncoding, parseVariant } from '../../../core/encode';
import { factorise, type HypercontractedFactors } from '../../../core/factor';
import { inlineContext } from '../../../core/job';
import { provableBlock } from '../../../core/plan/provable-block';
import { sectorBasis, simulatedBlock } from '../../../core/verify';
import { programOperator } from '../circuit/majorana-algebra';
import { randomNumbers } from '../circuit/triplet-support';
import { difference, operatorNorm, restrict } from '../encode/fock-space';
import { randomHamiltonian } from '../hamiltonian/random-hamiltonian';

const ctx = inlineContext();
const N = 2;

/** Three vectors over two orbitals, of which no two are parallel or orthogonal. */
function block(): HypercontractedFactors {
  const random = randomNumbers(3);
  const angles = [0.3, 1.1, 2.5];
  const zeta = new Float64Array(9);
  for (let m = 0; m < 3; m++) for (let k = 0; k <= m; k++) zeta[3 * m + k] = zeta[3 * k + m] = random();
  return {
    kind: 'hypercontracted',
    part: 'coulomb',
    n: N,
    count: 3,
    vectors: Float64Array.from(angles.flatMap((a) => [Math.cos(a), Math.sin(a)])),
    zeta,
    shift: null,
  };
}

// Literal Majorana matrices on one side, the simulated gates of the variant's circuit on the other.
it.each(['index', 'swap-layers'])(
  'the simulated block of a hypercontracted variant is the operator of its rounded tables: spin by %s',
  async (spin) => {
    const h = randomHamiltonian(N, 41, { charge: true, spinOrbit: 'multiple', spinSpin: false }, 2);
    const spinPart = await factorise(h, { grouping: 'separate', withoutCoulomb: true }, ctx);
    const factors = { ...spinPart, blocks: [block(), ...spinPart.blocks] };
    const variant = parseVariant(`hypercontracted/separate/${spin}/none/dirty`);
    const encoding = await buildEncoding(h, factors, variant, {}, ctx);
    const provable = provableBlock(encoding, variant)!;
    const basis = sectorBasis(2 * N, 2);
    const found = await simulatedBlock(provable.circuit, basis, ctx);
    const scaled = {
      ...found,
      re: found.re.map((x) => x * encoding.lambda.total),
      im: found.im.map((x) => x * encoding.lambda.total),
    };
    expect(operatorNorm(difference(scaled, provable.encoded(basis)))).toBeLessThan(1e-9);
    const given = restrict(programOperator(encoding.program!()), 2);
    const change = operatorNorm(difference(scaled, given));
    expect(change).toBeGreaterThan(1e-6);
    expect(change).toBeLessThan(provable.bound);
  },
);

import { describe, expect, it } from 'vitest';
import { spinorSizesOf } from '../../../core/circuit';
import { buildEncoding, type Encoding, parseVariant } from '../../../core/encode';
import { factorise } from '../../../core/factor';
import {
  buildHamiltonian,
  fromStoredForm,
  type SpinHamiltonian,
  type SpinorHamiltonian,
  spinorForm,
  spinorFromStoredForm,
} from '../../../core/hamiltonian';
import type { SelectableTerm } from '../../../core/integrals';
import { inlineContext } from '../../../core/job';
import { proveBlock } from '../../../core/plan/block-proof';
import { findSet, loadSet } from '../../published/data-set';
import { matrixOf } from '../encode/fock-space';
import { randomHamiltonian, uniform } from '../hamiltonian/random-hamiltonian';
import { addScaled, type Dense, zeros } from './majorana-algebra';
import { distance, identity, programLambda, programOperator } from './spinor-support';

const ctx = inlineContext();

async function encode(h: SpinHamiltonian, name: string): Promise<Encoding> {
  const variant = parseVariant(name);
  if (variant.grouping === '-') throw new Error('spinor forms have a grouping');
  return buildEncoding(h, await factorise(h, { grouping: variant.grouping }, ctx), variant, {}, ctx);
}

/** The rows and the constant against H on the whole Fock space. */
function expectSum(encoding: Encoding, h: SpinHamiltonian): void {
  const program = encoding.spinorProgram!();
  expect(spinorSizesOf(program)).toEqual(encoding.shape.spinors);
  expect(programLambda(program)).toBeCloseTo(encoding.lambda.total, 10);
  const sum = programOperator(program);
  addScaled(sum, identity(sum.n), encoding.constant);
  expect(distance(sum, inGauge(matrixOf(h), program.phases))).toBeLessThan(1e-10);
}

const proof = async (h: SpinHamiltonian, name: string) =>
  (await proveBlock(h, await encode(h, name), parseVariant(name), ctx))!;

/** The same Hamiltonian over spinors with other phases: ψ'_P = e^{iφ_P} ψ_P. */
function withPhases(h: SpinorHamiltonian, seed: number): SpinorHamiltonian {
  const random = uniform(seed);
  const m = h.spinors;
  const phase = Array.from({ length: m }, () => Math.PI * random());
  const turn = ({ re, im }: SpinorHamiltonian['h']) => {
    const rank = re.length === m * m ? 2 : 4;
    const out = { re: new Float64Array(re.length), im: new Float64Array(re.length) };
    for (let i = 0; i < re.length; i++) {
      let angle = 0;
      for (let d = 0, rest = i; d < rank; d++, rest = Math.floor(rest / m)) {
        angle += (d % 2 === 0 ? 1 : -1) * phase[rest % m]!;
      }
      out.re[i] = Math.cos(angle) * re[i]! - Math.sin(angle) * im[i]!;
      out.im[i] = Math.cos(angle) * im[i]! + Math.sin(angle) * re[i]!;
    }
    return out;
  };
  return spinorFromStoredForm({ ...h, h: turn(h.h), g: turn(h.g) });
}

/** A magnetic field along z on the first orbital, or a magnetic interaction. */
function magnetic(h: SpinorHamiltonian, where: 'one-body' | 'two-body'): SpinorHamiltonian {
  const m = h.spinors;
  const one = { re: h.h.re.slice(), im: h.h.im };
  const g = { re: h.g.re.slice(), im: h.g.im };
  if (where === 'one-body') {
    one.re[0]! += 0.2;
    one.re[m + 1]! -= 0.2;
  } else {
    g.re[2 * m + 2]! += 0.3;
    g.re[(2 * m + 2) * m * m]! += 0.3;
  }
  return spinorFromStoredForm({ ...h, h: one, g });
}

const all = randomHamiltonian(2, 31, { charge: true, spinOrbit: 'multiple', spinSpin: true }, 2);
const orbit = randomHamiltonian(2, 32, { charge: true, spinOrbit: 'multiple', spinSpin: false }, 3);
const apart = randomHamiltonian(2, 33, { charge: true, spinOrbit: 'independent', spinSpin: false }, 3);
const file = withPhases(spinorForm(all), 5);

/** Over modes e^{iφ_P} ψ_P. */
function inGauge(h: Dense, phases: Float64Array | null): Dense {
  if (!phases) return h;
  const out = zeros(h.n);
  const total = (state: number) => phases.reduce((sum, phi, p) => sum + ((state >> p) & 1 ? phi : 0), 0);
  for (let i = 0; i < h.n; i++) {
    for (let j = 0; j < h.n; j++) {
      const angle = total(j) - total(i);
      const [x, y] = [h.re[i * h.n + j]!, h.im[i * h.n + j]!];
      out.re[i * h.n + j] = Math.cos(angle) * x - Math.sin(angle) * y;
      out.im[i * h.n + j] = Math.sin(angle) * x + Math.cos(angle) * y;
    }
  }
  return out;
}

// The oracle adds up occupations of ladder operators row by row; it knows nothing of factors, κ or Kramers pairs.
describe('the rows of a spinor encoding', () => {
  it.each<[string, SpinHamiltonian, string]>([
    ['all terms, joint', all, 'joint'],
    ['all terms, separate', all, 'separate'],
    ['one spin–orbit array', orbit, 'separate'],
    ['two spin–orbit arrays', apart, 'separate'],
    ['a spinor file with phases of its own', file, 'joint'],
    ['a spinor file in a magnetic field', magnetic(file, 'one-body'), 'separate'],
    ['a spinor file with a magnetic interaction', magnetic(spinorForm(all), 'two-body'), 'joint'],
  ])('%s: add up to H − c, with weights that add up to λ', async (_, h, grouping) => {
    const encoding = await encode(h, `spinor/${grouping}/index/none/clean`);
    expectSum(encoding, h);
    expect(encoding.spinorProgram!().oneBody.map(({ kind }) => kind)).toEqual(['full']);
  });

  it('list κ plane by plane where nothing else needs rows over all modes and λ hardly rises', async () => {
    const weak = randomHamiltonian(2, 34, { charge: true, spinOrbit: 'multiple', spinSpin: false }, 3);
    weak.h.planes.fill(0, 4);
    const same = weak.g.spinOrbit!.same;
    for (let i = 0; i < same.length; i++) same[i]! *= 1e-4;
    const h = fromStoredForm(weak);
    const encoding = await encode(h, 'spinor/separate/index/none/clean');
    expectSum(encoding, h);
    const { oneBody } = encoding.spinorProgram!();
    expect(oneBody.map(({ kind, axis }) => [kind, axis])).toEqual([
      ['real', 3],
      ['axial', 1],
      ['axial', 2],
      ['axial', 3],
    ]);
  });

  it('are fewer where the parts of a triple share them', async () => {
    const shared = await encode(orbit, 'spinor/separate/index/median/clean');
    const program = shared.spinorProgram!();
    const triples = program.items.filter((item) => item.paired);
    expect(triples.length).toBeGreaterThan(0);
    for (const item of triples) {
      expect(item.kind).toBe('axial');
      expect(item.rows.length).toBeLessThanOrEqual(orbit.orbitals * (3 - item.faces.length));
    }
    expect(triples.some((item) => item.faces.length === 2)).toBe(true);
  });
});

describe('the emitted circuit encodes H', () => {
  const SPIN_ORBIT: SelectableTerm[] = ['sf', 'so1', 'somf', 'so2'];
  const folder = findSet('f_sto3g_2p');

  it.skipIf(folder === null).each<[string, SelectableTerm[]]>([
    ['spinor/separate/index/median/clean', SPIN_ORBIT],
    ['spinor/separate/index/none/plain', [...SPIN_ORBIT, 'ss']],
    ['spinor/joint/index/none/clean', [...SPIN_ORBIT, 'ss']],
  ])('fluorine 2p⁵, %s', async (name, terms) => {
    const h = buildHamiltonian(await loadSet(folder!), { terms });
    const { spinors } = (await encode(h, name)).shape;
    // Rows over all modes keep all their bits, and so do then the others.
    expect(spinors!.spared > 0).toBe(!terms.includes('ss'));
    const found = await proof(h, name);
    expect(found.columns).toBe(6);
    expect(found.check.ok).toBe(true);
    expect(found.maxError).toBeLessThan(found.bound);
  });

  it.each<[string, SpinHamiltonian, string]>([
    ['two orbitals, all terms', all, 'spinor/joint/index/median/plain'],
    ['a spinor file', file, 'spinor/joint/index/none/clean'],
    ['a spinor file in a magnetic field', magnetic(file, 'one-body'), 'spinor/separate/index/median/clean'],
  ])('%s', async (_, h, name) => {
    const found = await proof(h, name);
    expect(found.check.ok).toBe(true);
    expect(found.maxError).toBeLessThan(found.bound);
  });
});

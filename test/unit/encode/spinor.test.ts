import { describe, expect, it } from 'vitest';
import { buildEncoding, parseVariant } from '../../../core/encode';
import { factorise, type SpinorFactors } from '../../../core/factor';
import {
  buildHamiltonian,
  type SpinorHamiltonian,
  spinorForm,
  spinorFromStoredForm,
} from '../../../core/hamiltonian';
import { inlineContext } from '../../../core/job';
import { findSet, loadSet } from '../../published/data-set';
import { largestDifference, randomHamiltonian, uniform } from '../hamiltonian/random-hamiltonian';
import { difference, matrixOf, operatorNorm, restrict } from './fock-space';

const ctx = inlineContext();
const spatial = randomHamiltonian(3, 51, { charge: true, spinOrbit: 'multiple', spinSpin: true }, 2);

/** The same Hamiltonian over spinors with other phases: ψ'_P = e^{iφ_P} ψ_P. */
function withPhases(h: SpinorHamiltonian, seed: number): SpinorHamiltonian {
  const random = uniform(seed);
  const m = h.spinors;
  const phase = Array.from({ length: m }, () => Math.PI * random());
  const turn = (planes: SpinorHamiltonian['h'], rank: number) => {
    const re = new Float64Array(planes.re.length);
    const im = new Float64Array(re.length);
    for (let i = 0; i < re.length; i++) {
      let angle = 0;
      for (let d = 0, rest = i; d < rank; d++, rest = Math.floor(rest / m)) {
        // Indices from the last to the first: annihilated, created, annihilated, created.
        angle += (d % 2 === 0 ? 1 : -1) * phase[rest % m]!;
      }
      const [c, s] = [Math.cos(angle), Math.sin(angle)];
      re[i] = c * planes.re[i]! - s * planes.im[i]!;
      im[i] = c * planes.im[i]! + s * planes.re[i]!;
    }
    return { re, im };
  };
  return spinorFromStoredForm({ ...h, h: turn(h.h, 2), g: turn(h.g, 4) });
}

async function encode(h: SpinorHamiltonian, grouping: 'joint' | 'separate', shift: string, threshold = 0) {
  const f = await factorise(h, { grouping, threshold }, ctx);
  return buildEncoding(h, f, parseVariant(`spinor/${grouping}/index/${shift}/clean`), {}, ctx);
}

describe('spinor files', () => {
  const form = spinorForm(spatial);
  const turned = withPhases(form, 7);

  it('give the λ of the spatial form, whatever the phases of the spinors', async () => {
    const f = await factorise(spatial, { grouping: 'joint' }, ctx);
    const expected = await buildEncoding(spatial, f, parseVariant('spinor/joint/index/none/clean'), {}, ctx);
    for (const h of [form, turned]) {
      const found = await encode(h, 'joint', 'none');
      expect(found.lambda.oneBody).toBeCloseTo(expected.lambda.oneBody, 9);
      for (const part of ['two-body.even', 'two-body.odd']) {
        expect(found.lambda.parts[part]).toBeCloseTo(expected.lambda.parts[part]!, 9);
      }
      expect(found.constant).toBeCloseTo(expected.constant, 9);
      expect(found.shape.rows).toBe(expected.shape.rows);
    }
    // The median here is that of all 2N eigenvalues, not of L⁰ as in the spatial form: only the phases may not matter.
    const [plain, other] = [await encode(form, 'joint', 'median'), await encode(turned, 'joint', 'median')];
    expect(plain.lambda.total).toBeLessThan(expected.lambda.total);
    expect(other.lambda.total).toBeCloseTo(plain.lambda.total, 9);
  });

  it.each(['joint', 'separate'] as const)(
    '%s: rebuilt, truncated and shifted as the spatial form is',
    async (grouping) => {
      const exact = matrixOf(turned);
      const full = await encode(turned, grouping, 'none');
      expect(operatorNorm(difference(matrixOf(full.rebuild()), exact))).toBeLessThan(1e-10);
      for (const threshold of [0.3, 3]) {
        const { residual, rebuild } = await encode(turned, grouping, 'none', threshold);
        expect(residual.dropped).toBeGreaterThan(0);
        expect(operatorNorm(difference(matrixOf(rebuild()), exact))).toBeLessThanOrEqual(
          residual.oneNormBound,
        );
        expect(residual.oneNormBound).toBeLessThanOrEqual(threshold + 1e-9);
      }
      const shifted = matrixOf((await encode(turned, grouping, 'median')).rebuild());
      expect(operatorNorm(difference(restrict(shifted, 2), restrict(exact, 2)))).toBeLessThan(1e-9);
      expect(operatorNorm(difference(restrict(shifted, 3), restrict(exact, 3)))).toBeGreaterThan(1e-3);
    },
  );

  it('fall back to one sector where time reversal is broken, and say so', async () => {
    const h = { ...form.h, re: form.h.re.slice() };
    const g = { re: form.g.re.slice(), im: form.g.im };
    const m = form.spinors;
    // A magnetic interaction between the densities of spinor 0 and spinor 2.
    for (const [p, r] of [
      [0, 2],
      [2, 0],
    ] as const)
      g.re[((p * m + p) * m + r) * m + r]! += 0.3;
    const broken = spinorFromStoredForm({ ...form, h, g });
    const f = await factorise(broken, { grouping: 'joint' }, ctx);
    expect(f.blocks.map(({ part }) => part)).toEqual(['mixed']);
    expect(f.notes[0]).toContain('time reversal');
    const encoding = await buildEncoding(broken, f, parseVariant('spinor/joint/index/none/clean'), {}, ctx);
    expect(operatorNorm(difference(matrixOf(encoding.rebuild()), matrixOf(broken)))).toBeLessThan(1e-10);
  });

  it('admit no triplet and no sparse form', async () => {
    const f = await factorise(form, { grouping: 'joint' }, ctx);
    for (const name of ['triplet/joint/index/none/clean', 'sparse/-/index/none/clean']) {
      await expect(buildEncoding(form, f, parseVariant(name), {}, ctx)).rejects.toMatchObject({
        code: 'spinor-only',
      });
    }
  });
});

// Files of a four-component program, see the README beside them: Kramers pairs with arbitrary phases, elements below
// 1e-9 Eh left out.
const folder = findSet('spinor_fcidump');
describe.skipIf(folder === null).each([
  ['oh_sto3g_4c_coulomb.FCIDUMP', false],
  ['oh_sto3g_4c_breit.FCIDUMP', true],
])('%s', (file, breit) => {
  it('factors into Kramers pairs and, with the Breit interaction, odd factors with ± pairs', async () => {
    const h = buildHamiltonian(await loadSet(folder!, [file]));
    if (h.kind !== 'spinor') throw new Error('spinor file expected');
    const f = await factorise(h, { grouping: 'joint' }, ctx);
    const m = h.spinors;
    expect(f.blocks.map(({ part }) => part)).toEqual(['even', 'odd']);
    for (const block of f.blocks as SpinorFactors[]) {
      for (let t = 0; t < block.count; t++) {
        const values = block.spectra.subarray(t * m, (t + 1) * m);
        for (let j = 0; j < m; j += 2) {
          const partner = block.part === 'even' ? values[j + 1]! : -values[m - 1 - j]!;
          expect(Math.abs(values[j]! - partner)).toBeLessThan(1e-10);
        }
      }
    }
    const { lambda } = await buildEncoding(h, f, parseVariant('spinor/joint/index/none/clean'), {}, ctx);
    // Instantaneous Coulomb repulsion couples charge densities only; magnetic interaction is that of currents.
    expect((lambda.parts['two-body.odd'] ?? 0) > 1e-5).toBe(breit);
  });

  it('is rebuilt to the digits it holds', async () => {
    const h = buildHamiltonian(await loadSet(folder!, [file])) as SpinorHamiltonian;
    for (const grouping of ['joint', 'separate'] as const) {
      const { rebuild, residual } = await encode(h, grouping, 'none');
      const rebuilt = rebuild() as SpinorHamiltonian;
      expect(residual.frobenius).toBeLessThan(1e-8);
      expect(largestDifference(rebuilt.g.re, h.g.re)).toBeLessThan(1e-9);
      expect(largestDifference(rebuilt.g.im, h.g.im)).toBeLessThan(1e-9);
      expect(largestDifference(rebuilt.k.re, h.k.re)).toBeLessThan(1e-9);
    }
  });
});

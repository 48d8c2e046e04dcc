import { beforeAll, describe, expect, it } from 'vitest';
import type { IntegralSet } from '../../../core/integrals';
import { hamiltonianOf, type TablesDocument } from '../../../core/plan';
import { sectorBasis, spinorProgramOperator, windowOfSpinorProgram } from '../../../core/verify';
import { findSet, loadSet } from '../../published/data-set';
import { addScaled, type Dense, dagger, times, zeros } from '../circuit/majorana-algebra';
import { creator, identity } from '../circuit/spinor-support';
import { difference, matrixOf, operatorNorm, restrict } from '../encode/fock-space';
import { ctx, drawn, load, numbersOf, request, roundTrip, sectorOf, shifted } from './encode-tables-support';

let atom: IntegralSet;
let molecule: IntegralSet;
beforeAll(async () => {
  atom = await load('test/fixtures/sets/f_sto3g_2p');
  molecule = await load('test/fixtures/sets/oh_sto3g');
});

const range = (n: number) => Array.from({ length: n }, (_, i) => i);

const ALL = ['sf', 'so1', 'somf', 'so2', 'ss'];
const ORBIT = ['sf', 'so1', 'somf', 'so2'];

/** Written, read back, and as an operator on the sector: against the program of the tables, and against H. */
async function check(set: IntegralSet, name: string, change: object) {
  const how = request(name, change);
  const { document, files, stored, tables } = await roundTrip(set, how);
  expect(stored).toEqual(tables.encoded);
  if (stored.form !== 'spinor') throw new Error('another form');
  const { program } = stored;
  const h = hamiltonianOf(set, how);
  const basis = sectorBasis(2 * program.orbitals, h.electrons);
  const whole = { orbitals: range(program.orbitals), electrons: h.electrons, occupations: [] };
  const operator = await sectorOf(await windowOfSpinorProgram(program, whole, ctx), basis, null);
  const norm = operatorNorm(difference(operator, await sectorOf(h, basis, program.phases)));
  const { realised, typical } = document.rounding;
  expect(norm).toBeGreaterThan(0);
  expect(norm).toBeLessThan(realised + document.residual.oneNormBound + 1e-8);
  expect(typical).toBeLessThan(realised);
  return { document, files, program, norm };
}

describe('exported tables of the spinor form, spatial sets', () => {
  it.each([
    ['spinor/joint/index/none/clean', ALL, ['full']],
    ['spinor/joint/index/median/clean', ORBIT, ['full']],
    ['spinor/separate/index/median/clean', ALL, ['real', 'axial', 'full']],
    ['spinor/separate/index/median/clean', ORBIT, ['real', 'axial']],
    ['spinor/separate/index/optimised/clean', ORBIT, ['real', 'axial']],
    ['spinor/separate/index/median/clean', ['sf'], ['real']],
  ])('%s with %s: read back they are H within the realised bound', async (name, terms, kinds) => {
    for (const bits of ['auto', 10] as const) {
      const { document, program, norm } = await check(atom, name, { terms, bits });
      const found = new Set([...program.items, ...program.oneBody].map((item) => item.kind));
      expect([...found].sort()).toEqual([...kinds].sort());
      expect(document.rounding.realised).toBeLessThan(document.rounding.worstCase);
      if (bits === 10) expect(norm).toBeGreaterThan(1e-5);
      // The window is the whole shell here, so the shifts of its levels obey the bound too.
      expect(document.window!.orbitals).toEqual([1, 2, 3]);
      expect(document.window!.largestShift).toBeLessThanOrEqual(norm * (1 + 1e-6) + 1e-11);
    }
  });

  it('of a molecule: two faces, spared bits, truncation', async () => {
    const { document, program } = await check(molecule, 'spinor/separate/index/median/clean', {
      terms: ORBIT,
      threshold: 1e-4,
    });
    expect(program.items.some((item) => item.faces.length === 2 && item.paired)).toBe(true);
    expect(program.spared).toBeGreaterThan(0);
    expect(document.bits.phase! + 1).toBeLessThan(document.bits.rotation!);
    expect(document.sizes.spinRows).toBe(0);
  });

  // Nothing of the core between the files and the matrix: the document's own words, operator by operator.
  it.each([
    ['spinor/joint/index/median/clean', ALL],
    ['spinor/separate/index/median/clean', ALL],
    ['spinor/separate/index/none/clean', ORBIT],
  ])('%s with %s: taken literally they are the same operator', async (name, terms) => {
    const how = { terms, bits: 10 };
    const { document, files, program } = await check(atom, name, how);
    const literal = literalOperator(document, files);
    const h = matrixOf(hamiltonianOf(atom, request(name, how)));
    const [own, exact] = [restrict(literal, document.electrons), restrict(h, document.electrons)];
    expect(operatorNorm(difference(own, exact))).toBeLessThan(document.rounding.realised + 1e-10);
    const basis = sectorBasis(2 * program.orbitals, document.electrons);
    const read = shifted(spinorProgramOperator(program, basis), program.constant);
    // The basis of `restrict` is in ascending order of states, as that of the sector is.
    expect(Array.from(basis.states)).toEqual([...basis.states].sort((a, b) => a - b));
    expect(operatorNorm(difference(own, read))).toBeLessThan(1e-10);
  });
});

const folder = findSet('spinor_fcidump');
describe.skipIf(folder === null)('exported tables of the spinor form, spinor files', () => {
  it.each([
    ['oh_sto3g_4c_coulomb.FCIDUMP', 'spinor/joint/index/median/clean'],
    ['oh_sto3g_4c_breit.FCIDUMP', 'spinor/joint/index/median/clean'],
    ['oh_sto3g_4c_breit.FCIDUMP', 'spinor/separate/index/none/clean'],
  ])('%s as %s', async (file, name) => {
    const set = await loadSet(folder!, [file]);
    const { document, program } = await check(set, name, { bits: 14 });
    expect(document.orbitals).toBe(5);
    expect(document.window).toBeNull();
    // Kramers pairs of that program have arbitrary phases.
    expect(program.partners).toBe(true);
    expect(program.phases).not.toBeNull();
  });
});

/** H by the conventions of the document. */
function literalOperator(document: TablesDocument, files: ReadonlyMap<string, Uint8Array>): Dense {
  const { orbitals, bits, sizes } = document;
  const take = (name: string) => numbersOf(document, files, name);
  const faces = sizes.faces!;
  const step = (2 * Math.PI) / 2 ** bits.rotation!;
  const angles = orbitals - 1;
  const [kinds, axes, paired, counts] = ['item_kind', 'item_axis', 'item_paired', 'item_rows'].map(take);
  const [signs, odd, rowSigns, chain] = ['item_sign', 'item_odd', 'row_sign', 'row_angles'].map(take);
  const [phaseRow, phase, spinRow, spin] = ['phase_row', 'phase_angles', 'spin_row', 'spin_angles'].map(take);
  const table = take('prepare_table');
  const outer = drawn(take('outer_keep'), take('outer_alternate'), bits.keep!);
  const [innerKeep, innerAlternate] = [take('inner_keep'), take('inner_alternate')];

  const vector = (row: number, t: number, against: boolean): [number[], number[]] => {
    const sizesOfOrbitals: number[] = [];
    let rest = 1;
    for (let p = 0; p < angles; p++) {
      const angle = (chain![row * angles + p]! + 0.5) * step;
      sizesOfOrbitals.push(rest * Math.cos(angle));
      rest *= Math.sin(angle);
    }
    sizesOfOrbitals.push(rest);
    const kind = kinds![t]!;
    const grid = kind === 1 ? (2 * Math.PI) / 2 ** (bits.phase! + 1) : step;
    const atPhase = phaseRow!.indexOf(row);
    const atSpin = spinRow!.indexOf(row);
    const [re, im]: [number[], number[]] = [[], []];
    for (let p = 0; p < orbitals; p++) {
      const beta = kind === 0 || p === angles ? 0 : phase![atPhase * angles + p]! * grid;
      const r = sizesOfOrbitals[p]!;
      const s = Math.SQRT1_2;
      // Up and down, each as real and imaginary part.
      let own = against ? [0, 0, 1, 0] : [1, 0, 0, 0];
      if (kind === 1 && axes![t] === 1) own = against ? [s, 0, -s, 0] : [s, 0, s, 0];
      if (kind === 1 && axes![t] === 2) own = against ? [s, 0, 0, -s] : [s, 0, 0, s];
      if (kind === 2) {
        const theta = spin![atSpin * 2 * orbitals + 2 * p]! * grid;
        const delta = spin![atSpin * 2 * orbitals + 2 * p + 1]! * grid;
        own = [Math.cos(theta), 0, Math.sin(theta) * Math.cos(delta), Math.sin(theta) * Math.sin(delta)];
      }
      for (const i of [0, 2]) {
        re.push(r * (Math.cos(beta) * own[i]! - Math.sin(beta) * own[i + 1]!));
        im.push(r * (Math.cos(beta) * own[i + 1]! + Math.sin(beta) * own[i]!));
      }
    }
    return [re, im];
  };
  const partner = ([re, im]: [number[], number[]]): [number[], number[]] => [
    re.map((_, i) => (i % 2 === 0 ? re[i + 1]! : -re[i - 1]!)),
    im.map((_, i) => (i % 2 === 0 ? -im[i + 1]! : im[i - 1]!)),
  ];
  const occupation = ([re, im]: [number[], number[]]) => {
    const create = creator(re, im);
    return times(create, dagger(create));
  };
  const one = identity(4 ** orbitals);
  const out = zeros(one.n);
  addScaled(out, one, document.constant);
  for (let i = 0; i < table.length; i += 5) {
    const [t, face, index, n, from] = table.slice(i, i + 5) as [number, number, number, number, number];
    const first = counts!.slice(0, t).reduce((sum, x) => sum + x, 0);
    const lambda = sizes.outerLambda! * outer[index]!;
    const probability = drawn(
      innerKeep!.slice(from, from + 2 ** n),
      innerAlternate!.slice(from, from + 2 ** n),
      bits.innerKeep!,
    );
    const isOneBody = t >= sizes.items! - sizes.oneBodyItems!;
    for (const second of paired![t] === 1 ? [false, true] : [false]) {
      const b = zeros(one.n);
      for (let j = 0; j < counts![t]!; j++) {
        const w = vector(first + j, t, second);
        const x = probability[j]! * rowSigns![(first + j) * faces + face]!;
        const turn = odd![t * faces + face] === 1 ? -1 : 1;
        addScaled(b, occupation(w), x);
        addScaled(b, occupation(partner(w)), x * turn);
        addScaled(b, one, -x * (turn > 0 ? 1 : 0));
      }
      if (isOneBody) {
        addScaled(out, b, lambda);
        continue;
      }
      const share = (signs![t * faces + face]! * (second ? -1 : 1) * lambda) / (paired![t] === 1 ? 2 : 1);
      addScaled(out, times(b, b), 2 * share);
      addScaled(out, one, -share);
    }
  }
  return out;
}

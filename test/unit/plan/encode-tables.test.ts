import { beforeAll, describe, expect, it } from 'vitest';
import type { IntegralSet } from '../../../core/integrals';
import type { InputError } from '../../../core/job';
import { encodeTables, hamiltonianOf, type TablesDocument } from '../../../core/plan';
import { fermiWindow } from '../../../core/plan/encode-tables/levels';
import { programOperator, sectorBasis } from '../../../core/verify';
import { addScaled, type Dense, dagger, majorana, times, zeros } from '../circuit/majorana-algebra';
import { identity } from '../circuit/spinor-support';
import { difference, matrixOf, operatorNorm, restrict } from '../encode/fock-space';
import { ctx, drawn, load, numbersOf, request, roundTrip, shifted } from './encode-tables-support';

let atom: IntegralSet;
beforeAll(async () => {
  atom = await load('test/fixtures/sets/f_sto3g_2p');
});

const TERMS = { terms: ['sf', 'so1', 'somf', 'so2', 'ss'] };

const VARIANTS = [
  'triplet/joint/swap-layers/none/clean',
  'triplet/joint/swap-layers/median/clean',
  'triplet/separate/index/none/clean',
  'triplet/separate/swap-layers/median/clean',
  'triplet/joint/swap-layers/optimised/clean',
  'compressed/separate/swap-layers/optimised/clean',
  'compressed/joint/swap-layers/optimised/clean',
  'hypercontracted/separate/swap-layers/optimised/clean',
];

describe('exported tables of the triplet form', () => {
  it.each(VARIANTS)('%s: read back they are H within the realised bound', async (name) => {
    const hamiltonian = hamiltonianOf(atom, request(name, TERMS));
    for (const bits of ['auto', 9] as const) {
      const { document, files, stored, tables } = await roundTrip(atom, request(name, { ...TERMS, bits }));
      expect(stored).toEqual(tables.encoded);
      if (stored.form !== 'triplet') throw new Error('another form');
      const { program } = stored;
      const basis = sectorBasis(2 * program.orbitals, hamiltonian.electrons);
      const operator = shifted(programOperator(program, basis), program.constant);
      const change = difference(operator, restrict(matrixOf(hamiltonian), hamiltonian.electrons));
      const { realised, worstCase, typical } = document.rounding;
      const norm = operatorNorm(change);
      expect(norm).toBeGreaterThan(0);
      expect(norm).toBeLessThan(realised + document.residual.oneNormBound + 1e-11);
      expect(realised).toBeLessThan(worstCase);
      expect(typical).toBeLessThan(realised);
      // The window is the whole shell here, so the shifts of its levels obey the bound too.
      expect(document.window!.orbitals).toEqual([1, 2, 3]);
      expect(document.window!.largestShift).toBeLessThanOrEqual(norm * (1 + 1e-6) + 1e-11);
      if (bits === 'auto') continue;
      // Nothing of the core between the files and the matrix: the document's own words, Majorana by Majorana.
      const literal = restrict(literalOperator(document, files), hamiltonian.electrons);
      expect(operatorNorm(difference(literal, operator))).toBeLessThan(1e-10);
    }
  });

  it('hold what the tables were made from, number for number', async () => {
    const { document, stored } = await roundTrip(atom, request(VARIANTS[3]!, TERMS));
    const rows = document.arrays.find(({ name }) => name === 'row_address')!;
    expect(rows.shape).toEqual([document.sizes.rows]);
    if (stored.form !== 'triplet') throw new Error('another form');
    const { program } = stored;
    const total =
      program.oneBody.reduce((sum, row) => sum + row.faces[0]!.weight, 0) +
      program.items.reduce((sum, item) => sum + item.lambda.reduce((a, b) => a + b, 0), 0);
    expect(total).toBeCloseTo(document.lambda.total, 9);
  });

  it('are refused with more bits than 32-bit numbers hold', async () => {
    const code = async (variant: string, change: object = {}) =>
      encodeTables(atom, request(variant, change), ctx).catch((error: InputError) => error.toProblem().code);
    expect(await code(VARIANTS[2]!, { bits: 40 })).toBe('too-many-bits');
  });
});

it('the window around the Fermi level takes open orbitals first, then both sides in turn', () => {
  const occupations = [2, 2, 2, 2, 1, 0, 0, 0, 2, 0];
  expect(fermiWindow(11, occupations)).toEqual({ orbitals: [2, 3, 4, 5, 6, 8], electrons: 7, occupations });
  expect(fermiWindow(7, [2, 2, 2, 0.5, 0.5])).toEqual({
    orbitals: [0, 1, 2, 3, 4],
    electrons: 7,
    occupations: [2, 2, 2, 0.5, 0.5],
  });
  // Seven orbitals in fractions have no frozen determinant around six of them; nor have electrons from elsewhere.
  expect(fermiWindow(7, [1, 1, 1, 1, 1, 1, 1, 0])).toBeNull();
  expect(fermiWindow(40, occupations)).toBeNull();
});

/** H by the conventions of the document. */
function literalOperator(document: TablesDocument, files: ReadonlyMap<string, Uint8Array>): Dense {
  const { orbitals, bits, sizes } = document;
  const take = (name: string) => numbersOf(document, files, name);
  const [angles, width] = [orbitals - 1, sizes.flags!];
  const [paired, counts, signs, flags] = ['item_paired', 'item_rows', 'item_sign', 'row_flags'].map(take);
  const [u, v, pairRow, table] = ['row_angles', 'pair_angles', 'pair_row', 'prepare_table'].map(take);
  const outer = drawn(take('outer_keep'), take('outer_alternate'), bits.keep!);
  const [innerKeep, innerAlternate] = [take('inner_keep'), take('inner_alternate')];
  const vector = (numbers: readonly number[], i: number): number[] => {
    const out: number[] = [];
    let rest = 1;
    for (const number of numbers.slice(i * angles, (i + 1) * angles)) {
      const t = ((number + 0.5) * 2 * Math.PI) / 2 ** bits.rotation!;
      out.push(rest * Math.cos(t));
      rest *= Math.sin(t);
    }
    return [...out, rest];
  };
  const majoranas = Array.from({ length: 4 * orbitals }, (_, i) => majorana(2 * orbitals, i >> 1, i & 1));
  const gamma = (w: readonly number[], spin: number, x: number): Dense => {
    const out = zeros(4 ** orbitals);
    for (const [p, c] of w.entries()) addScaled(out, majoranas[2 * (2 * p + spin) + x]!, c);
    return out;
  };
  const rowOperator = (w: readonly number[], other: readonly number[], bitsOfRow: readonly number[]) => {
    const [s, r, m, sign] = bitsOfRow as [number, number, number, number];
    const out = zeros(4 ** orbitals);
    for (const sigma of [0, 1]) {
      for (const x of [0, 1]) {
        const odd = (x & r) ^ (sigma & m) ^ sign;
        const product = times(gamma(w, sigma, x), gamma(other, sigma ^ s, x ^ r));
        addScaled(out, product, 0, odd ? -0.25 : 0.25);
      }
    }
    return out;
  };
  const one = identity(4 ** orbitals);
  const out = zeros(one.n);
  addScaled(out, one, document.constant);
  for (let i = 0; i < table!.length; i += 5) {
    const [t, face, index, n, from] = table!.slice(i, i + 5) as [number, number, number, number, number];
    const first = counts!.slice(0, t).reduce((sum, x) => sum + x, 0);
    const lambda = sizes.outerLambda! * outer[index]!;
    const probability = drawn(
      innerKeep!.slice(from, from + 2 ** n),
      innerAlternate!.slice(from, from + 2 ** n),
      bits.innerKeep!,
    );
    const rows = Array.from({ length: counts![t]! }, (_, k) => {
      const j = first + k;
      const own = flags!.slice(j * width, (j + 1) * width);
      const bitsOfRow = [0, 1, 2, 3].map((bit) => own[bit]! ^ (face === 1 ? own[6 + bit]! : 0));
      const w = vector(u!, j);
      const isPair = own[4] === 1;
      return { isPair, row: rowOperator(w, isPair ? vector(v!, pairRow!.indexOf(j)) : w, bitsOfRow) };
    });
    for (const second of paired![t] === 1 ? [false, true] : [false]) {
      const b = zeros(one.n);
      for (const [k, { isPair, row }] of rows.entries()) {
        addScaled(b, row, (second && isPair ? -1 : 1) * probability[k]!);
      }
      if (t === sizes.items! - 1) {
        addScaled(out, b, lambda);
        continue;
      }
      const share = (signs![t]! * (second ? -1 : 1) * lambda) / (paired![t] === 1 ? 2 : 1);
      addScaled(out, times(dagger(b), b), 2 * share);
      addScaled(out, one, -share);
    }
  }
  const vectors = take('vector_angles');
  const charges = Array.from({ length: sizes.vectors! }, (_, m) =>
    rowOperator(vector(vectors, m), vector(vectors, m), [0, 1, 0, 0]),
  );
  const [a, b, sign] = [take('product_first'), take('product_second'), take('product_sign')];
  for (const [i, m] of a.entries()) {
    const share = sign[i]! * sizes.outerLambda! * outer[sizes.firstProduct! + i]!;
    const [x, y] = [charges[m]!, charges[b[i]!]!];
    const scale = m === b[i]! ? share : share / 2;
    addScaled(out, times(x, y), scale);
    addScaled(out, times(y, x), scale);
    if (m === b[i]!) addScaled(out, one, -share);
  }
  return out;
}

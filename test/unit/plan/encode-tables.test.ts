import { beforeAll, describe, expect, it } from 'vitest';
import type { IntegralSet } from '../../../core/integrals';
import type { InputError } from '../../../core/job';
import { encodeTables, hamiltonianOf } from '../../../core/plan';
import { fermiWindow } from '../../../core/plan/encode-tables/levels';
import { programOperator, sectorBasis } from '../../../core/verify';
import { difference, matrixOf, operatorNorm, restrict } from '../encode/fock-space';
import { ctx, load, request, roundTrip, shifted } from './encode-tables-support';

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
  'compressed/separate/swap-layers/optimised/clean',
];

describe('exported tables of the triplet form', () => {
  it.each(VARIANTS)('%s: read back they are H within the realised bound', async (name) => {
    const hamiltonian = hamiltonianOf(atom, request(name, TERMS));
    for (const bits of ['auto', 9] as const) {
      const { document, stored, tables } = await roundTrip(atom, request(name, { ...TERMS, bits }));
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

import { beforeAll, describe, expect, it } from 'vitest';
import { loadInputs, openInputs } from '../../../app/cli/inputs';
import { parseVariant } from '../../../core/encode';
import type { IntegralSet } from '../../../core/integrals';
import { readNpy } from '../../../core/integrals/readers/npy';
import { InputError, inlineContext } from '../../../core/job';
import { hamiltonianOf } from '../../../core/plan';
import { encodeTables, type TablesDocument } from '../../../core/plan/encode-tables';
import { fermiWindow } from '../../../core/plan/encode-tables-levels';
import { npyBytes } from '../../../core/plan/encode-tables-npy';
import { readTables } from '../../../core/plan/encode-tables-read';
import { programOperator, sectorBasis } from '../../../core/verify';
import { difference, matrixOf, operatorNorm, restrict } from '../encode/fock-space';

const ctx = inlineContext();
let atom: IntegralSet;
beforeAll(async () => {
  const inputs = await openInputs({ files: ['test/fixtures/sets/f_sto3g_2p'], recipe: null }, ctx);
  atom = await loadInputs(inputs, 'all', 'throw', ctx);
});

const TERMS = ['sf', 'so1', 'somf', 'so2', 'ss'] as const;

function request(variant: string, change: object = {}) {
  return {
    terms: TERMS,
    electrons: null,
    occupations: null,
    target: { value: 5, unit: 'cm-1' as const, meaning: 'level' as const },
    variant: parseVariant(variant),
    threshold: 0,
    bits: 'auto' as const,
    overlaps: [1],
    qubitsMax: null,
    ...change,
  };
}

/** As another program would get them: JSON text, and the bytes of each .npy file. */
async function throughFiles(
  document: TablesDocument,
  arrays: Awaited<ReturnType<typeof encodeTables>>['arrays'],
) {
  const found = new Map<string, ArrayLike<number>>();
  for (const array of arrays) {
    const bytes = npyBytes(array);
    const source = {
      path: `${array.name}.npy`,
      size: bytes.length,
      read: async (offset: number, length: number) => bytes.slice(offset, offset + length),
    };
    const { shape, data } = await readNpy(source, ctx);
    expect(shape).toEqual(array.shape);
    found.set(array.name, data);
  }
  return readTables(JSON.parse(JSON.stringify(document)) as TablesDocument, found);
}

const VARIANTS = [
  'triplet/joint/swap-layers/none/clean',
  'triplet/joint/swap-layers/median/clean',
  'triplet/separate/index/none/clean',
  'triplet/separate/swap-layers/median/clean',
  'compressed/separate/swap-layers/optimised/clean',
];

describe('exported tables', () => {
  it.each(VARIANTS)('%s: read back they are H within the realised bound', async (name) => {
    const hamiltonian = hamiltonianOf(atom, request(name));
    for (const bits of ['auto', 9] as const) {
      const { document, arrays } = await encodeTables(atom, request(name, { bits }), ctx);
      const program = await throughFiles(document, arrays);
      const basis = sectorBasis(2 * program.orbitals, hamiltonian.electrons);
      const operator = programOperator(program, basis);
      for (let i = 0; i < operator.n; i++) operator.re[i * operator.n + i]! += program.constant;
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
    const { document, arrays } = await encodeTables(atom, request(VARIANTS[3]!), ctx);
    const rows = arrays.find(({ name }) => name === 'row_address')!.data.length;
    expect(document.sizes.rows).toBe(rows);
    expect(arrays.map(({ name }) => name)).toEqual(document.arrays.map(({ name }) => name));
    const program = await throughFiles(document, arrays);
    const total =
      program.oneBody.reduce((sum, row) => sum + row.faces[0]!.weight, 0) +
      program.items.reduce((sum, item) => sum + item.lambda.reduce((a, b) => a + b, 0), 0);
    expect(total).toBeCloseTo(document.lambda.total, 9);
  });

  it('are refused where they do not fit, or do not exist', async () => {
    const { document, arrays } = await encodeTables(atom, request(VARIANTS[2]!), ctx);
    const map = new Map(arrays.map(({ name, data }) => [name, data as ArrayLike<number>]));
    map.set('row_flags', [1, 2, 3]);
    expect(() => readTables(document, map)).toThrow(InputError);
    const code = async (variant: string, change: object = {}) =>
      encodeTables(atom, request(variant, change), ctx).catch((error: InputError) => error.toProblem().code);
    expect(await code('sparse/-/index/none/clean')).toBe('no-tables');
    expect(await code('spinor/separate/index/median/clean')).toBe('no-tables');
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

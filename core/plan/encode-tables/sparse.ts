import { encodedSparseProgram, sparseStep, sparseTables } from '../../circuit';
import type { SparseProgram, TermKind } from '../../encode';
import type { Mu } from '../../hamiltonian';
import { realisedSparseRounding, windowOfSparseProgram } from '../../verify';
import { type ArrayLayout, byRow, sumOf, whole } from './arrays';
import { COMMON_CONVENTIONS } from './conventions';
import type { StoredTables, TablesForm } from './form';

const ARRAYS: readonly ArrayLayout[] = [
  {
    name: 'kinds',
    type: '|u1',
    shape: ['kinds', 6],
    meaning:
      'kinds of rows: 1 for strings; flags of strings, else 1 where I is antisymmetric; mu; nu, 4 for none; 1 where shared; 1 where exchanged',
  },
  { name: 'row_kind', type: '|u1', shape: ['rows'], meaning: 'kind of each row' },
  { name: 'row_orbitals', type: '<u2', shape: ['rows', 4], meaning: 'p, q, r, s of each row' },
  { name: 'row_negative', type: '|u1', shape: ['rows'], meaning: '1 where the sign of the row is -1' },
  { name: 'keep', type: '<u4', shape: ['buckets'], meaning: 'alias table over the rows: keep values' },
  { name: 'alternate', type: '<u4', shape: ['buckets'], meaning: 'alias table over the rows: alternates' },
];

/** Columns of the kinds. */
const COLUMNS = 6;
const NO_NU = 4;

export const SPARSE: TablesForm<'sparse'> = {
  form: 'sparse',
  conventions: {
    ...COMMON_CONVENTIONS,
    hamiltonian:
      'H = constant + sum over the rows of sizes.outerLambda * probability * sign * row, in the sector of the given electrons where a symmetry shift was taken',
    pairs:
      'R(kind, mu; p, q) = 1/4 * sum over spin sigma and x of (-1)^(x*r xor sigma*m xor c) * i * gamma_(p sigma x) gamma_(q, sigma xor s, x xor r); s = 1 for mu = x, y; m = 1 for mu = y, z; r = 1 xor [antisymmetric] xor [mu = y]; c = 1 for symmetric y; gamma_(.0) = a + a^dagger, gamma_(.1) = -i(a - a^dagger). A row with nu is (R_I R_J + R_J R_I)/2, R_I = R(antisymmetric or symmetric, mu; p, q), R_J = R(symmetric, nu; r, s); without nu it is R_I. Shared: (1 - sizes.otherShare) of that, plus sizes.otherSign * sizes.otherShare of the same with mu and nu exchanged. Exchanged: half of that, plus half of the same with mu and nu exchanged. mu and nu are 0, x, y, z = 0 to 3.',
    strings:
      'a row of strings is 1/8 * sum over sigma, x, y of (-1)^(m*sigma + r1*x + r2*y) * (i gamma_(p sigma x) gamma_(q, sigma xor s1, x xor r1)) (i gamma_(r, sigma xor t, y) gamma_(s, sigma xor t xor s2, y xor r2)), m = s1 xor s2 xor r1 xor r2; flags = s1 + 2 s2 + 4 t + 8 r1 + 16 r2.',
    alias:
      'buckets = factor * 2^lowBits; bucket i is high * 2^lowBits + low. Of the numbers u below 2^g, g = sizes.uniformBits, it has those with factor * u from high * 2^g to below (high + 1) * 2^g, and gives those from high * 2^g + keep[i] * 2^(g - bits.keep) on to alternate[i], the others to row i. Probability = numbers u / 2^(g + lowBits), summed over buckets.',
  },
  arrays: ARRAYS,
  inWindow: windowOfSparseProgram,
  lambda: ({ weights }) => sumOf(weights),

  round(encoding, { bits: { keep }, phaseBits, policy }) {
    if (!encoding.sparseProgram || !encoding.shape.terms) return null;
    const given = encoding.sparseProgram();
    const step = sparseStep(encoding.shape.terms, { keepBits: keep, phaseBits }, policy);
    const tables = sparseTables(given, step.bits, step.refinement);
    const encoded = encodedSparseProgram(tables);
    const { address, share } = tables.layout;
    const { kinds } = given;
    return {
      bits: { keep, ...(share ? { share: share.bits } : {}) },
      sizes: {
        rows: given.weights.length,
        kinds: kinds.length,
        buckets: address.rows,
        factor: address.factor,
        lowBits: address.lowBits,
        uniformBits: address.uniformBits,
        outerLambda: given.weights.reduce((sum, weight) => sum + weight, 0),
        shared: share ? 1 : 0,
        otherShare: encoded.otherShare,
        otherSign: encoded.otherSign,
      },
      given,
      encoded,
      data: {
        kinds: byRow('|u1', kinds.length, COLUMNS, (i, target, at) => target.set(numbersOf(kinds[i]!), at)),
        row_kind: whole(given.kindOf),
        row_orbitals: whole(given.orbitalsOf),
        row_negative: whole(given.negative),
        keep: whole(tables.keep),
        alternate: whole(tables.alternate),
      },
      rounding: async () => realisedSparseRounding(given, encoded),
    };
  },

  async read(stored) {
    const { orbitals, constant } = stored;
    const table = await stored.array('kinds');
    const kinds = Array.from({ length: stored.size('kinds') }, (_, i) =>
      kindOf(stored, Array.from(table.subarray(i * COLUMNS, (i + 1) * COLUMNS))),
    );
    const otherSign = stored.size('otherSign');
    return {
      orbitals,
      constant,
      kinds,
      kindOf: Uint8Array.from(await stored.array('row_kind', 0, kinds.length)),
      orbitalsOf: Uint16Array.from(await stored.array('row_orbitals', 0, orbitals)),
      negative: Uint8Array.from(await stored.array('row_negative', 0, 2)),
      weights: await weightsOf(stored),
      otherShare: stored.size('otherShare'),
      otherSign: otherSign === -1 ? -1 : 1,
    };
  },
};

function numbersOf(kind: TermKind): number[] {
  if (kind.form === 'strings') return [1, kind.flags, 0, 0, 0, 0];
  const { antisymmetric, mu, nu, shared, exchanged } = kind;
  return [0, antisymmetric ? 1 : 0, mu, nu ?? NO_NU, shared ? 1 : 0, exchanged ? 1 : 0];
}

function kindOf(stored: StoredTables, numbers: readonly number[]): TermKind {
  const [strings, flags, mu, nu, shared, exchanged] = numbers as [
    number,
    number,
    number,
    number,
    number,
    number,
  ];
  if (strings === 1 && flags < 32) return { form: 'strings', flags };
  if (strings !== 0 || flags > 1 || mu > 3 || nu > NO_NU || shared > 1 || exchanged > 1) {
    stored.refuse('kinds', `a kind of ${numbers.join(', ')}`, 'flags of strings or of pairs');
  }
  return {
    form: 'pairs',
    antisymmetric: flags === 1,
    mu: mu as Mu,
    nu: nu === NO_NU ? null : (nu as Mu),
    shared: shared === 1,
    exchanged: exchanged === 1,
  };
}

/** Weights of the rows, hartree: what numbers of the uniform register lead to each. */
async function weightsOf(stored: StoredTables): Promise<SparseProgram['weights']> {
  const [count, buckets] = [stored.size('rows'), stored.size('buckets')];
  const [factor, lowBits, uniformBits] = ['factor', 'lowBits', 'uniformBits'].map((name) =>
    stored.size(name),
  ) as [number, number, number];
  const keepBits = stored.bits('keep');
  if (factor * 2 ** lowBits !== buckets || uniformBits < keepBits || count > buckets) {
    stored.refuse(
      'sizes',
      `${count} rows, ${buckets} buckets, factor ${factor}, ${lowBits} low bits, ${uniformBits} of the uniform number`,
      'a bucket a row or more, factor times a power of two; no fewer bits than of keep values',
    );
  }
  const keep = await stored.array('keep', 0, 2 ** keepBits);
  const alternate = await stored.array('alternate', 0, buckets);
  const total = stored.size('outerLambda');
  // Rows that serve two kinds get their parts one after the other, as the tables' own program does.
  const other = stored.size('otherShare');
  const parts = stored.size('shared') === 1 ? [other, 1 - other] : [1];
  const size = 2 ** uniformBits;
  const unit = 2 ** (uniformBits - keepBits);
  const weights = new Float64Array(count);
  const below = (bound: number) => Math.ceil(bound / factor);
  const add = (row: number, numbers: number) => {
    if (numbers <= 0) return;
    if (row >= count) stored.refuse('keep', `bucket ${row} drawn`, `rows below ${count}`);
    for (const part of parts) weights[row]! += total * ((numbers / (size * 2 ** lowBits)) * part);
  };
  for (let i = 0; i < buckets; i++) {
    const high = Math.floor(i / 2 ** lowBits);
    const middle = below(high * size + keep[i]! * unit);
    add(i, middle - below(high * size));
    add(alternate[i]!, below((high + 1) * size) - middle);
  }
  return weights;
}

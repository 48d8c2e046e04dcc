import { encodedProgram, roundedVector, type TripletTables, tripletTables } from '../../circuit';
import type { RowFace, TripletItem, TripletRow } from '../../encode';
import type { Mu } from '../../hamiltonian';
import { realisedRounding, windowOfProgram } from '../../verify';
import { type ArrayLayout, byRow, type Numbers, type Pieces, sumOf, whole } from './arrays';
import { COMMON_CONVENTIONS } from './conventions';
import type { StoredTables, TablesForm } from './form';
import { PRODUCTS_ARRAYS, PRODUCTS_CONVENTIONS, productsData, readProducts } from './products';
import {
  readSquares,
  SQUARES_ARRAYS,
  SQUARES_CONVENTIONS,
  type StoredItem,
  squaresData,
  weightOf,
} from './squares';

const ARRAYS: readonly ArrayLayout[] = [
  ...SQUARES_ARRAYS,
  { name: 'item_sign', type: '|i1', shape: ['items'], meaning: 'sign of each item, 1 or -1' },
  { name: 'row_flags', type: '|u1', shape: ['rows', 'flags'], meaning: 'bits of each row beside its angles' },
  { name: 'row_angles', type: '<u4', shape: ['rows', 'angles'], meaning: 'angle numbers of u' },
  {
    name: 'pair_row',
    type: '<u4',
    shape: ['pairRows'],
    meaning: 'positions of the rows with a second vector, ascending',
  },
  { name: 'pair_angles', type: '<u4', shape: ['pairRows', 'angles'], meaning: 'angle numbers of v' },
  ...PRODUCTS_ARRAYS,
];

/** Columns of the flags. */
const [S, R, M, SIGN, PAIR] = [0, 1, 2, 3, 4];
const FACE = 6;
/** Columns of an item with one face, with two. */
const FLAGS = [6, 10] as const;

/** Triplet and compressed factors. */
export const TRIPLET: TablesForm<'triplet'> = {
  form: 'triplet',
  conventions: {
    ...COMMON_CONVENTIONS,
    hamiltonian:
      'H = constant + sum of the one-body rows + sum over items and faces of sign * lambda * (2 B^dagger B - 1), in the sector of the given electrons. B = sum over the rows of probability * row. The last item holds the one-body rows: it is lambda * B itself.',
    paired:
      'a paired item is two such terms with lambda/2 each: the second has the opposite sign, and its A rows (flag 4) change sign',
    row: 'a row is (-1)^sign * 1/4 * sum over spin sigma and kind x of (-1)^f * i * gamma(u, sigma, x) gamma(v, sigma xor s, x xor r), f = x*r xor sigma*m; gamma(u, sigma, x) = sum_p u_p gamma_(p sigma x), gamma_(.0) = a + a^dagger, gamma_(.1) = -i(a - a^dagger). S rows have v = u; A rows (flag 4) have a second vector.',
    vectors:
      'u = (cos t0, sin t0 cos t1, ..., sin t0 ... sin t_(N-2)), t = (number + 1/2) * 2 pi / 2^rotation, rotation - 1 bits a number',
    flags:
      'columns 0-3 s, r, m, sign; 4 A row; 5 A row of a paired item; where items have a second face, 6-9 what changes of s, r, m, sign on it (xor)',
    ...PRODUCTS_CONVENTIONS,
    ...SQUARES_CONVENTIONS,
  },
  arrays: ARRAYS,
  inWindow: windowOfProgram,
  lambda: ({ items, oneBody, products }) =>
    sumOf(items.flatMap((item) => item.lambda)) + weightOf(oneBody) + sumOf(products?.lambda ?? []),

  round(encoding, { bits: { keep, rotation } }) {
    if (!encoding.program) return null;
    const bits = { keep, innerKeep: keep, rotation };
    const given = encoding.program();
    const tables = tripletTables(given, bits);
    const encoded = encodedProgram(given, tables);
    const squares = squaresData(
      tables,
      tables.items.map(({ lambda, paired, rows }) => ({ faces: lambda.length, paired, rows: rows.length })),
    );
    const rows = rowData(tables, squares.addresses);
    const products = productsData(tables);
    return {
      bits,
      sizes: { ...squares.sizes, ...rows.sizes, ...products.sizes },
      given,
      encoded,
      data: { ...squares.data, ...rows.data, ...products.data },
      rounding: (electrons, context) => realisedRounding(given, encoded, electrons, context),
    };
  },

  async read(stored) {
    const squares = await readSquares(stored);
    const rowsOf = await rowReader(stored);
    const sign = await stored.array('item_sign', -1, 2);
    const items = squares.items.map(
      (item, t): TripletItem => ({
        sign: sign[t] === -1 ? -1 : 1,
        paired: item.paired,
        lambda: item.faces.map((face) => face.lambda),
        rows: rowsOf(item),
      }),
    );
    const oneBody = items.pop()!;
    const products = await readProducts(stored, squares.outer, stored.bits('rotation') - 1);
    return {
      orbitals: stored.orbitals,
      constant: stored.constant,
      items,
      oneBody: oneBody.rows.map((row) => ({
        ...row,
        faces: row.faces.map((face) => ({ ...face, weight: face.weight * oneBody.lambda[0]! })),
      })),
      ...(products ? { products } : {}),
    };
  },
};

function rowData(tables: TripletTables, addresses: Uint32Array) {
  const angles = tables.orbitals - 1;
  const width = FLAGS[tables.hasFaces ? 1 : 0];
  const rowAt = (i: number) => tables.rows.get(addresses[i]!)!;
  const pairs = Uint32Array.from(addresses.keys()).filter((i) => rowAt(i).flags[PAIR]);
  const data: Record<string, Pieces> = {
    item_sign: whole(Int8Array.from(tables.items, (item) => item.sign)),
    row_flags: byRow('|u1', addresses.length, width, (i, target, at) => {
      const { flags } = rowAt(i);
      for (let f = 0; f < width; f++) target[at + f] = flags[f] ? 1 : 0;
    }),
    row_angles: byRow('<u4', addresses.length, angles, (i, target, at) => target.set(rowAt(i).u, at)),
    pair_row: whole(pairs),
    pair_angles: byRow('<u4', pairs.length, angles, (i, target, at) => target.set(rowAt(pairs[i]!).v, at)),
  };
  return { sizes: { angles, flags: width, pairRows: pairs.length }, data };
}

/** Makes the rows of an item. */
async function rowReader(stored: StoredTables): Promise<(item: StoredItem) => TripletRow[]> {
  const angles = stored.orbitals - 1;
  const width = stored.size('flags');
  if (stored.size('angles') !== angles || width !== FLAGS[stored.size('faces') - 1]) {
    stored.refuse(
      'sizes',
      `${stored.size('angles')} angles and ${width} flags a row`,
      `${angles}, one fewer than orbitals, and ${FLAGS.join(' or ')} by the faces`,
    );
  }
  const angleBits = stored.bits('rotation') - 1;
  const flags = await stored.array('row_flags', 0, 2);
  const numbers = await stored.array('row_angles', 0, 2 ** angleBits);
  const pairs = await stored.array('pair_row', 0, stored.size('rows'));
  const pairNumbers = await stored.array('pair_angles', 0, 2 ** angleBits);
  const secondOf = new Map(Array.from(pairs, (row, i) => [row, i]));
  const vector = (from: Numbers, i: number) =>
    roundedVector(Uint32Array.from(from.subarray(i * angles, (i + 1) * angles)), angleBits);
  return ({ first, rows, faces }) =>
    Array.from({ length: rows }, (_, j): TripletRow => {
      const i = first + j;
      const flag = (column: number, face: number): number =>
        flags[i * width + column]! ^ (face === 0 ? 0 : flags[i * width + FACE + column]!);
      const kind = flag(PAIR, 0) === 1 ? 'A' : 'S';
      const second = secondOf.get(i);
      if ((kind === 'A') !== (second !== undefined)) {
        stored.refuse('pair_row', `row ${i} ${second === undefined ? 'left out' : 'listed'}`, 'all A rows');
      }
      const u = vector(numbers, i);
      return {
        kind,
        u,
        v: second === undefined ? u : vector(pairNumbers, second),
        faces: faces.map(({ probabilities }, face): RowFace => {
          const mu = componentOf(flag(S, face), flag(M, face));
          checkKind(stored, kind, mu, flag(R, face));
          // The constant of a row's sign, 1 for S rows of σ^y, is folded into the stored bit.
          const constant = kind === 'S' && mu === 2 ? 1 : 0;
          return { mu, weight: probabilities[j]!, sign: (flag(SIGN, face) ^ constant) === 1 ? -1 : 1 };
        }),
      };
    });
}

/** s = [x or y], m = [y or z]. */
function componentOf(s: number, m: number): Mu {
  return s === 1 ? (m === 1 ? 2 : 1) : m === 1 ? 3 : 0;
}

/** r = 1 ⊕ [A row] ⊕ [y]. */
function checkKind(stored: StoredTables, kind: 'S' | 'A', mu: Mu, r: number): void {
  const expected = 1 ^ (kind === 'A' ? 1 : 0) ^ (mu === 2 ? 1 : 0);
  if (r !== expected) {
    stored.refuse('row_flags', `flag r = ${r} in an ${kind} row of component ${mu}`, String(expected));
  }
}

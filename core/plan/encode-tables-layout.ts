import type { TripletTables } from '../circuit';

/** One array of the exported tables. */
export interface TableArray {
  readonly name: string;
  readonly shape: readonly number[];
  readonly data: Float64Array | Uint32Array | Uint8Array | Int8Array;
  readonly meaning: string;
}

/** How the arrays are to be read; stands in the exported document itself. */
export const CONVENTIONS = {
  energies: 'hartree',
  arrays:
    'row-major (C order), little-endian, one NumPy .npy file (format 1.0) each; counts and positions from 0',
  spinOrbitals: 'mode 2p + spin, spin 0 = up; qubit = mode (Jordan-Wigner)',
  hamiltonian:
    'H = constant + sum of the one-body rows + sum over items and faces of sign * lambda * (2 B^dagger B - 1), in the sector of the given electrons. B = sum over the rows of probability * row. The last item holds the one-body rows: it is lambda * B itself.',
  paired:
    'a paired item is two such terms with lambda/2 each: the second has the opposite sign, and its A rows (flag 4) change sign',
  row: 'a row is (-1)^sign * 1/4 * sum over spin sigma and kind x of (-1)^f * i * gamma(u, sigma, x) gamma(v, sigma xor s, x xor r), f = x*r xor sigma*m; gamma(u, sigma, x) = sum_p u_p gamma_(p sigma x), gamma_(.0) = a + a^dagger, gamma_(.1) = -i(a - a^dagger). S rows have v = u; A rows (flag 4) have a second vector.',
  vectors:
    'u = (cos t0, sin t0 cos t1, ..., sin t0 ... sin t_(N-2)), t = (number + 1/2) * 2 pi / 2^rotationBits, rotationBits - 1 bits a number',
  flags:
    'columns 0-3 s, r, m, sign; 4 A row; 5 A row of a paired item; where items have a second face, 6-9 what changes of s, r, m, sign on it (xor)',
  addresses: 'row address = item * 2^rowBits + row in item; outer index = face * 2^itemBits + item',
  alias:
    'bucket i of 2^n keeps keep[i] of 2^keepBits units for i and gives the rest to alternate[i]: probability = units / 2^(n + keepBits). An inner table of n = itemSizeBits belongs to one outer index; innerTable lists outer index, n and where its buckets start in innerKeep and innerAlternate.',
} as const;

/** The tables as arrays. */
export function arraysOf(tables: TripletTables): TableArray[] {
  const { items, outer, inner, rows, rowAddresses, orbitals, rowBits } = tables;
  const angles = orbitals - 1;
  const width = rows.get(rowAddresses[0]!)!.flags.length - (tables.hasFaces ? 0 : 4);
  const pairs = rowAddresses.filter((address) => rows.get(address)!.flags[4]);
  const flags = new Uint8Array(rowAddresses.length * width);
  const u = new Uint32Array(rowAddresses.length * angles);
  const v = new Uint32Array(pairs.length * angles);
  rowAddresses.forEach((address, i) => {
    const row = rows.get(address)!;
    for (let f = 0; f < width; f++) flags[i * width + f] = row.flags[f] ? 1 : 0;
    u.set(row.u, i * angles);
  });
  pairs.forEach((address, i) => {
    v.set(rows.get(address)!.v, i * angles);
  });
  const lambda = new Float64Array(items.length * 2);
  items.forEach((item, t) => {
    lambda.set(item.lambda, 2 * t);
  });
  const innerTable = new Uint32Array(inner.length * 3);
  let buckets = 0;
  inner.forEach((table, i) => {
    innerTable.set([table.base / 2 ** rowBits, table.indexBits, buckets], 3 * i);
    buckets += table.keep.length;
  });
  const innerKeep = new Uint32Array(buckets);
  const innerAlternate = new Uint32Array(buckets);
  inner.forEach((table, i) => {
    innerKeep.set(table.keep, innerTable[3 * i + 2]!);
    innerAlternate.set(table.alternate, innerTable[3 * i + 2]!);
  });
  const list = (name: string, data: TableArray['data'], meaning: string, columns = 0): TableArray => ({
    name,
    shape: columns > 0 ? [data.length / columns, columns] : [data.length],
    data,
    meaning,
  });
  return [
    list(
      'item_lambda',
      lambda,
      'lambda of each item on each face before rounding, 0 for no face; hartree',
      2,
    ),
    list(
      'item_sign',
      Int8Array.from(items, (item) => item.sign),
      'sign of each item, 1 or -1',
    ),
    list(
      'item_paired',
      Uint8Array.from(items, (item) => (item.paired ? 1 : 0)),
      '1 where an item is paired',
    ),
    list(
      'item_faces',
      Uint8Array.from(items, (item) => item.lambda.length),
      'faces of each item',
    ),
    list(
      'item_rows',
      Uint32Array.from(items, (item) => item.rows.length),
      'rows of each item',
    ),
    list('outer_keep', outer.keep, 'alias table over the outer index: keep values'),
    list('outer_alternate', outer.alternate, 'alias table over the outer index: alternates'),
    list('inner_table', innerTable, 'inner alias tables: outer index, index bits, first bucket', 3),
    list('inner_keep', innerKeep, 'buckets of all inner alias tables: keep values'),
    list('inner_alternate', innerAlternate, 'buckets of all inner alias tables: alternates'),
    list('row_address', rowAddresses, 'address of each row, ascending'),
    list('row_flags', flags, 'bits of each row beside its angles', width),
    { name: 'row_angles', shape: [rowAddresses.length, angles], data: u, meaning: 'angle numbers of u' },
    list('pair_address', pairs, 'addresses of the rows with a second vector, ascending'),
    { name: 'pair_angles', shape: [pairs.length, angles], data: v, meaning: 'angle numbers of v' },
  ];
}

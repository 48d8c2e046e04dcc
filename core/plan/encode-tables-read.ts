import type { RowFace, TripletItem, TripletProgram, TripletRow } from '../encode';
import type { Mu } from '../hamiltonian';
import { InputError } from '../job';
import type { TablesDocument } from './encode-tables';

/** Columns of the flags. */
const [S, R, M, SIGN, PAIR] = [0, 1, 2, 3, 4];
const FACE = 6;

/**
 * The program that exported tables stand for, from the tables alone: probabilities from keep values and alternates,
 * vectors from angle numbers, spin components from flags.
 *
 * @param arrays - by the names of the document
 * @throws InputError `bad-tables` where document and arrays do not fit each other
 */
export function readTables(
  document: TablesDocument,
  arrays: ReadonlyMap<string, ArrayLike<number>>,
): TripletProgram {
  const take = (name: string): ArrayLike<number> => {
    const listed = document.arrays.find((array) => array.name === name);
    const data = arrays.get(name);
    const expected = listed?.shape.reduce((product, extent) => product * extent, 1);
    if (!data || data.length !== expected) {
      throw badTables(
        `array ${name} of ${data?.length ?? 0} numbers`,
        `${expected ?? 'some'} numbers, as its shape says`,
      );
    }
    return data;
  };
  const { orbitals, sizes, bits } = document;
  const { itemBits, rowBits } = sizes;
  const sign = take('item_sign');
  const paired = take('item_paired');
  const faces = take('item_faces');
  const counts = take('item_rows');
  const outer = probabilities(
    take('outer_keep'),
    take('outer_alternate'),
    0,
    take('outer_keep').length,
    bits.keep,
  );
  const inner = innerProbabilities(
    take('inner_table'),
    take('inner_keep'),
    take('inner_alternate'),
    bits.innerKeep,
  );
  const addresses = take('row_address');
  const flags = take('row_flags');
  const width = flags.length / addresses.length;
  const angles = take('row_angles');
  const pairAddresses = take('pair_address');
  const pairAngles = take('pair_angles');
  const total = Array.from(take('item_lambda')).reduce((sum, x) => sum + x, 0);
  const secondOf = new Map(Array.from(pairAddresses, (address, i) => [address, i]));
  const numAngles = orbitals - 1;
  const vector = (numbers: ArrayLike<number>, i: number): Float64Array => {
    const out = new Float64Array(orbitals);
    let product = 1;
    for (let p = 0; p < numAngles; p++) {
      const theta = ((numbers[i * numAngles + p]! + 0.5) * 2 * Math.PI) / 2 ** bits.rotation;
      out[p] = product * Math.cos(theta);
      product *= Math.sin(theta);
    }
    out[numAngles] = product;
    return out;
  };

  let at = 0;
  const items = Array.from({ length: sign.length }, (_, t): TripletItem => {
    const tables = Array.from({ length: faces[t]! }, (_, face) => inner.get(face * 2 ** itemBits + t));
    const rows = Array.from({ length: counts[t]! }, (_, j): TripletRow => {
      const i = at++;
      if (addresses[i] !== t * 2 ** rowBits + j) {
        throw badTables(`row address ${addresses[i]}`, `${t * 2 ** rowBits + j}, the next one of item ${t}`);
      }
      const flag = (column: number, face: number): number =>
        face === 0
          ? flags[i * width + column]!
          : flags[i * width + column]! ^ flags[i * width + FACE + column]!;
      const kind = flag(PAIR, 0) === 1 ? 'A' : 'S';
      const u = vector(angles, i);
      const second = secondOf.get(addresses[i]!);
      return {
        kind,
        u,
        v: kind === 'S' || second === undefined ? u : vector(pairAngles, second),
        faces: tables.map((table, face): RowFace => {
          const mu = componentOf(flag(S, face), flag(M, face));
          checkKind(kind, mu, flag(R, face));
          // The constant of a row's sign, 1 for S rows of σ^y, is folded into the stored bit.
          const constant = kind === 'S' && mu === 2 ? 1 : 0;
          return { mu, weight: table?.[j] ?? 0, sign: (flag(SIGN, face) ^ constant) === 1 ? -1 : 1 };
        }),
      };
    });
    return {
      sign: sign[t] as 1 | -1,
      paired: paired[t] === 1,
      lambda: Array.from({ length: faces[t]! }, (_, face) => total * outer[face * 2 ** itemBits + t]!),
      rows,
    };
  });
  const oneBody = items.pop()!;
  return {
    orbitals,
    constant: document.constant,
    items,
    oneBody: oneBody.rows.map((row) => ({
      ...row,
      faces: row.faces.map((face) => ({ ...face, weight: face.weight * oneBody.lambda[0]! })),
    })),
  };
}

/** s = [x or y], m = [y or z]. */
function componentOf(s: number, m: number): Mu {
  return s === 1 ? (m === 1 ? 2 : 1) : m === 1 ? 3 : 0;
}

/** r = 1 ⊕ [A row] ⊕ [y]. */
function checkKind(kind: 'S' | 'A', mu: Mu, r: number): void {
  const expected = 1 ^ (kind === 'A' ? 1 : 0) ^ (mu === 2 ? 1 : 0);
  if (r !== expected) throw badTables(`flag r = ${r} in an ${kind} row of component ${mu}`, String(expected));
}

/** What each of `size` buckets from `from` is drawn with. */
function probabilities(
  keep: ArrayLike<number>,
  alternate: ArrayLike<number>,
  from: number,
  size: number,
  keepBits: number,
): Float64Array {
  const units = new Float64Array(size);
  const bucket = 2 ** keepBits;
  for (let i = 0; i < size; i++) {
    const target = alternate[from + i]!;
    if (target >= size) throw badTables(`alternate ${target}`, `below ${size}`);
    units[i]! += keep[from + i]!;
    units[target]! += bucket - keep[from + i]!;
  }
  return units.map((x) => x / (size * bucket));
}

function innerProbabilities(
  table: ArrayLike<number>,
  keep: ArrayLike<number>,
  alternate: ArrayLike<number>,
  keepBits: number,
): Map<number, Float64Array> {
  const found = new Map<number, Float64Array>();
  for (let i = 0; i < table.length; i += 3) {
    const [index, n, from] = [table[i]!, table[i + 1]!, table[i + 2]!];
    found.set(index, probabilities(keep, alternate, from, 2 ** n, keepBits));
  }
  return found;
}

function badTables(found: string, expected: string): InputError {
  return new InputError({
    code: 'bad-tables',
    where: 'tables of an encoding',
    found,
    expected,
    mend: 'Write them again with "encode".',
  });
}
